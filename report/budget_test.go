package report

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"rungproof/calib"
	"rungproof/calib/uncertainty"
)

// withBudgets fills the budgets of an evaluation.
func withBudgets(t testing.TB, e *calib.Evaluation) *calib.Evaluation {
	t.Helper()
	budgets, err := e.Budgets()
	if err != nil {
		t.Fatal(err)
	}
	e.Result.Budgets = budgets
	return e
}

// narrow fails where a line has more than 80 columns.
func narrow(t testing.TB, text string) {
	t.Helper()
	for _, line := range strings.Split(text, "\n") {
		if n := len([]rune(line)); n > 80 {
			t.Errorf("%d columns: %q", n, line)
		}
	}
}

// madeBudget has lines whose squares are 9, 16 and 0.0001 of 25.0001: u = 5.00001 V.
func madeBudget(names ...string) *calib.Budget {
	lines := []uncertainty.Line{
		{Name: names[0], Value: 10, U: 0.3, Unit: "Ω", Sensitivity: 10, DOF: math.Inf(1)},
		{Name: names[1], Value: 0, U: 0.0004, Unit: "1", Sensitivity: -1e4, DOF: 12, Shape: uncertainty.Student},
		{Name: names[2], Value: 0, U: 2e-5, Unit: "1/K", Sensitivity: 500, Shape: uncertainty.Rectangular},
	}
	return &calib.Budget{Of: "offset", Value: 1, Unit: "V", Budget: uncertainty.New(lines, 0.95),
		Improve: []calib.Improvement{{Name: names[1], From: 0.0005, To: 0.0001, Unit: "1", After: 0.9}, {Name: names[0], From: 0.3, To: 0.06, Unit: "Ω", Value: 10, After: 10.3}}}
}

func TestBudgetText(t *testing.T) {
	long := "lead from the box to the detector's input, third contact"
	text := Budget(madeBudget("top", long, "box, temperature coefficient"))
	narrow(t, text)
	// k = 2.06: Student's t of 29 degrees is 2.045, of 25 is 2.060 (GUM, Table G.2);
	// (25.0001/16)²·12 = 29.3 effective degrees.
	for _, want := range []string{
		"offset: (1 ± 10) V\nu = 5.0 V; U = 10 V (95 %, k = 2.04: Student's t, 29.3 effective degrees of\n  freedom)\n",
		"input                         u of it    distribution  dof   u from it     share\n",
		long + "\n                              400 ppm    scaled t      12    4.0 V        64.0 %\n",
		"top                           300 mΩ     normal        inf   3.0 V        36.0 %\n",
		"1 more, under 0.05 %                                                       0.0 %\n",
		long + " known to u = 0.010 %\n  instead of 0.050 %: U would be 0.90 V instead of 10 V.\n",
		"top known to u = 60 mΩ (0.60 %) instead of 300 mΩ: U would stay at 10 V.\n",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("%q is missing in\n%s", want, text)
		}
	}
}

func TestBudgetsOfTheCasesFitTheTerminal(t *testing.T) {
	for _, name := range htmlCases {
		for _, b := range withBudgets(t, htmlCase(t, name)).Result.Budgets {
			narrow(t, Budget(b))
		}
	}
}

// What a figure or a table leaves out stands in its sum: the shares add up to one.
func TestLargestLinesAndOthersAddUp(t *testing.T) {
	for _, name := range htmlCases {
		for _, b := range withBudgets(t, htmlCase(t, name)).Result.Budgets {
			for _, most := range []int{1, 3, figureMostBars, math.MaxInt} {
				lines, rest := largest(b, figureLeastBar, most)
				sum, last := rest.share, math.Inf(1)
				for _, l := range lines {
					if sum += l.Share; l.Share > last {
						t.Errorf("%s of %s: %s comes after a smaller one", b.Of, name, l.Name)
					}
					last = l.Share
				}
				if math.Abs(sum-1) > 1e-9 || len(lines)+rest.count != len(b.Lines) {
					t.Errorf("%s of %s, %d at most: shares of %g in all, %d and %d of %d lines", b.Of, name, most, sum, len(lines), rest.count, len(b.Lines))
				}
			}
		}
	}
}

