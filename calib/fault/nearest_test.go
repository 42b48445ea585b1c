package fault

import "testing"

func TestNearest(t *testing.T) {
	known := []string{"value", "tolerance", "u", "k", "dof", "shares", "standard", "series", "shunt", "tap"}
	for word, want := range map[string]string{
		"tolerence": "tolerance", // one letter changed
		"shunnt":    "shunt",     // one too many
		"sries":     "series",    // one missing
		"vlaue":     "value",     // two swapped
		"Tolerance": "tolerance", // capitals do not count
		"tap":       "tap",
		"xyz":       "",
		"capacity":  "",
		"":          "",
		"q":         "", // a wrong letter by itself is near to nothing
		"K":         "k",
	} {
		if got := Nearest(word, known); got != want {
			t.Errorf("%q: %q, want %q", word, got, want)
		}
	}
	if got := Nearest("tap", nil); got != "" {
		t.Errorf("of none known %q is the nearest", got)
	}
}

// The distances are those of the restricted form: a pair once swapped is not edited again, so that
// ca → abc takes three steps and not two (common practice).
func TestDistance(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{
		{"", "", 0}, {"", "abc", 3}, {"kitten", "sitting", 3}, {"ab", "ba", 1}, {"ca", "abc", 3}, {"µV", "uV", 1},
	} {
		if got, back := distance(c.a, c.b), distance(c.b, c.a); got != c.want || back != c.want {
			t.Errorf("%q to %q: %d, and back %d, want %d", c.a, c.b, got, back, c.want)
		}
	}
}
