package report

// trendFiles are the figures of histories and, of several, an overview page.
func trendFiles(views []*TrendView) ([]file, error) {
	b, err := TrendJSON(views)
	return []file{{"trend.json", b}}, err
}
