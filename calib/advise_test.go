package calib

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

// casePlan is a plan of testdata/cases, edited; a text to edit must be there.
func casePlan(t testing.TB, name string, edits ...string) *plan.Plan {
	t.Helper()
	source, err := os.ReadFile("testdata/cases/" + name + ".toml")
	if err != nil {
		t.Fatal(err)
	}
	text := string(source)
	for i := 0; i < len(edits); i += 2 {
		if !strings.Contains(text, edits[i]) {
			t.Fatalf("%s has no %q", name, edits[i])
		}
		text = strings.Replace(text, edits[i], edits[i+1], 1)
	}
	return parsed(t, name+".toml", text)
}

func parsed(t testing.TB, file, text string) *plan.Plan {
	t.Helper()
	p, err := plan.Parse(file, []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func advise(t testing.TB, p *plan.Plan, what string, minutes float64) *Advice {
	t.Helper()
	a, err := Advise(p, nil, what, minutes)
	if err != nil {
		t.Fatal(err)
	}
	if a.Time > 60*minutes*(1+1e-12) {
		t.Errorf("%g s of %g min", a.Time, minutes)
	}
	return a
}

// onBench puts a [bench] into the one-amplitude case.
func onBench(text string) []string {
	return []string{"[[steps]]", "[bench]\n" + text + "\n\n[[steps]]"}
}

// One amplitude and one phase part nothing. The three ways out are those of the
// ladder's arithmetic (architecture: "Three facts of the ladder"); which of them is
// taken is a matter of its time.
func TestAdvicePartsOffsetFromSeriesResistance(t *testing.T) {
	for _, c := range []struct{ name, bench, amplitude, phase string }{
		{"as it stands", "", "200 mV", "180"},
		{"a turn that takes long", `time_per_phase = "2 min"`, "another", "0"},
		{"a turn as quick as an amplitude", `time_per_phase = "5 s"`, "200 mV", "180"},
		{"no turning", `phases = ["0 deg"]`, "another", "0"},
		{"no turning, the source always on", "phases = [\"0 deg\"]\nsource_off = false", "20 mV", "0"},
		{"one other amplitude", "phases = [\"0 deg\"]\namplitudes = \"1 V\"\nsource_off = false", "1 V", "0"},
		{"nothing but the source off", "phases = [\"0 deg\"]\namplitudes = \"200 mV\"", "0 V", "0"},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := casePlan(t, "one-amplitude", onBench(c.bench)...)
			for _, what := range []string{"", OfOffset, OfSeries} {
				a := advise(t, p, what, 10)
				if a.Before.Separable || !a.After.Separable || len(a.Steps) == 0 {
					t.Fatalf("%q: %+v", what, a)
				}
				first := a.Steps[0]
				amplitude := first.Amplitude
				if c.amplitude == "another" && amplitude != "200 mV" {
					amplitude = "another"
				}
				if amplitude != c.amplitude || fmt.Sprintf("%.0f", first.PhaseDeg) != c.phase {
					t.Errorf("%q: first %s at %.0f°, want %s at %s°", what, first.Amplitude, first.PhaseDeg, c.amplitude, c.phase)
				}
				if !first.After.Separable {
					t.Errorf("%q: the first step parts nothing: %+v", what, first)
				}
			}
		})
	}
}

// A magnitude has no sign: turning tells nothing, and it takes a second amplitude.
func TestAdviceForAMagnitude(t *testing.T) {
	p := casePlan(t, "string", `["1 V", "100 mV", "10 mV"]`, `"1 V"`)
	a := advise(t, p, "", 10)
	if a.Before.Separable || !a.After.Separable || a.Steps[0].Amplitude != "100 mV" {
		t.Errorf("%+v", a)
	}
}

// What is promised after the steps is what the plan with the block pasted is expected to tell.
func TestAdviceKeepsItsPromise(t *testing.T) {
	for _, p := range []*plan.Plan{
		casePlan(t, "one-amplitude"),
		casePlan(t, "one-amplitude", onBench("amplitudes = [\"5 V\", \"50 mV\"]\nsettings.box = [\"10 kΩ\", \"33 Ω\", \"0.5 kΩ\"]")...),
		casePlan(t, "one-amplitude", append(onBench(`ranges = ["10 µV", "1 mV"]`), "[[steps]]", "[fit]\noffset = \"share of range\"\n\n[[steps]]")...),
		casePlan(t, "string"), casePlan(t, "arrival"),
		casePlan(t, "quadrature"),
		casePlan(t, "arrival", "[[steps]]", "[fit]\ngain = \"per range\"\n\n[[steps]]"),
	} {
		for _, what := range append(AdviceFor, "") {
			a := advise(t, p, what, 4)
			longer := parsed(t, p.File, string(p.Source)+"\n"+a.Block)
			x, err := Expect(longer)
			if err != nil {
				t.Fatal(err)
			}
			if len(longer.Steps) != len(p.Steps)+len(a.Steps) || x.Separable != a.After.Separable {
				t.Fatalf("%s for %q: %d steps, separable %v: %+v", p.File, what, len(longer.Steps), x.Separable, a)
			}
			same := func(of string, promised number, e Estimate) {
				if math.IsNaN(float64(promised)) == e.Known || e.Known && math.Abs(float64(promised)/e.Expanded()-1) > 0.01 {
					t.Errorf("%s for %q: U of the %s is %g, promised %g", p.File, what, of, e.Expanded(), promised)
				}
			}
			same("gain", a.After.Gain, x.Gain)
			same("offset", a.After.Offset, x.Offset)
			same("series resistance", a.After.Series, x.SeriesResistance)
			for i, s := range a.Steps {
				e := x.Steps[len(p.Steps)+i]
				if e.ID != s.ID || math.Abs(e.Expected-s.Expected) > 1e-9*e.Range || e.Range != s.Range || math.Abs(e.Wait-s.Wait) > 0.1*e.Wait {
					t.Errorf("%+v is read as %+v", s, e)
				}
			}
		}
	}
}

