package report

import (
	"math"
	"strings"
	"testing"

	"rungproof/calib"
	"rungproof/calib/decision"
)

// riskPlan is the arrival case judged by risk.
func riskPlan(t testing.TB) string {
	return replaced(t, htmlRead(t, "arrival.toml"), `rule = "guarded"`, "rule = \"risk\"\nmax_false_accept = \"2 %\"")
}

// Every rule is stated with the figure, the decisions, the method and the summary.
func TestEachRuleIsStated(t *testing.T) {
	arrival := htmlRead(t, "arrival.toml")
	for _, x := range []struct{ plan, short, method, place string }{
		{arrival, "guarded acceptance, w = U.", "Guarded acceptance with w = U:", "by more than the guard band"},
		{replaced(t, arrival, `rule = "guarded"`, "rule = \"guarded\"\nguard = 0.83"), "guarded acceptance, w = 0.83·U.", "Guarded acceptance with w = 0.83·U:", "by more than the guard band"},
		{replaced(t, arrival, `rule = "guarded"`, `rule = "simple"`), "simple acceptance.", "Simple acceptance: a step passes", "beyond its limit."},
		{replaced(t, arrival, `rule = "guarded"`, "guard = 0"), "simple acceptance.", "Simple acceptance: a step passes", "beyond its limit."},
		{riskPlan(t), "a risk of false acceptance of 2 % at most.", "with a probability of 2 % at most (the specific consumer&#39;s risk", "with little risk of being within"},
	} {
		e := htmlEvaluate(t, x.plan, htmlRead(t, "arrival.csv"))
		page := htmlOf(t, e, nil)
		if caption := errorsFigure(e).caption; !strings.Contains(caption, x.short) {
			t.Errorf("the caption lacks %q: %s", x.short, caption)
		}
		for part, want := range map[string]string{section(page, "decisions", "inputs"): x.short, section(page, "method", "cautions"): x.method,
			page[:strings.Index(page, "</header>")]: x.place, Text(e, false): "\nRule: " + x.short + " At "} {
			if !strings.Contains(part, want) {
				t.Errorf("%q is missing in %.300s", want, part)
			}
		}
	}
}

func TestLimitedGainsStateTheirRule(t *testing.T) {
	text := replaced(t, riskPlan(t), "[detector.limits]", "[detector.limits]\ngain = \"1 %\"")
	page := htmlOf(t, htmlEvaluate(t, text, htmlRead(t, "arrival.csv")), nil)
	if want := "Judged by the rule of the steps: a risk of false acceptance of 2 % at most."; !strings.Contains(section(page, "gains", "steps"), want) {
		t.Errorf("the gains lack %q", want)
	}
	if strings.Contains(section(htmlPage(t, "arrival"), "gains", "steps"), "Judged by the rule") {
		t.Error("gains without a limit are said to be judged")
	}
}

// The zone is the acceptance limit over the limit. By ILAC-G8:09/2019, 4.2, it is
// 1 − U/T for w = U and 1 for simple acceptance; by a risk p on one side it is
// 1 − z·u/T, with z = 2.0537 for 2 % (standard normal table).
func TestZoneOfAcceptanceOfEachRule(t *testing.T) {
	arrival := htmlRead(t, "arrival.toml")
	for plan, band := range map[string]func(*figureJudged) float64{
		arrival: func(p *figureJudged) float64 { return p.U },
		replaced(t, arrival, `rule = "guarded"`, `rule = "simple"`): func(*figureJudged) float64 { return 0 },
		riskPlan(t): func(p *figureJudged) float64 { return p.U / 1.959964 * 2.053749 },
	} {
		steps := figureJudgedSteps(htmlEvaluate(t, plan, htmlRead(t, "arrival.csv")))
		for i := range steps {
			if p := &steps[i]; math.Abs(p.zone-(1-band(p))) > 2e-4 {
				t.Errorf("step %d: zone %g of the limit, want %g", i, p.zone, 1-band(p))
			}
		}
		if len(steps) != 52 {
			t.Errorf("%d judged steps, not 52", len(steps))
		}
	}
}

// Limits far below U leave no error that passes: a guard band wider than the limit.
func TestNoZoneWhereNothingCanPass(t *testing.T) {
	text := replaced(t, htmlRead(t, "one-amplitude.toml"), `limits = { reading = "3 %", range = "1 %" }`, `limits = { reading = "1 ppm", range = "1 ppm" }`)
	e := htmlEvaluate(t, text, htmlRead(t, "one-amplitude.csv"))
	for _, p := range figureJudgedSteps(e) {
		if p.zone != 0 {
			t.Errorf("a zone of %g where nothing can pass", p.zone)
		}
	}
	if caption := errorsFigure(e).caption; !strings.Contains(caption, "10 steps are without a zone") {
		t.Errorf("the caption does not say that there is no zone: %s", caption)
	}
	coarseFigures(t, e)
	page := section(htmlOf(t, e, nil), "decisions", "inputs")
	if strings.Count(page, ">none can pass</td>") != 10 || !strings.Contains(page, "not even an error of zero would be accepted") || strings.Contains(page, "NaN") {
		t.Errorf("the decisions do not say that none can pass: %s", page)
	}
	if text := Text(e, false); !strings.Contains(text, "no error accepted") || strings.Contains(text, "NaN") {
		t.Errorf("the summary does not say that none can pass: %s", text)
	}
}

// A step that fails for something beside its error has no risk by its error.
func TestRiskOfAnOutcomeThatTheErrorDoesNotDecide(t *testing.T) {
	s := calib.StepResult{Outcome: decision.Fail}
	*(*float64)(&s.Error), *(*float64)(&s.Limit), *(*float64)(&s.Acceptance), *(*float64)(&s.Risk) = 0.5, 1, 0.9, 0.999
	if got := riskOf(&s); got != "" {
		t.Errorf("a risk of %s", got)
	}
	if s.Outcome = decision.Pass; riskOf(&s) != "over 99.99 %" && riskOf(&s) != "99.90 %" {
		t.Errorf("a risk of %q, want that of the result", riskOf(&s))
	}
}

func TestProbabilities(t *testing.T) {
	for p, want := range map[float64]string{0: "under 0.01 %", 0.00012: "0.01 %", 0.0227: "2.3 %", 0.5: "50.0 %", 0.97725: "97.7 %", 0.9987: "99.87 %", 1: "over 99.99 %"} {
		if got := probability(p); got != want {
			t.Errorf("probability(%g) is %q, want %q", p, got, want)
		}
	}
}
