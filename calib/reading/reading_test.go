package reading

import (
	"bytes"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"rungproof/calib/plan"
)

// The expected numbers below are the cells of the file times the unit's factor (SI Brochure,
// 9th edition, table 7) and, where said, the crest factor √2 of a sine (common practice).

func TestFiles(t *testing.T) {
	for _, c := range []struct {
		file         string
		make         func() (*plan.Plan, []float64)
		readings     int
		lastX, lastY float64 // the last row of the file
	}{
		{"arrival.csv", arrival, 156, -0.37e-6, 0},
		{"one-amplitude.csv", oneAmplitude, 10, 0.88e-6, 0},
		{"quadrature.csv", quadrature, 60, 10.56e-6, 0.16e-6},
		{"string.csv", taps, 60, 0.9475e-6, 0},
	} {
		source, err := os.ReadFile("testdata/" + c.file)
		if err != nil {
			t.Fatal(err)
		}
		p, _ := c.make()
		s, err := Parse(c.file, source, p)
		if err != nil {
			t.Errorf("%s: %v", c.file, err)
			continue
		}
		if len(s.Readings) != c.readings || len(s.Missing) != 0 {
			t.Errorf("%s: %d readings, missing %v", c.file, len(s.Readings), s.Missing)
		}
		last := s.Readings[len(s.Readings)-1]
		want := Reading{Step: len(p.Steps) - 1, X: c.lastX, Y: c.lastY, Range: p.Steps[len(p.Steps)-1].Range, Line: c.readings + 1}
		if diff := cmp.Diff(want, last, near); diff != "" {
			t.Errorf("%s, last row: %s", c.file, diff)
		}
	}
}

var near = cmpopts.EquateApprox(1e-12, 0)

// read is what a file of a small plan comes to, without the lines.
func read(t *testing.T, p *plan.Plan, text string) []Reading {
	t.Helper()
	s, err := Parse("readings.csv", []byte(text), p)
	if err != nil {
		t.Fatalf("%q:\n%v", text, err)
	}
	for i := range s.Readings {
		s.Readings[i].Line = 0
	}
	return s.Readings
}

