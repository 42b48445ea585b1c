package report

import (
	"math"
	"strings"
	"testing"
)

func section(page, id, next string) string {
	return page[strings.Index(page, `<section id="`+id+`"`):strings.Index(page, `<section id="`+next+`"`)]
}

// 200 V peak-to-peak is 70.7 V rms (a sine's peak over √2), above what may be touched.
func TestHTMLPutsDangerIntoTheCautions(t *testing.T) {
	text := replaced(t, htmlRead(t, "arrival.toml"), `"20 V"`, `"200 V"`, `"19.986(8) V"`, `"199.86(8) V"`, `["100 mV"`, `["1 V", "100 mV"`)
	page := htmlOf(t, htmlEvaluate(t, text, perfectRows(t, text)), nil)
	if !strings.Contains(section(page, "cautions", "plan"), "touch voltage") || !strings.Contains(section(page, "findings", "gains"), "see <a href=\"#cautions\">") {
		t.Error("the cautions do not name the touch voltage, or nothing leads there from the findings")
	}
	if strings.Contains(section(page, "findings", "gains"), "touch voltage</b>") {
		t.Error("the touch voltage stands among the findings too")
	}
}

func TestHTMLSaysWhatTheVerdictComesFrom(t *testing.T) {
	text := htmlRead(t, "arrival.toml")
	limited := replaced(t, text, "[detector.limits]", "[detector.limits]\ngain = \"1 ppm\"")
	rows := perfectRows(t, text)
	for _, x := range []struct{ plan, rows, want string }{
		{text, rows, "All 52 steps pass. The one nearest to its limit is step"},
		{limited, rows, "range decides: it is off by"},
		{text, rows[:strings.Index(rows, "A50,")], "but 3 of 52 have no reading"},
		{text, strings.Replace(rows, "A52,-", "A52,-1", 1), "One of 52 steps decides: step A52"},
		{text[:strings.Index(text, "[detector.limits]")] + text[strings.Index(text, "[error.ohmmeter]"):], rows, "nothing is judged"},
	} {
		if page := htmlOf(t, htmlEvaluate(t, x.plan, x.rows), nil); !strings.Contains(page[:strings.Index(page, "</header>")], x.want) {
			t.Errorf("the verdict's sentence lacks %q: %s", x.want, page[strings.Index(page, "<header>"):strings.Index(page, "</header>")])
		}
	}
}

// ILAC-G8:09/2019: the printed bounds are < 2.5 % for w = U and < 50 % for
// w = 0; < 5 % for 0.83 U (U = 2u) and < 0.16 % for 1.5 U (from memory).
func TestChanceOfAWrongPass(t *testing.T) {
	twice := math.Erf(math.Sqrt2) // coverage of U = 2u
	for _, x := range []struct{ g, coverage, bound, atLeast float64 }{
		{1, 0.95, 0.025, 0.0249}, {1, twice, 0.025, 0.0227}, {0, 0.95, 0.5, 0.4999}, {0.83, twice, 0.05, 0.048}, {1.5, twice, 0.0016, 0.0013},
	} {
		if p := chanceOfWrongPass(x.g, x.coverage); p > x.bound+1e-12 || p < x.atLeast {
			t.Errorf("guard %g at %g: %g, not just under %g", x.g, x.coverage, p, x.bound)
		}
	}
}

func TestTypeset(t *testing.T) {
	for in, want := range map[string]string{
		"(-0.4 ± 3.8) nV":   "(−0.4\u00a0±\u00a03.8)\u00a0nV",
		"2026-03-12, B-3":   "2026-03-12, B-3",
		"up to 10 kΩ there": "up to 10\u00a0kΩ there",
		"10 Volts":          "10 Volts",
	} {
		if got := typeset(in); got != want {
			t.Errorf("typeset(%q) is %q, not %q", in, got, want)
		}
	}
}
