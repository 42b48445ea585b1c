package reading

import (
	"encoding/csv"
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"rungproof/calib/plan"
)

func sheet(t *testing.T, p *plan.Plan, expected []float64) string {
	t.Helper()
	var b strings.Builder
	if err := Sheet(&b, p, expected); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func TestSheet(t *testing.T) {
	p, expected := arrival()
	lines := strings.Split(sheet(t, p, expected), "\n")
	// 20 Vpp are 7.0711 V rms, and 10 kΩ below 1 MΩ take 1/101 of it: 70.011 mV.
	want := []string{
		"step,x [µV],expected [µV],frequency,amplitude,time_constant,range,box,phase",
		"A1,,70011,137 Hz,20 V,300 ms,100 mV,10 kΩ,0 deg",
		"A1,,70011,137 Hz,20 V,300 ms,100 mV,10 kΩ,0 deg",
		"A1,,70011,137 Hz,20 V,300 ms,100 mV,10 kΩ,0 deg",
		"A2,,-70011,137 Hz,20 V,300 ms,100 mV,10 kΩ,180 deg",
	}
	if !slices.Equal(lines[:len(want)], want) {
		t.Errorf("the sheet begins\n%s", strings.Join(lines[:len(want)], "\n"))
	}
	if len(lines) != 1+52*3+1 {
		t.Errorf("%d lines for 52 steps of three readings", len(lines))
	}
}

// A sheet is taken back: empty as no readings, filled with what was expected as just that.
func TestSheetRoundTrip(t *testing.T) {
	peak, expectedPeak := arrival()
	peak.Detector.Displays, peak.Detector.ToRMS = "peak", 1/math.Sqrt2
	odd, expectedOdd := arrival()
	odd.Arms[1].Name = "Range" // an arm called like another column
	odd.Steps[0].ID = `1", "a`
	odd.Steps[0].Phase, odd.Steps[1].Frequency = 1./3, 1e5/3
	off, expectedOff := oneAmplitude()
	off.Generator.Amplitudes[0].Shown = "0 V"
	for name, c := range map[string]func() (*plan.Plan, []float64){
		"arrival": arrival, "one amplitude": oneAmplitude, "quadrature": quadrature, "string": taps,
		"peak":       func() (*plan.Plan, []float64) { return peak, expectedPeak },
		"odd names":  func() (*plan.Plan, []float64) { return odd, expectedOdd },
		"source off": func() (*plan.Plan, []float64) { return off, make([]float64, len(expectedOff)) },
	} {
		p, expected := c()
		text := sheet(t, p, expected)
		s, err := Parse("sheet.csv", []byte(text), p)
		if err != nil {
			t.Errorf("%s, empty: %v", name, err)
			continue
		}
		if len(s.Readings) != 0 || len(s.Missing) != len(p.Steps) {
			t.Errorf("%s, empty: %d readings, %d steps missing", name, len(s.Readings), len(s.Missing))
		}
		s, err = Parse("sheet.csv", []byte(fill(t, text)), p)
		if err != nil {
			t.Errorf("%s, filled in: %v", name, err)
			continue
		}
		repeats := 0
		for _, step := range p.Steps {
			repeats += step.Repeats
		}
		if len(s.Readings) != repeats || len(s.Missing) != 0 {
			t.Errorf("%s: %d readings of %d, steps %v missing", name, len(s.Readings), repeats, s.Missing)
		}
		for _, r := range s.Readings {
			// The sheet has five digits: half a unit of the last is at most 5e-5 of the value.
			if want := expected[r.Step]; math.Abs(r.X-want) > 5e-5*math.Abs(want) || r.Range != p.Steps[r.Step].Range {
				t.Errorf("%s, step %s: %g V, expected %g V", name, p.Steps[r.Step].ID, r.X, want)
			}
		}
	}
}

// fill copies the expected readings to the first reading column, and 0 to a second.
func fill(t *testing.T, text string) string {
	t.Helper()
	rows, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	expected := slices.IndexFunc(rows[0], func(s string) bool { return strings.HasPrefix(s, colExpected) })
	for _, row := range rows[1:] {
		row[1] = row[expected]
		if expected == 3 {
			row[2] = "0"
		}
	}
	var b strings.Builder
	if err := csv.NewWriter(&b).WriteAll(rows); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// changes counts how often something is set anew, going through the steps in an order.
func changes(p *plan.Plan, order []int) (n int) {
	for k := 1; k < len(order); k++ {
		for _, c := range settings(p) {
			if c.key(&p.Steps[order[k]]) != c.key(&p.Steps[order[k-1]]) {
				n++
			}
		}
	}
	return n
}

func TestSheetOrder(t *testing.T) {
	for name, c := range map[string]func() (*plan.Plan, []float64){"arrival": arrival, "quadrature": quadrature} {
		p, _ := c()
		own := make([]int, len(p.Steps))
		for i := range own {
			own[i] = i
		}
		asPlanned := changes(p, own)
		if n := changes(p, sheetOrder(p)); n > asPlanned {
			t.Errorf("%s: %d changes, %d in the plan's order", name, n, asPlanned)
		}
		// Whatever order the plan has, the sheet needs no more changes.
		rand.New(rand.NewPCG(1, 2)).Shuffle(len(p.Steps), func(i, j int) { p.Steps[i], p.Steps[j] = p.Steps[j], p.Steps[i] })
		if n := changes(p, sheetOrder(p)); n > asPlanned {
			t.Errorf("%s, shuffled: %d changes, %d in the plan's order", name, n, asPlanned)
		}
	}
	// A lead is moved once a tap, not once an amplitude and tap.
	p, _ := taps()
	order, moved := sheetOrder(p), 0
	for k := 1; k < len(order); k++ {
		if p.Steps[order[k]].Tap != p.Steps[order[k-1]].Tap {
			moved++
		}
	}
	if moved != 3 {
		t.Errorf("the lead is moved %d times between 4 taps", moved)
	}
}

func TestShort(t *testing.T) {
	for _, c := range []struct {
		x, fullScale float64
		want         string
	}{
		{70011.06, 1e5, "70011"}, {-700110.6, 1e6, "-700111"}, {0.70710678, 10, "0.70711"}, {-3.5e-3, 10, "-0.00350"},
		{0, 10, "0"}, {-1e-17, 10, "0"}, {4.3e-12, 1e5, "0"},
	} {
		if got := short(c.x, c.fullScale); got != c.want {
			t.Errorf("short(%g, %g) = %s, want %s", c.x, c.fullScale, got, c.want)
		}
	}
}

type full struct{}

func (full) Write([]byte) (int, error) { return 0, errors.New("disk full") }

func TestSheetSaysWhatFails(t *testing.T) {
	p, expected := arrival()
	if err := Sheet(full{}, p, expected); err == nil || err.Error() != "disk full" {
		t.Errorf("error %v", err)
	}
}