func TestWaysOfWriting(t *testing.T) {
	// Two readings, 7.07 mV at S1 and −3.5 mV at S2, on the range of the plan (index 1).
	want := []Reading{{Step: 0, X: 7.07e-3, Range: 1}, {Step: 1, X: -3.5e-3, Range: 1}}
	for name, text := range map[string]string{
		"bare volts":                "step,x\nS1,0.00707\nS2,-3.5e-3\n",
		"unit in the header":        "step,x [mV]\nS1,7.07\nS2,-3.5\n",
		"unit in parentheses":       "step,x (mV)\nS1,7.07\nS2,-3.5\n",
		"micro sign":                "step,x [µV]\nS1,7070\nS2,-3500\n",
		"unit in the cell":          "step,x\nS1,7.07 mV\nS2,-3500 µV\n",
		"cell's unit over header's": "step,x [µV]\nS1,7.07 mV\nS2,-3500\n",
		"no-break space":            "step,x\nS1,7.07\u00a0mV\nS2,-3.5\u202fmV\n",
		"capitals":                  "Step,X [mV]\nS1,7.07\nS2,-3.5\n",
		"columns turned round":      "x [mV],step\n7.07,S1\n-3.5,S2\n",
		"minus sign":                "step,x [mV]\nS1,7.07\nS2,−3.5\n",
		"semicolons":                "step;x [mV]\nS1;7.07\nS2;-3.5\n",
		"decimal comma":             "step;x [mV]\nS1;7,07\nS2;-3,5 mV\n",
		"tabs":                      "step\tx [mV]\tnote\nS1\t7.07\t\nS2\t-3.5\t\n",
		"tabs, empty cell within":   "step\tnote\tx [mV]\nS1\t\t7.07\nS2\t\t-3.5\n",
		"byte-order mark":           "\ufeffstep,x [mV]\nS1,7.07\nS2,-3.5\n",
		"CRLF":                      "step,x [mV]\r\nS1,7.07\r\nS2,-3.5\r\n",
		"bare CR":                   "step,x [mV]\rS1,7.07\rS2,-3.5\r",
		"no newline at the end":     "step,x [mV]\nS1,7.07\nS2,-3.5",
		"blank lines":               "\n  \nstep,x [mV]\n\nS1,7.07\n,\n\nS2,-3.5\n\n",
		"comments":                  "# bench 2; cold\nstep,x [mV]\n# the \"box\"\nS1,7.07\n #, \nS2,-3.5\n",
		"comment of a spreadsheet":  "\"# bench 2, cold\",\nstep,x [mV]\nS1,7.07\n# warm,\nS2,-3.5\n",
		"quoted":                    "\"step\",\"x [mV]\"\n\"S1\",\"7.07\"\nS2,\"-3.5\"\n",
		"spaces":                    " step , x [mV] \n S1 ,  7.07\nS2 ,\"-3.5\"\n",
		"column without a name":     "step,x [mV],\nS1,7.07,\nS2,-3.5,\n",
		"expected is for the eye":   "step,x [mV],expected [mV]\nS1,7.07,7.1\nS2,-3.5,about -3\n",
		"own convention, peak":      fmt.Sprintf("step,x [mVpk]\nS1,%.17g\nS2,%.17g\n", 7.07*math.Sqrt2, -3.5*math.Sqrt2),
		"cell's own convention":     fmt.Sprintf("step,x\nS1,%.17g mVpp\nS2,-3.5 mVrms\n", 7.07*2*math.Sqrt2),
		"range of the plan":         "step,x [mV],range\nS1,7.07,10 mV\nS2,-3.5,\n",
		"settings of the plan":      "step,x [mV],box,amplitude,frequency,phase,time constant,tap\nS1,7.07,1 kΩ,20 Vpp,137 Hz,0 deg,300 ms,box\nS2,-3.5,0.5 kΩ,20 V,0.137 kHz,-180 deg,,\n",
		"settings in bare numbers":  "step,x [mV],box [kohm],phase\nS1,7.07,1,0\nS2,-3.5,.5,180\n",
		"polar":                     "step,r [mV],theta\nS1,7.07,0\nS2,3.5,180\n",
		"polar, radians":            "step,theta [rad],r [mV]\nS1,0,7.07\nS2,3.14159265358979312,3.5\n",
	} {
		t.Run(name, func(t *testing.T) {
			if diff := cmp.Diff(want, read(t, small(plan.InPhase), text), near); diff != "" {
				t.Error(diff)
			}
		})
	}
}

func TestTwoPhase(t *testing.T) {
	// 5 mV at atan(3/4): the triangle of sides 3, 4 and 5.
	want := []Reading{{Step: 0, X: 4e-3, Y: 3e-3, Range: 1}}
	for _, text := range []string{
		"step,x [mV],y [µV]\nS1,4,3000\n",
		"step,r,theta\nS1,5 mV,36.86989764584402 deg\n",
		"step,r [mV],theta [mrad]\nS1,5,643.5011087932844\n",
	} {
		if diff := cmp.Diff(want, read(t, small(plan.TwoPhase), text), near); diff != "" {
			t.Errorf("%q: %s", text, diff)
		}
	}
}

func TestDisplayedConvention(t *testing.T) {
	// A detector that displays peak values: full scale 10 mV peak is 7.07 mV rms.
	p := small(plan.InPhase)
	p.Detector.Displays, p.Detector.ToRMS = "peak", 1/math.Sqrt2
	for i := range p.Detector.Ranges {
		p.Detector.Ranges[i] /= math.Sqrt2
	}
	got := read(t, p, "step,x [mV],range\nS1,10,10 mV\nS1,10,7.0710678118654755 mVrms\nS2,-1 mVrms,100 mV\n")
	want := []Reading{{Step: 0, X: 10e-3 / math.Sqrt2, Range: 1}, {Step: 0, X: 10e-3 / math.Sqrt2, Range: 1}, {Step: 1, X: -1e-3, Range: 0}}
	if diff := cmp.Diff(want, got, near); diff != "" {
		t.Error(diff)
	}
}

