package report

import (
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"rungproof/calib"
	"rungproof/calib/decision"
)

// figureSource is the plan of a case with some text replaced.
func figureSource(t testing.TB, name string, replace ...string) string {
	t.Helper()
	b, err := os.ReadFile("../calib/testdata/cases/" + name + ".toml")
	if err != nil {
		t.Fatal(err)
	}
	text := string(b)
	for i := 0; i < len(replace); i += 2 {
		if !strings.Contains(text, replace[i]) {
			t.Fatalf("the plan of %s has no %q", name, replace[i])
		}
		text = strings.Replace(text, replace[i], replace[i+1], 1)
	}
	return text
}

// figureRows are rows of readings in µV for steps 1 to n.
func figureRows(values ...float64) string {
	rows := "step,x [µV]\n"
	for i, v := range values {
		rows += fmt.Sprintf("%d,%g\n", i+1, v)
	}
	return rows
}

var figureTen = []float64{698, 352, 142, 70.4, 35.3, 14.2, 7.23, 3.7, 1.58, 0.88}

const figureBox = `"10 kΩ", "5 kΩ", "2 kΩ", "1 kΩ", "500 Ω", "200 Ω", "100 Ω", "50 Ω", "20 Ω", "10 Ω"`

func figureNames(figures []Figure) string {
	var names []string
	for _, f := range figures {
		names = append(names, strings.TrimSuffix(f.Name, ".png"))
	}
	return strings.Join(names, " ")
}

// Readings as they come from a bench on a bad day: each still has its figures.
func TestFiguresOfAwkwardPlans(t *testing.T) {
	for _, c := range []struct {
		name, plan, rows, figures, caption string // caption: what one of the captions must say
	}{
		{"a single step", figureSource(t, "one-amplitude", figureBox, `"10 kΩ"`), figureRows(698),
			"readings errors unexplained", "do not determine the line"},
		{"nothing but source off", figureSource(t, "one-amplitude", `"200 mV"`, `"0 V"`, `range     = "auto"`, `range = "10 µV"`), figureRows(.1, .2, .1, .1, .1, .2, .1, .1, .1, .1),
			"errors unexplained residuals", "no current flows"},
		{"every reading zero", figureSource(t, "one-amplitude"), figureRows(make([]float64, 10)...), "errors unexplained residuals", ""},
		{"a reading of zero", figureSource(t, "one-amplitude"), figureRows(698, 352, 142, 70.4, 35.3, 14.2, 7.23, 3.7, 1.58, 0),
			"readings errors unexplained joint evidence residuals", "1 step with nothing applied, or read as exactly zero"},
		{"nothing judged", figureSource(t, "one-amplitude", `limits = { reading = "3 %", range = "1 %" }`, ""), figureRows(figureTen...),
			"readings unexplained joint residuals", ""},
		{"steps without readings", figureSource(t, "one-amplitude"), figureRows(figureTen[:3]...), "readings errors unexplained joint residuals", ""},
		{"far from the limits", figureSource(t, "one-amplitude"), figureRows(698, 352, 142, 70.4, 35.3, 14.2, 7.23, 3.7, 1.58, 2.5),
			"readings errors unexplained joint evidence residuals", "An arrow stands for an error farther out"},
		{"offset a share of range", figureSource(t, "arrival", "[decision]", "[fit]\noffset = \"share of range\"\n[decision]"), figureRead(t, "arrival"),
			"readings errors unexplained joint evidence residuals", "each range has a line of its own"},
		{"a gain for each frequency", figureSource(t, "quadrature", "[decision]", "[fit]\ngain = \"per frequency\"\n[decision]"), figureRead(t, "quadrature"),
			"readings errors unexplained joint evidence residuals frequency", ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			figures := coarseFigures(t, figureEvaluation(t, c.plan, c.rows))
			if got := figureNames(figures); got != c.figures {
				t.Errorf("figures %s, want %s", got, c.figures)
			}
			said := false
			for _, f := range figures {
				said = said || strings.Contains(f.Caption, c.caption)
				if strings.Contains(f.Caption, "NaN") || strings.Contains(f.Caption, "Inf") {
					t.Errorf("%s: caption %q", f.Name, f.Caption)
				}
			}
			if !said {
				t.Errorf("no caption says %q", c.caption)
			}
		})
	}
}