// Where noise limits the gain, it is found at the largest drop.
func TestAdviceForTheGain(t *testing.T) {
	p := casePlan(t, "one-amplitude", "amplitude  = { tolerance = \"1 %\" }", "settings = [{ shown = \"200 mV\", measured = \"200.00(1) mV\" }]",
		"\"1 MΩ\", tolerance = \"1 %\"", "\"1 MΩ\", tolerance = \"0.001 %\"", "tolerance = \"0.5 %\"", "tolerance = \"0.001 %\"", "stability  = \"0.1 %\"", "",
		"[\"10 kΩ\", \"5 kΩ\", \"2 kΩ\", \"1 kΩ\", \"500 Ω\", \"200 Ω\", \"100 Ω\", \"50 Ω\", \"20 Ω\", \"10 Ω\"]", "[\"20 Ω\", \"10 Ω\"]",
		"range     = \"auto\"", "range = \"auto\"\nphase = [\"0 deg\", \"180 deg\"]",
		"[[steps]]", "[bench]\nsettings.box = [\"10 kΩ\", \"5 kΩ\", \"100 Ω\", \"10 Ω\"]\n\n[[steps]]")
	a := advise(t, p, OfGain, 2)
	if len(a.Steps) == 0 || a.Steps[0].Set["box"] != "10 kΩ" || !(a.After.Gain < a.Before.Gain/5) {
		t.Errorf("%+v", a)
	}
	// With the box and the top as uncertain as they are, no reading helps.
	if a = advise(t, casePlan(t, "string"), OfGain, 10); len(a.Steps) != 0 || a.Stopped != StoppedByReturn || a.After != a.Before {
		t.Errorf("%+v", a)
	}
}

func TestAdviceFromReadings(t *testing.T) {
	p := casePlan(t, "one-amplitude")
	source, err := os.ReadFile("testdata/cases/one-amplitude.csv")
	if err != nil {
		t.Fatal(err)
	}
	set, err := reading.Parse("one-amplitude.csv", source, p)
	if err != nil {
		t.Fatal(err)
	}
	a, err := Advise(p, set, OfOffset, 3)
	if err != nil {
		t.Fatal(err)
	}
	if a.Before.Separable || !a.After.Separable || math.Round(a.Steps[0].PhaseDeg) != 180 {
		t.Errorf("%+v", a)
	}
	// The repeats scatter five times as much as the plan states: so will those to come.
	wild := *set
	wild.Readings = nil
	for i, r := range set.Readings {
		for k := range 8 {
			r.X = set.Readings[i].X + 40e-9*float64(2*(k%2)-1)
			wild.Readings = append(wild.Readings, r)
		}
	}
	b, err := Advise(p, &wild, OfOffset, 3)
	if err != nil {
		t.Fatal(err)
	}
	if !(b.After.Offset > 2*a.After.Offset) {
		t.Errorf("U of the offset %g with scatter, %g without", b.After.Offset, a.After.Offset)
	}
	// Where the plan states no noise, the repeats say what it is.
	if b, err = Advise(casePlan(t, "one-amplitude", ", noise = \"8 nV/√Hz\"", "", "stability  = \"0.1 %\"", ""), &wild, OfOffset, 3); err != nil {
		t.Fatal(err)
	}
	if !(b.After.Offset > 2*a.After.Offset) {
		t.Errorf("U of the offset %g with the noise from the repeats, %g as stated", b.After.Offset, a.After.Offset)
	}
}

// Nothing is proposed that a resistor or the input does not bear.
func TestAdviceWithinRatings(t *testing.T) {
	// 5 V peak-to-peak is 1.77 V rms: 3.1 µW in 1 MΩ, and 17.5 mV across 10 kΩ.
	freely := onBench(`amplitudes = "5 V"`)
	for name, c := range map[string]struct {
		edit []string
		want bool // any candidate
	}{
		"none":      {nil, true},
		"resistor":  {[]string{"place = \"series\"\n", "place = \"series\"\nmax_power = \"3 µW\"\n"}, false},
		"input":     {[]string{"noise = \"8 nV/√Hz\"", "noise = \"8 nV/√Hz\", max = \"10 µV\""}, false},
		"ample one": {[]string{"place = \"series\"\n", "place = \"series\"\nmax_power = \"4 µW\"\n"}, true},
	} {
		p := casePlan(t, "one-amplitude", append(append([]string(nil), freely...), c.edit...)...)
		found := false
		for _, s := range advise(t, p, "", 10).Steps {
			found = found || s.Amplitude == "5 V"
		}
		if found != c.want {
			t.Errorf("%s: 5 V proposed: %v", name, found)
		}
	}
}

func TestAdviceIsTheSameAgain(t *testing.T) {
	p := casePlan(t, "quadrature")
	one, _ := json.Marshal(advise(t, p, "", 5))
	two, _ := json.Marshal(advise(t, casePlan(t, "quadrature"), "", 5))
	if string(one) != string(two) || len(one) < 1000 {
		t.Errorf("%s\n%s", one, two)
	}
}
