package plan

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// The order is the one of plan-format: frequency slowest, then amplitude, tap, set, range and phase.
func TestOrderOfSteps(t *testing.T) {
	p := mustParse(t, "full")
	if len(p.Steps) != 64+3 {
		t.Fatalf("%d steps, want 2·2·2·2·2·2 + 3", len(p.Steps))
	}
	for i, s := range p.Steps[:64] {
		bit := func(k int) int { return i >> k & 1 }
		check(t, s.ID, []any{s.ID, s.Frequency, s.Amplitude, s.Tap, s.Set[2], s.Auto, s.Phase, s.TimeConstant, s.Repeats}, []any{
			fmt.Sprint("A", i+1), []float64{100, 1000}[bit(5)], bit(4), []int{2, 1}[bit(3)], bit(2), bit(1) == 0,
			[]float64{0, math.Pi / 2}[bit(0)], 0.3, 4,
		})
		if !s.Auto && s.Range != 0 {
			t.Errorf("%s: range %d, want the first", s.ID, s.Range)
		}
	}
	for i, s := range p.Steps[64:] { // unnamed: numbered on; 2000 mV is the setting 2 V
		check(t, s.ID, []any{s.ID, s.Frequency, s.Amplitude, s.Tap, s.Set[2], s.TimeConstant, s.Repeats}, []any{
			fmt.Sprint(65 + i), 1000.0, []int{2, 0, 3}[i], 2, 2, 0.1, 1})
	}
	check(t, "frequencies", p.Frequencies, []float64{100, 1000})
}

func TestArmsAreSetInTheLaddersOrder(t *testing.T) {
	p := parseString(t, strings.NewReplacer(
		`value = "100 kΩ"`, ``,
		`set = { box = "1 kΩ" }`, `set = { box = ["1 kΩ", "2 kΩ"], top = ["100 kΩ", "200 kΩ"] }`,
	).Replace(sound))
	var got []string
	for _, s := range p.Steps {
		got = append(got, p.Arms[0].Nominal[s.Set[0]]+" over "+p.Arms[1].Nominal[s.Set[1]])
	}
	check(t, "settings", got, []string{"100 kΩ over 1 kΩ", "100 kΩ over 2 kΩ", "200 kΩ over 1 kΩ", "200 kΩ over 2 kΩ"})
}

// 10 V rms over 100 kΩ and 1 kΩ is 99 mV, of which 1.05 times is 104 mV.
func TestAutomaticRange(t *testing.T) {
	for _, c := range []struct{ edit, to, want string }{
		{"", "", "1 V"},
		{`"10 V"`, `"9.6 V"`, "100 mV"}, // 95.05 mV, 99.8 mV
		{`"10 V"`, `"9.7 V"`, "1 V"},    // 96.04 mV, 100.8 mV
		{`"10 V"`, `"0 V"`, "10 mV"},    // the smallest
		{`amplitude = "10 V"`, `amplitude = "10 V"` + "\nphase = \"90 deg\"", "10 mV"},
		{`amplitude = "10 V"`, `amplitude = "10 V"` + "\nphase = \"60 deg\"", "100 mV"},
		{`amplitude = "10 V"`, `amplitude = "10 V"` + "\nphase = \"180 deg\"", "1 V"},
		{`ranges = ["1 V", "100 mV", "10 mV"]`, `ranges = ["10 mV", "50 mV"]`, "50 mV"},            // none holds it: the largest
		{`reads = "in-phase"`, `reads = "in-phase"` + "\nphase_alignment = \"0.4 rad\"", "100 mV"}, // low by 8 %: 91 mV, 95.7 mV
	} {
		p := parseString(t, strings.Replace(sound, c.edit, c.to, 1))
		if len(p.Steps) != 1 || !p.Steps[0].Auto {
			t.Fatalf("%q: not one automatic step", c.to)
		}
		got := p.Detector.Ranges[p.Steps[0].Range]
		want := map[string]float64{"1 V": 1, "100 mV": 0.1, "50 mV": 0.05, "10 mV": 0.01}[c.want]
		check(t, c.to, got, want)
	}
}

func parseString(t testing.TB, source string) *Plan {
	t.Helper()
	p, err := Parse("plan.toml", []byte(source))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func TestPlansWrittenInOtherWays(t *testing.T) {
	want := parseString(t, sound)
	for name, source := range map[string]string{
		"byte-order mark": "\ufeff" + sound,
		"CRLF":            strings.ReplaceAll(sound, "\n", "\r\n"),
		"lists of one":    strings.NewReplacer(`amplitude = "10 V"`, `amplitude = ["10 V"]`, `"1 kΩ" }`, `["1 kΩ"] }`).Replace(sound),
		"dotted keys":     strings.Replace(sound, `filter = { time_constant = "100 ms", poles = 2 }`, "filter.time_constant = \"100 ms\"\nfilter.poles = 2", 1),
		"single tables":   strings.Replace(sound, "[[steps]]", "[steps]", 1),
		"slope for poles": strings.Replace(sound, "poles = 2", `poles = "12 dB/oct"`, 1),
		"arm around":      strings.Replace(sound, `value = "100 kΩ"`, `value = { value = "100 kΩ" }`, 1),
	} {
		got := parseString(t, source)
		got.Source, want.Source = nil, nil
		for i := range got.Steps {
			got.Steps[i].Line = want.Steps[i].Line
		}
		check(t, name, got, want)
	}
}

// An arm's tolerance means the same within its value and beside it.
func TestToleranceBesideOrWithin(t *testing.T) {
	within := parseString(t, strings.Replace(sound, `value = "100 kΩ"`, `value = { value = "100 kΩ", tolerance = "1 %" }`, 1))
	beside := parseString(t, strings.Replace(sound, `value = "100 kΩ"`, "value = \"100 kΩ\"\ntolerance = \"1 %\"", 1))
	check(t, "top", beside.Arms[0].Settings, within.Arms[0].Settings)
	check(t, "tolerance over √3", within.Arms[0].Settings[0].U(), 1e3/math.Sqrt(3))
}

// sound is the plan that the tests edit.
const sound = `title = "test"
frequency = "137 Hz"
[generator]
source_resistance = "0 Ω"
shown_as = "rms"
[detector]
reads = "in-phase"
ranges = ["1 V", "100 mV", "10 mV"]
filter = { time_constant = "100 ms", poles = 2 }
[[arm]]
name = "top"
place = "series"
value = "100 kΩ"
[[arm]]
name = "box"
place = "shunt"
[[steps]]
name = "A"
amplitude = "10 V"
set = { box = "1 kΩ" }
`

// A plan with 10 000 steps: 20 frequencies, 10 amplitudes, 50 settings.
func BenchmarkTenThousandSteps(b *testing.B) {
	list := func(n int, unit string) string {
		var items []string
		for i := range n {
			items = append(items, fmt.Sprintf("\"%d %s\"", i+1, unit))
		}
		return "[" + strings.Join(items, ", ") + "]"
	}
	source := []byte(strings.NewReplacer(`frequency = "137 Hz"`, "frequency = "+list(20, "kHz"),
		`amplitude = "10 V"`, "amplitude = "+list(10, "V"), `"1 kΩ"`, list(50, "Ω")).Replace(sound))
	for b.Loop() {
		p, err := Parse("plan.toml", source)
		if err != nil || len(p.Steps) != 10_000 {
			b.Fatal(len(p.Steps), err)
		}
	}
}