func TestBudgetFigure(t *testing.T) {
	e := figureCase(t, "arrival")
	if budgetFigure(e) != nil {
		t.Error("a figure without budgets")
	}
	withBudgets(t, e)
	s := budgetFigure(e)
	if len(s.panels) != 3 || s.panels[0].head != "Gain, from 1: (0.276 ± 0.076) %, k = 1.96" ||
		s.panels[0].foot != "amplitude 20 V five times better known: U would be 0.042 % instead of 0.076 %" {
		t.Errorf("%d panels, the first says %q and %q", len(s.panels), s.panels[0].head, s.panels[0].foot)
	}
	if got, want := figureNames(coarseFigures(t, e)), "readings errors unexplained joint evidence residuals budget"; got != want {
		t.Errorf("figures %s, want %s", got, want)
	}
	for _, b := range e.Result.Budgets {
		b.U = math.NaN()
	}
	if budgetFigure(e) != nil {
		t.Error("a figure of nothing that can be drawn")
	}
}

// Names of any length are drawn, in two lines at most.
func TestBudgetFigureOfLongNames(t *testing.T) {
	e := figureCase(t, "arrival")
	long := strings.Repeat("extraordinarily long name ", 10)
	e.Result.Budgets = []*calib.Budget{madeBudget(long, strings.Repeat("Ω", 200), "lead from the box to the detector's input")}
	for _, f := range coarseFigures(t, e) {
		if len(f.PNG) == 0 {
			t.Error("nothing drawn")
		}
	}
	for name, want := range map[string]string{
		"amplitude 20 V": "amplitude 20 V",
		"lead from the box to the detector's input": "lead from the box to the\ndetector's input",
		strings.Repeat("Ω", 40):                     strings.Repeat("Ω", 30) + "\n" + strings.Repeat("Ω", 10),
		strings.Repeat("Ω", 70):                     strings.Repeat("Ω", 30) + "\n" + strings.Repeat("Ω", 29) + "…",
	} {
		if got := figureTwoLines(name); got != want {
			t.Errorf("%q is written %q, want %q", name, got, want)
		}
	}
}

func TestHTMLHasTheBudgets(t *testing.T) {
	e := withBudgets(t, htmlCase(t, "arrival"))
	page := htmlOf(t, e, nil)
	skeleton(t, page)
	part := section(page, "budgets", "standards")
	for _, want := range []string{"<caption>Gain, from 1: (0.276\u00a0±\u00a00.076)\u00a0%</caption>", "<caption>Offset: ", "<caption>Series resistance: ",
		`<tr class="sum"><th scope="row" class="words" data-head="input">combined, u</th>`, "k = 1.96", ">normal distribution</td>", ">∞</td>", ">100.0\u00a0%</td>",
		"Improve first: amplitude 20\u00a0V known to u = 0.57\u00a0mV", ">rectangular</td>"} {
		if !strings.Contains(part, want) {
			t.Errorf("the budgets lack %q", want)
		}
	}
	if n := strings.Count(part, `<tr class="sum">`); n != 6 {
		t.Errorf("%d rows of sums, not two for each of three budgets", n)
	}
	if !strings.Contains(section(page, "method", "cautions"), "Welch–Satterthwaite") || !strings.Contains(section(page, "method", "cautions"), "EA-4/02 M:2022") {
		t.Error("the method does not name its sources")
	}
	if strings.Contains(htmlPage(t, "arrival"), `id="budgets"`) {
		t.Error("a section of budgets without any")
	}
	apart := htmlOf(t, withBudgets(t, htmlCase(t, "one-amplitude")), nil)
	if !strings.Contains(section(apart, "budgets", "standards"), "cannot be told apart") {
		t.Error("the budgets do not say that offset and series resistance cannot be told apart")
	}
}

// A name is text on the page, whatever it is.
func TestHTMLEscapesTheBudgets(t *testing.T) {
	e := htmlCase(t, "arrival")
	e.Result.Budgets = []*calib.Budget{madeBudget("<b>x", `"><img src=x>`, "{{.}}")}
	page := htmlOf(t, e, nil)
	skeleton(t, page)
	if strings.Contains(page, "<img src=x") || strings.Contains(page, "<b>x") {
		t.Error("a name of a budget's line came out as a tag")
	}
}

func TestMeasuresStandBesideOneAnother(t *testing.T) {
	m := measureFor(0.00076, "1")
	if got := fmt.Sprint(m.of(0.00076), ", ", m.of(0.00039)); got != "0.076 %, 0.039 %" {
		t.Errorf("written as %s", got)
	}
	m = measureFor(1.3e-3, "ohm")
	if got := fmt.Sprint(m.of(1.3e-3), ", ", m.of(8.3e-4)); got != "1.3 mΩ, 0.83 mΩ" {
		t.Errorf("written as %s", got)
	}
	if got := uncertain(2e-5, "1/K"); got != "20 ppm/K" {
		t.Errorf("written as %s", got)
	}
}
