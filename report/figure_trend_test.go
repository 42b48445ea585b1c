package report

import (
	"bytes"
	"encoding/base64"
	"image/png"
	"math"
	"regexp"
	"strings"
	"testing"
	"time"

	"rungproof/calib/trend"
)

// trendOf is the view of a history, as the program makes it.
func trendOf(t *testing.T, serial, of, unit string, limit float64, h trend.History) *TrendView {
	t.Helper()
	v := &TrendView{Serial: serial, Of: of, Unit: unit, Limit: limit, History: h, Verdicts: make([]string, len(h))}
	for i := range h {
		h[i].Entry, v.Verdicts[i] = int64(i+1), "pass"
	}
	var err error
	if v.Trend, err = trend.Of(h, trend.Options{}); err != nil {
		t.Fatal(err)
	}
	if !math.IsNaN(limit) {
		v.Reach = v.Trend.Reaches(limit, 0.95)
		if v.Advice, err = trend.Interval(h, trend.Options{}, limit, 0.95, 365*24*time.Hour); err != nil {
			t.Fatal(err)
		}
	}
	return v
}

func on(year int, value, u float64) trend.Point {
	return trend.Point{Time: time.Date(year, 6, 2, 0, 0, 0, 0, time.UTC), Value: value, U: u}
}

func left(p trend.Point) trend.Point { p.AsLeft = true; return p }

// Histories that are short, long, or odd.
func awkwardTrends(t *testing.T) []*TrendView {
	long := trend.History{}
	for i := range 200 {
		p := on(1990, 1e-4*math.Sin(float64(i)), 1e-4)
		p.Time = p.Time.AddDate(0, 2*i, 0)
		long = append(long, p)
	}
	return []*TrendView{
		trendOf(t, "one", "gain", "1", 0.01, trend.History{on(2024, 0.002, 0.0005)}),
		trendOf(t, "one without a limit", "offset", "V", math.NaN(), trend.History{on(2024, 2e-9, 1e-9)}),
		trendOf(t, "one of nothing", "offset", "V", 1e-6, trend.History{on(2024, 0, 0.1e-9)}),
		trendOf(t, "two", "gain", "1", 0.01, trend.History{on(2023, 0.001, 0.0005), on(2024, 0.002, 0.0005)}),
		trendOf(t, "found and left", "gain", "1", 0.01, trend.History{on(2024, 0.012, 0.0005), left(on(2024, 0, 0.0005))}),
		trendOf(t, "left first", "gain", "1", 0.01, trend.History{left(on(2023, 0, 0.0005)), on(2024, 0.001, 0.0005)}),
		trendOf(t, "beyond", "gain", "1", 0.01, trend.History{on(2022, 0.005, 0.0005), on(2023, 0.02, 0.0005), on(2024, 0.03, 0.0005)}),
		trendOf(t, "a distant limit", "gain", "1", 0.5, trend.History{on(2022, 0.001, 0.0005), on(2023, 0.0012, 0.0005), on(2024, 0.001, 0.0005)}),
		trendOf(t, "long", "100 µV", "1", 0.001, long),
	}
}

func TestTrendFiguresOfAwkwardHistories(t *testing.T) {
	views := awkwardTrends(t)
	files, err := trendFiles(views)
	if err != nil {
		t.Fatal(err)
	}
	if len(files) != len(views)+1 || files[len(views)].name != "fleet.html" {
		t.Fatalf("%d files of %d histories", len(files), len(views))
	}
	safe := regexp.MustCompile(`^trend-[A-Za-z0-9._-]+\.png$`)
	for _, f := range files[:len(views)] {
		if size, err := png.DecodeConfig(bytes.NewReader(f.content)); err != nil || size.Width != 1400 {
			t.Errorf("%s: %d pixels wide, %v", f.name, size.Width, err)
		}
		if !safe.MatchString(f.name) {
			t.Errorf("file name %q", f.name)
		}
	}
	if name := files[len(views)-1].name; name != "trend-long-100-uV.png" {
		t.Errorf("file name %q", name)
	}
}

// Serials that differ in what a file name cannot hold, or in capitals alone, keep a file each.
func TestTrendFilesHaveNamesOfTheirOwn(t *testing.T) {
	taken := map[string]int{}
	var names []string
	for _, serial := range []string{"A/1", "A:1", "a:1", "../../etc", "A-1-gain.png", "<b>", "é" + strings.Repeat("x", 300)} {
		name := trendName(&TrendView{Serial: serial, Of: "gain"}, taken)
		if strings.ContainsAny(name, `/\:<>`) || len(name) > 80 {
			t.Errorf("%q", name)
		}
		names = append(names, strings.ToLower(name))
	}
	for i, n := range names {
		for _, m := range names[:i] {
			if n == m {
				t.Errorf("%q is taken twice", n)
			}
		}
	}
}

