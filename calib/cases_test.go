package calib

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"testing"

	"rungproof/calib/plan"
	"rungproof/calib/quantity"
	"rungproof/calib/reading"
)

// The four cases in testdata/cases come with an independent evaluation of each
// (another program, another language, numerical derivatives). Values must agree
// to 0.02 of their standard uncertainty, standard uncertainties to 1 %.
const (
	valueTolerance = 0.02
	uTolerance     = 0.01
)

type refEstimate struct {
	Value   *float64 `json:"value"`
	U       *float64 `json:"u"`
	URandom *float64 `json:"u_random"`
}

type refGain struct {
	Range     float64 `json:"range"`
	Frequency float64 `json:"frequency"`
	refEstimate
}

type refStep struct {
	ID       string  `json:"id"`
	Drop     float64 `json:"drop"`
	PhaseDeg float64 `json:"phase_deg"`
	Range    float64 `json:"range"`
	SigmaOne float64 `json:"sigma_one_reading"`
	Expected float64 `json:"expected"`
	UExp     float64 `json:"u_expected"`
	Reading  float64 `json:"reading"`
	UReading float64 `json:"u_reading"`
	Error    float64 `json:"error"`
	U        float64 `json:"U"`
	Limit    float64 `json:"limit"`
	Outcome  string  `json:"outcome"`
	Beyond   bool    `json:"beyond_full_scale"`
}

type refCase struct {
	Verdict string `json:"verdict"`
	Fit     struct {
		Gain             refEstimate            `json:"gain"`
		Offset           refEstimate            `json:"offset"`
		OffsetQuadrature *refEstimate           `json:"offset_quadrature"`
		SeriesResistance refEstimate            `json:"series_resistance"`
		Intercept        *refEstimate           `json:"intercept"`
		AsSeries         *refEstimate           `json:"as_series_resistance"`
		Correlation      map[string]float64     `json:"correlation"`
		Separable        bool                   `json:"separable"`
		ChiSquared       float64                `json:"chi_squared"`
		DOF              int                    `json:"dof"`
		Phase            map[string]refEstimate `json:"phase"`
	} `json:"fit"`
	ByRange *struct {
		P                float64     `json:"p_common_gain"`
		Used             bool        `json:"used_for_verdict"`
		Offset           refEstimate `json:"offset"`
		SeriesResistance refEstimate `json:"series_resistance"`
		Gain             []refGain   `json:"gain"`
	} `json:"by_range"`
	ByFreq *struct {
		Gain []refGain `json:"gain"`
	} `json:"by_frequency"`
	Steps []refStep `json:"steps"`
}

func evaluateCase(t testing.TB, name string) *Evaluation {
	t.Helper()
	source, err := os.ReadFile("testdata/cases/" + name + ".toml")
	if err != nil {
		t.Fatal(err)
	}
	p, err := plan.Parse(name+".toml", source)
	if err != nil {
		t.Fatal(err)
	}
	rows, err := os.ReadFile("testdata/cases/" + name + ".csv")
	if err != nil {
		t.Fatal(err)
	}
	set, err := reading.Parse(name+".csv", rows, p)
	if err != nil {
		t.Fatal(err)
	}
	e, err := Evaluate(p, set)
	if err != nil {
		t.Fatal(err)
	}
	return e
}

func TestCasesAgreeWithIndependentEvaluation(t *testing.T) {
	for _, name := range []string{"arrival", "one-amplitude", "quadrature", "string"} {
		t.Run(name, func(t *testing.T) {
			var want refCase
			text, err := os.ReadFile("testdata/cases/" + name + ".json")
			if err != nil {
				t.Fatal(err)
			}
			if err := json.Unmarshal(text, &want); err != nil {
				t.Fatal(err)
			}
			got := evaluateCase(t, name).Result
			compareFit(t, got, &want)
			compareGains(t, got, &want)
			if len(got.Steps) != len(want.Steps) {
				t.Fatalf("%d steps, want %d", len(got.Steps), len(want.Steps))
			}
			for i := range want.Steps {
				compareStep(t, &got.Steps[i], &want.Steps[i])
			}
			if got.Verdict.String() != want.Verdict {
				t.Errorf("verdict %s, want %s", got.Verdict, want.Verdict)
			}
		})
	}
}

