package diagnose

import (
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"rungproof/calib"
	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

var updateRehearsals = flag.Bool("rehearsals.update", false, "record the rehearsals anew")

// recorded are rehearsals in testdata, one for each cause that a bench really has;
// the first finding of each is to be its cause.
var recorded = []struct {
	name   string
	on     string
	fault  Fault
	truth  calib.Truth
	expect string
}{
	{name: "offset", on: "arrival", fault: Fault{Offset, "", 60e-9}, expect: Offset},
	{name: "offset-of-range", on: "arrival", fault: Fault{OffsetOfRange, "", 2e-3}, expect: OffsetOfRange},
	{name: "series-resistance", on: "arrival", fault: Fault{Series, "", 0.25}, expect: Series},
	{name: "return", on: "return", fault: Fault{ReturnSeries, "", 0.1}, expect: ReturnSeries},
	{name: "coupling", on: "four-phase", fault: Fault{Coupling, "in quadrature", 50e-9}, expect: Coupling},
	{name: "pick-up", on: "quadrature", fault: Fault{CapacitivePck, "", 3e-12}, expect: CapacitivePck},
	{name: "range-gain", on: "arrival", fault: Fault{RangeGain, "the 1 mV range", 0.02}, expect: RangeGain},
	{name: "compression", on: "arrival", fault: Fault{Compression, "with the square of the share of range", -0.01}, expect: Compression},
	{name: "loading", on: "quadrature", fault: Fault{Loading, "capacitance of the input beyond the stated", 60e-12}, expect: Loading},
	{name: "convention", on: "arrival", fault: Fault{Gain, "", 2*math.Sqrt2 - 1}, expect: Convention},
	{name: "decimal-slip", on: "arrival", fault: Fault{OneSetting, "box at 100 Ω", 9}, expect: OneSetting},
	{name: "swapped", on: "arrival", fault: Fault{Swapped, "box at 100 Ω and at 50 Ω", 1}, expect: Swapped},
	{name: "interference", on: "arrival", truth: calib.Truth{Interference: 300e-9}, expect: Scatter},
	{name: "asymmetry", on: "arrival", fault: Fault{Asymmetry, "", 2e-3}, expect: Asymmetry},
	{name: "rectified", on: "string", fault: Fault{Rectified, "", 4e4}, expect: Rectified},
	{name: "not-settled", on: "arrival", truth: calib.Truth{Lean: 0.004}, expect: NotSettled},
	{name: "drift", on: "arrival", fault: Fault{Drift, "of the gain, over the run", 0.01}, expect: Drift},
	{name: "reference-off", on: "four-phase", fault: Fault{ReferenceOff, "", 0.01}, expect: ReferenceOff},
	{name: "skewed", on: "quadrature", fault: Fault{Skewed, "", 0.01}, expect: Skewed},
	{name: "outlier", on: "arrival", fault: Fault{Outlier, "step A20", 2e-6}, expect: Outlier},
}

// rehearse simulates readings and writes them as a bench would.
func rehearse(t *testing.T, p *plan.Plan, truth calib.Truth) string {
	set := calib.NewSimulator(p).Readings(truth, rand.New(rand.NewPCG(61, 62)))
	var b strings.Builder
	fmt.Fprintln(&b, "step,x,y,r,time")
	for _, r := range set.Readings {
		x, y, m := fmt.Sprintf("%.6g", r.X), "", ""
		switch p.Detector.Reads {
		case plan.TwoPhase:
			y = fmt.Sprintf("%.6g", r.Y)
		case plan.Magnitude:
			x, m = "", x
		}
		fmt.Fprintf(&b, "%s,%s,%s,%s,%s\n", p.Steps[r.Step].ID, x, y, m, r.Time.Format("2006-01-02T15:04:05Z"))
	}
	text := b.String()
	switch p.Detector.Reads {
	case plan.InPhase:
		text = strings.ReplaceAll(strings.Replace(text, "step,x,y,r,time", "step,x,time", 1), ",,,", ",")
	case plan.Magnitude:
		text = strings.ReplaceAll(strings.Replace(text, "step,x,y,r,time", "step,r,time", 1), ",,,", ",")
	default:
		text = strings.ReplaceAll(strings.Replace(text, "step,x,y,r,time", "step,x,y,time", 1), ",,", ",")
	}
	return text
}

func TestRecordedRehearsals(t *testing.T) {
	for _, c := range recorded {
		t.Run(c.name, func(t *testing.T) {
			var p *plan.Plan
			if c.on == "return" {
				source, err := os.ReadFile("testdata/return.toml")
				if err != nil {
					t.Fatal(err)
				}
				if p, err = plan.Parse("return.toml", source); err != nil {
					t.Fatal(err)
				}
			} else {
				p = casePlan(t, c.on)
			}
			path := "testdata/rehearsals/" + c.name + ".csv"
			if *updateRehearsals {
				truth := c.truth
				truth.Gain = 1
				if c.fault.Kind != "" {
					added, err := Plant(p, []Fault{c.fault})
					if err != nil {
						t.Fatal(err)
					}
					truth.Added = added
				}
				if err := os.WriteFile(path, []byte(rehearse(t, p, truth)), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			rows, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			set, err := reading.Parse(path, rows, p)
			if err != nil {
				t.Fatal(err)
			}
			e, err := calib.Evaluate(p, set)
			if err != nil {
				t.Fatal(err)
			}
			found := Findings(e)
			if len(found) == 0 || found[0].Kind != c.expect {
				for _, f := range found {
					t.Log(f.Kind, "–", f.Text)
				}
				t.Fatalf("the first finding is not %s", c.expect)
			}
			if ev := found[0].Evidence; ev != nil && (ev.P > 0.05 || ev.Share <= 0 || ev.Decides == "" || found[0].Do == "") {
				t.Errorf("evidence incomplete: %+v", *ev)
			}
			if c.expect == Scatter && !strings.Contains(found[0].Do, "Never lift a protective earth") {
				t.Error("an earth loop is suspected without the caution")
			}
		})
	}
}