func figureRead(t testing.TB, name string) string {
	b, err := os.ReadFile("../calib/testdata/cases/" + name + ".csv")
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

// Results with numbers that no one expects must not stop a report.
func TestFiguresOfSpoiltResults(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for name, spoil := range map[string]func(*calib.Result){
		"no steps":                    func(r *calib.Result) { r.Steps = nil },
		"one step":                    func(r *calib.Result) { r.Steps = r.Steps[:1] },
		"limits":                      func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { *(*float64)(&s.Limit) = nan }) },
		"no limits":                   func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { s.Limit = 0 }) },
		"errors":                      func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { *(*float64)(&s.Error) = nan }) },
		"infinite":                    func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { *(*float64)(&s.Reading) = inf }) },
		"U":                           func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { s.U, s.UUnexplained = 0, 0 }) },
		"left over":                   func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { *(*float64)(&s.Unexplained) = nan }) },
		"currents":                    func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { s.Current = 0 }) },
		"judgement":                   func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { s.Outcome = decision.NotJudged }) },
		"gain":                        func(r *calib.Result) { r.Fit.Gain.Value = 0 },
		"negative":                    func(r *calib.Result) { r.Fit.Gain.Value = -1 },
		"unknown":                     func(r *calib.Result) { r.Fit.Offset.Known, r.Fit.SeriesResistance.Known = false, false },
		"certain":                     func(r *calib.Result) { r.Fit.Offset.U, r.Fit.SeriesResistance.U = 0, 0 },
		"one current, as nothing":     func(r *calib.Result) { r.Fit.AsSeries.Value, r.Fit.Intercept.Value = 0, 0 },
		"one current, unknown":        func(r *calib.Result) { r.Fit.AsSeries.Known = false },
		"one current, never passing":  func(r *calib.Result) { r.Condition = nil },
		"one current, far from here":  func(r *calib.Result) { r.Condition = &calib.Interval{From: 100, To: 200} },
		"one current, always passing": func(r *calib.Result) { *(*float64)(&r.Condition.To) = inf },
		"residuals":                   func(r *calib.Result) { eachStep(r, func(s *calib.StepResult) { *(*float64)(&s.Standardised) = inf }) },
		"evidence":                    func(r *calib.Result) { eachEvidence(r, func(ev *calib.Evidence) { ev.Fall, ev.Share = nan, inf }) },
		"evidence of another kind":    func(r *calib.Result) { eachEvidence(r, func(ev *calib.Evidence) { ev.Cause, ev.Whose = "x", "" }) },
		"huge":                        func(r *calib.Result) { r.Fit.SeriesResistance.Value = 1e12 },
	} {
		t.Run(name, func(t *testing.T) {
			c := "quadrature"
			if strings.HasPrefix(name, "one current") {
				c = "one-amplitude"
			}
			e := figureCase(t, c)
			spoil(e.Result)
			for _, f := range coarseFigures(t, e) {
				if len(f.PNG) == 0 || strings.Contains(f.Caption, "NaN") {
					t.Errorf("%s has %d bytes and says %q", f.Name, len(f.PNG), f.Caption)
				}
			}
		})
	}
}

func eachStep(r *calib.Result, do func(*calib.StepResult)) {
	for i := range r.Steps {
		do(&r.Steps[i])
	}
}

func eachEvidence(r *calib.Result, do func(*calib.Evidence)) {
	for i := range r.Findings {
		if ev := r.Findings[i].Evidence; ev != nil {
			do(ev)
		}
	}
}

// figureMany is the arrival case with its steps so many times, each slightly otherwise.
func figureMany(t testing.TB, times int) *calib.Evaluation {
	e := figureCase(t, "arrival")
	steps := e.Result.Steps
	e.Result.Steps = nil
	for i := range times {
		for _, s := range steps {
			shift := math.Sin(float64(i)) * float64(s.U) / 2
			*(*float64)(&s.Error) += shift
			*(*float64)(&s.Reading) += shift
			*(*float64)(&s.Unexplained) += math.Sin(float64(2*i)) * float64(s.UUnexplained)
			e.Result.Steps = append(e.Result.Steps, s)
		}
	}
	return e
}

func TestFiguresOfTenThousandSteps(t *testing.T) {
	for _, f := range figuresOf(t, figureMany(t, 200)) {
		if strings.Contains(f.Caption, "with its expanded uncertainty,") {
			t.Errorf("%s: error bars are left out there, and the caption speaks of them: %s", f.Name, f.Caption)
		}
	}
}

func BenchmarkFiguresOfTenThousandSteps(b *testing.B) {
	e := figureMany(b, 200)
	for b.Loop() {
		figuresOf(b, e)
	}
}