func compareFit(t *testing.T, got *Result, want *refCase) {
	f := &got.Fit
	if f.Separable != want.Fit.Separable || f.DOF != want.Fit.DOF {
		t.Errorf("separable %v with %d degrees of freedom, want %v with %d", f.Separable, f.DOF, want.Fit.Separable, want.Fit.DOF)
	}
	compareEstimate(t, "gain", f.Gain, want.Fit.Gain)
	compareEstimate(t, "offset", f.Offset, want.Fit.Offset)
	compareEstimate(t, "series resistance", f.SeriesResistance, want.Fit.SeriesResistance)
	optional := func(name string, got *Estimate, want *refEstimate) {
		if (got == nil) != (want == nil) {
			t.Errorf("%s is there: %v, want %v", name, got != nil, want != nil)
		} else if want != nil {
			compareEstimate(t, name, *got, *want)
		}
	}
	optional("offset in quadrature", f.OffsetQuadrature, want.Fit.OffsetQuadrature)
	optional("intercept", f.Intercept, want.Fit.Intercept)
	optional("as series resistance", f.AsSeries, want.Fit.AsSeries)
	for key, rho := range want.Fit.Correlation {
		near(t, "correlation of "+key, float64(f.Correlation[key]), rho, 0.01)
	}
	near(t, "χ²", float64(f.ChiSquared), want.Fit.ChiSquared, 0.02*want.Fit.ChiSquared)
	if len(f.Phase) != len(want.Fit.Phase) {
		t.Errorf("%d phases, want %d", len(f.Phase), len(want.Fit.Phase))
	}
	for _, p := range f.Phase {
		compareEstimate(t, "phase at "+quantity.Plain(p.Frequency, "Hz"), p.Estimate, want.Fit.Phase[fmt.Sprint(p.Frequency)])
	}
}

func compareGains(t *testing.T, got *Result, want *refCase) {
	compare := func(got []KeyGain, want []refGain) {
		if len(got) != len(want) {
			t.Errorf("%d gains, want %d", len(got), len(want))
			return
		}
		for i, w := range want {
			near(t, "key of gain", got[i].Range+got[i].Frequency, w.Range+w.Frequency, 1e-9*(w.Range+w.Frequency))
			compareEstimate(t, fmt.Sprintf("gain at %g", w.Range+w.Frequency), got[i].Estimate, w.refEstimate)
		}
	}
	if w := want.ByRange; w != nil {
		near(t, "p of a common gain", float64(got.ByRange.PCommon), w.P, 0.01)
		if got.ByRange.Used != w.Used {
			t.Errorf("by range used: %v, want %v", got.ByRange.Used, w.Used)
		}
		compareEstimate(t, "offset by range", got.ByRange.Offset, w.Offset)
		compareEstimate(t, "series resistance by range", got.ByRange.SeriesResistance, w.SeriesResistance)
		compare(got.ByRange.Gain, w.Gain)
	}
	if w := want.ByFreq; w != nil {
		compare(got.ByFreq.Gain, w.Gain)
	}
}

func compareStep(t *testing.T, got *StepResult, want *refStep) {
	id := "step " + want.ID + ": "
	if got.ID != want.ID || got.Outcome.String() != want.Outcome || got.Beyond != want.Beyond {
		t.Errorf("step %s %s %v, want %s %s %v", got.ID, got.Outcome, got.Beyond, want.ID, want.Outcome, want.Beyond)
	}
	near(t, id+"drop", got.Drop, want.Drop, 1e-9*want.Drop)
	near(t, id+"phase", got.PhaseDeg, want.PhaseDeg, 1e-8)
	near(t, id+"range", got.Range, want.Range, 1e-9*want.Range)
	near(t, id+"sigma", got.SigmaOne, want.SigmaOne, uTolerance*want.SigmaOne)
	near(t, id+"expected", got.Expected, want.Expected, valueTolerance*want.UExp)
	near(t, id+"u of expected", got.UExpected, want.UExp, uTolerance*want.UExp)
	near(t, id+"reading", float64(got.Reading), want.Reading, valueTolerance*want.UReading)
	near(t, id+"u of reading", float64(got.UReading), want.UReading, uTolerance*want.UReading)
	near(t, id+"error", float64(got.Error), want.Error, valueTolerance*want.U/2)
	near(t, id+"U", float64(got.U), want.U, uTolerance*want.U)
	near(t, id+"limit", float64(got.Limit), want.Limit, 1e-4*want.Limit)
}

func compareEstimate(t *testing.T, name string, got Estimate, want refEstimate) {
	t.Helper()
	if got.Known != (want.Value != nil) {
		t.Errorf("%s is known: %v, want %v", name, got.Known, want.Value != nil)
		return
	}
	if want.Value == nil {
		return
	}
	near(t, name, got.Value, *want.Value, valueTolerance**want.U)
	near(t, "u of "+name, got.U, *want.U, uTolerance**want.U)
	near(t, "u of "+name+" by the readings", got.URandom, *want.URandom, uTolerance**want.U)
}

func near(t *testing.T, name string, got, want, within float64) {
	t.Helper()
	if !(math.Abs(got-want) <= within) {
		t.Errorf("%s = %.10g, want %.10g ± %.2g", name, got, want, within)
	}
}