func TestOutput(t *testing.T) {
	// 10 V for full scale: 7.07 V on the 10 mV range is 7.07 mV, −350 mV on the 100 mV range −3.5 mV.
	p := small(plan.InPhase)
	p.Detector.Output = &plan.Output{FullScale: 10}
	want := []Reading{{Step: 0, X: 7.07e-3, Range: 1, Output: true}, {Step: 1, X: -3.5e-3, Range: 0, Output: true}}
	if diff := cmp.Diff(want, read(t, p, "step,output,range\nS1,7.07,\nS2,-350 mV,100 mV\n"), near); diff != "" {
		t.Error(diff)
	}
}

func TestBesideTheReading(t *testing.T) {
	text := "step;x [mV];time;flag;note\n" +
		"S1;7,07;2026-03-12T14:05:00.5+01:00;Overload;\"lid \"\"A\"\" open; cold\"\n" +
		"S2;-3,5;;;\n"
	got := read(t, small(plan.InPhase), text)
	want := []Reading{
		{Step: 0, X: 7.07e-3, Range: 1, Time: time.Date(2026, 3, 12, 13, 5, 0, 5e8, time.UTC), Flag: Overload, Note: `lid "A" open; cold`},
		{Step: 1, X: -3.5e-3, Range: 1},
	}
	if diff := cmp.Diff(want, got, near); diff != "" {
		t.Error(diff)
	}
}

func TestNotTaken(t *testing.T) {
	s, err := Parse("r.csv", []byte("step,x,note\nS1,,later\nS2,1 mV,\nS2,,\n"), small(plan.InPhase))
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Readings) != 1 || s.Readings[0].Line != 3 || !cmp.Equal(s.Missing, []int{0}) {
		t.Errorf("readings %v, missing %v", s.Readings, s.Missing)
	}
}

func TestStepNamedLikeAComment(t *testing.T) {
	p := small(plan.InPhase)
	p.Steps[0].ID = "#1"
	if got := read(t, p, "step,x\n\"#1\",1\n"); len(got) != 1 {
		t.Errorf("readings %v", got)
	}
}

func FuzzParse(f *testing.F) {
	for _, file := range []string{"arrival.csv", "one-amplitude.csv", "quadrature.csv", "string.csv"} {
		source, err := os.ReadFile("testdata/" + file)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(source[:60])
	}
	for _, text := range []string{
		"step;x [mV];range;flag;time;note\r\nS1;7,07 µV;10 mV;overload;2026-03-12T14:05:00Z;\"a\"\"b\"\r\n",
		"step,r,theta,box,phase\nS1,5 mV,36.87 deg,1 kΩ,0\n", "step\toutput\n#\nS1\t7\n", "step,x\nS1,\"1\n", "\xff\xfe", "step,x\nS1,NaN\n",
	} {
		f.Add([]byte(text))
	}
	plans := []*plan.Plan{small(plan.InPhase), small(plan.Magnitude), small(plan.TwoPhase)}
	plans[0].Detector.Output = &plan.Output{FullScale: 10}
	f.Fuzz(func(t *testing.T, source []byte) {
		before := bytes.Clone(source)
		for _, p := range plans {
			s, err := Parse("fuzz.csv", source, p)
			if (s == nil) == (err == nil) {
				t.Errorf("set %v and error %v", s, err)
			}
			if err != nil && strings.TrimSpace(err.Error()) == "" {
				t.Error("an error that says nothing")
			}
			if !bytes.Equal(source, before) {
				t.Fatal("the source was changed")
			}
			if s == nil {
				continue
			}
			for _, r := range s.Readings {
				if math.IsNaN(r.X+r.Y) || math.IsInf(r.X+r.Y, 0) {
					t.Errorf("a reading of %v, %v", r.X, r.Y)
				}
			}
		}
	})
}

// A long run: a million readings in turn over the steps.
func BenchmarkParse(b *testing.B) {
	p, _ := arrival()
	var text bytes.Buffer
	text.WriteString("step,x [µV]\n")
	for i := range 1_000_000 {
		fmt.Fprintf(&text, "%s,%d.%d\n", p.Steps[i%len(p.Steps)].ID, i%70000, i%10)
	}
	b.SetBytes(int64(text.Len()))
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Parse("long.csv", text.Bytes(), p); err != nil {
			b.Fatal(err)
		}
	}
}