func TestTrendOfOneDetectorHasNoOverview(t *testing.T) {
	files, err := trendFiles([]*TrendView{trendOf(t, "G7-0311", "gain", "1", 0.01, trend.History{on(2024, 0.002, 0.0005)})})
	if err != nil || len(files) != 1 || files[0].name != "trend-G7-0311-gain.png" {
		t.Fatalf("%d files, %v", len(files), err)
	}
}

func TestFleetPage(t *testing.T) {
	late := trendOf(t, "<script>alert(1)</script>", "gain", "1", 0.01, trend.History{on(2024, 0.001, 0.0005), on(2025, 0.001, 0.0005)})
	soon := trendOf(t, "G2 & co", "gain", "1", 0.01, trend.History{on(2023, 0.001, 0.0002), on(2024, 0.005, 0.0002), on(2025, 0.009, 0.0002)})
	never := trendOf(t, "G9", "gain", "1", math.NaN(), trend.History{on(2025, 0.001, 0.0005)})
	soon.Verdicts[2] = "conditional pass"
	page, err := fleetPage([]*TrendView{never, late, soon})
	if err != nil {
		t.Fatal(err)
	}
	text := string(page)
	for _, part := range []string{"&lt;script&gt;alert(1)&lt;/script&gt;", "G2 &amp; co", "conditional pass", "no limit stated",
		"2026-06-02, by the maximum", soon.Advice.Due.Format(time.DateOnly) + ", by the drift", "default-src 'none'", "size: A4"} {
		if !strings.Contains(text, part) {
			t.Errorf("the page has no %q", part)
		}
	}
	if strings.Contains(text, "<script") || strings.Contains(text, "http:") || strings.Contains(text, "https:") {
		t.Error("the page has a script or reaches for the network")
	}
	if a, b, c := strings.Index(text, "G2 &amp; co"), strings.Index(text, "&lt;script"), strings.Index(text, ">G9<"); a > b || b > c {
		t.Errorf("the order is not by due date: %d, %d, %d", a, b, c)
	}
	pictures := regexp.MustCompile(`data:image/png;base64,([A-Za-z0-9+/=]+)"`).FindAllStringSubmatch(strings.ReplaceAll(text, "&#43;", "+"), -1)
	if len(pictures) != 3 {
		t.Fatalf("%d pictures", len(pictures))
	}
	for _, p := range pictures {
		b, err := base64.StdEncoding.DecodeString(p[1])
		if err != nil {
			t.Fatal(err)
		}
		if _, err := png.Decode(bytes.NewReader(b)); err != nil {
			t.Error(err)
		}
	}
}

// What a figure spans: from the first result to the due date.
func TestTrendStretches(t *testing.T) {
	v := trendOf(t, "G3", "gain", "1", 0.01, trend.History{
		on(2020, 0.001, 0.0002), on(2021, 0.003, 0.0002), left(on(2021, 0, 0.0002)), on(2022, 0.002, 0.0002)})
	s := v.stretches()
	if len(s) != 2 {
		t.Fatalf("%d stretches", len(s))
	}
	points := v.Trend.Points
	ends := [][2]time.Time{{points[0].Time, points[2].Time}, {points[2].Time, v.Advice.Due}}
	for i, want := range ends {
		first, last := s[i].line[0].x, s[i].line[len(s[i].line)-1].x
		if first != float64(want[0].Unix()) || last != float64(want[1].Unix()) {
			t.Errorf("stretch %d is from %v to %v", i, first, last)
		}
		for k := range s[i].line {
			if !(s[i].low[k].y < s[i].line[k].y && s[i].line[k].y < s[i].high[k].y) {
				t.Errorf("stretch %d: the band does not hold the line at %v", i, s[i].line[k].x)
			}
			if k > 0 && s[i].line[k].x <= s[i].line[k-1].x {
				t.Errorf("stretch %d goes back at %v", i, s[i].line[k].x)
			}
		}
	}
}

func TestFigureDates(t *testing.T) {
	day := func(y, m, d int) float64 { return float64(time.Date(y, time.Month(m), d, 0, 0, 0, 0, time.UTC).Unix()) }
	for _, c := range []struct {
		low, high float64
		want      string
	}{
		{day(2018, 5, 1), day(2026, 7, 1), "2019 2020 2021 2022 2023 2024 2025 2026"},
		{day(2024, 5, 20), day(2025, 6, 15), "2024-07 2024-09 2024-11 2025-01 2025-03 2025-05"},
		{day(1975, 1, 1), day(2025, 1, 1), "1980 1990 2000 2010 2020"},
	} {
		var labels []string
		for _, tick := range (figureDates{}).Ticks(c.low, c.high) {
			if tick.Value < c.low || tick.Value > c.high {
				t.Errorf("a tick beyond the axis: %v", tick)
			}
			if tick.Label != "" {
				labels = append(labels, tick.Label)
			}
		}
		if got := strings.Join(labels, " "); got != c.want {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
}
