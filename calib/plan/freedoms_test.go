package plan

import (
	"fmt"
	"math"
	"os"
	"strings"
	"testing"
)

func shownOf(p *Plan) (shown []string) {
	for _, a := range p.Bench.Amplitudes {
		shown = append(shown, a.Shown)
	}
	return shown
}

// What the steps use, the reference turned, a tenth of the amplitude, the source off.
func TestFreedomsLeftOut(t *testing.T) {
	p := mustParse(t, "one-amplitude")
	check(t, "amplitudes", shownOf(p), []string{"200 mV", "20 mV", "0 V"})
	check(t, "phases", p.Bench.Phases, []float64{0, math.Pi})
	check(t, "frequencies", p.Bench.Frequencies, []float64{137})
	check(t, "taps", p.Bench.Taps, []int{1})
	check(t, "ranges", p.Bench.Ranges, []int{autoRange})
	check(t, "settings", len(p.Bench.Settings[1]), 10)
	check(t, "times", p.Bench.Times, ChangeTimes{Amplitude: 5, Setting: 5, Frequency: 10, Tap: 30, Phase: 2, Range: 2})

	// A magnitude knows no phase, and says nothing of a sign with the source off.
	p = mustParse(t, "string")
	check(t, "amplitudes", shownOf(p), []string{"1 V", "100 mV", "10 mV", "1 mV"})
	check(t, "phases", p.Bench.Phases, []float64{0})
	check(t, "taps", p.Bench.Taps, []int{1, 3, 5, 7})

	// Where amplitudes were measured and nothing is stated of others, those measured are all there is.
	p = mustParse(t, "arrival")
	check(t, "amplitudes", shownOf(p), []string{"20 V", "1 V", "0 V"})
}

func TestAmplitudesWithinReach(t *testing.T) {
	for most, want := range map[string][]string{
		"10 V":  {"10 V", "1 V", "0 V"},
		"100 V": {"10 V", "1 V", "100 V", "0 V"},
	} {
		p := parseString(t, strings.Replace(sound, `shown_as = "rms"`, "shown_as = \"rms\"\nmax_amplitude = \""+most+"\"", 1))
		check(t, most, shownOf(p), want)
	}
	p := parseString(t, strings.Replace(sound, `"10 V"`, `"10 Vpp"`, 1))
	check(t, "own convention", shownOf(p), []string{"10 Vpp", "1 Vpp", "0 V"})
}

func TestFreedomsStated(t *testing.T) {
	p := parseString(t, sound+`
[bench]
amplitudes  = ["1 V", "10000 mV"]
settings    = { box = ["1000 Ω", "2 kΩ"] }
frequencies = ["0.137 kHz", "1 kHz"]
phases      = ["90 deg"]
ranges      = ["100 mV", "auto"]
source_off  = false
time_per_amplitude = "1 min"
time_per_setting   = "2 s"
`)
	check(t, "amplitudes", shownOf(p), []string{"1 V", "10 V"}) // as the step writes it
	check(t, "settings", p.Bench.Settings[1], []Setting{{exactly(1000), "1 kΩ"}, {exactly(2000), "2 kΩ"}})
	check(t, "frequencies", p.Bench.Frequencies, []float64{137, 1000})
	check(t, "phases", p.Bench.Phases, []float64{math.Pi / 2})
	check(t, "ranges", p.Bench.Ranges, []int{1, autoRange})
	check(t, "times", p.Bench.Times, ChangeTimes{Amplitude: 60, Setting: 2, Frequency: 10, Tap: 30, Phase: 2, Range: 2})
	if got := p.Bench.Frequencies[0]; got != p.Frequencies[0] {
		t.Errorf("%v is not the step's %v", got, p.Frequencies[0])
	}
	// The plan itself stays as it is.
	check(t, "steps", []int{len(p.Steps), len(p.Generator.Amplitudes), len(p.Arms[1].Settings), len(p.Frequencies)}, []int{1, 1, 1, 1})
}

// A joint without element may be tapped only where another arm holds the series resistance.
func TestFreedomToTapAJoint(t *testing.T) {
	joint := strings.Replace(sound, "[[arm]]\nname = \"box\"", "[[arm]]\nname = \"j\"\nplace = \"tap\"\n[[arm]]\nname = \"box\"", 1) + "[bench]\ntaps = [\"j\", \"box\"]\n"
	if _, err := Parse("p", []byte(joint)); err == nil || !strings.Contains(err.Error(), "p:25: bench.taps[1]: \"j\" is a joint without an element") {
		t.Error(err)
	}
	p := parseString(t, joint+"[fit]\nseries_resistance_in = \"box\"\n")
	check(t, "taps", p.Bench.Taps, []int{1, 2})
}

func TestChangeTimes(t *testing.T) {
	times := &ChangeTimes{Amplitude: 1, Setting: 10, Frequency: 100, Tap: 1000, Phase: 1e4, Range: 1e5}
	a := Step{Frequency: 1, Set: []int{0, 0, 0}}
	for want, b := range map[float64]Step{
		0:      {Frequency: 1, Set: []int{0, 0, 0}, Phase: 2 * math.Pi, Repeats: 7},
		20:     {Frequency: 1, Set: []int{1, 0, 2}},
		111111: {Frequency: 2, Set: []int{0, 0, 1}, Amplitude: 1, Tap: 1, Phase: math.Pi, Range: 1},
	} {
		check(t, "seconds", times.Between(&a, &b), want)
	}
}

// Every candidate, pasted as a block, is read as the step that it was.
func TestCandidatesAsBlocks(t *testing.T) {
	for _, name := range []string{"one-amplitude", "string", "arrival", "quadrature", "full"} {
		source, err := os.ReadFile("testdata/plans/" + name + ".toml")
		if err != nil {
			t.Fatal(err)
		}
		p := mustParse(t, name)
		all, err := p.Candidates()
		if err != nil {
			t.Fatal(err)
		}
		if len(all.Steps) <= len(p.Steps) {
			t.Fatal("no candidates")
		}
		text, more := string(source), all.Steps[len(p.Steps):]
		for i := range more {
			text += "\n" + all.Block(&more[i], fmt.Sprintf("%s%d.", p.Prefix(), i+1))
		}
		longer := parseString(t, text)
		check(t, "number", len(longer.Steps), len(all.Steps))
		for i := range more {
			got, want := &longer.Steps[len(p.Steps)+i], &more[i]
			check(t, got.ID, settingsOf(longer, got), settingsOf(all, want))
		}
	}
}

// settingsOf is what a step sets, in values.
func settingsOf(p *Plan, s *Step) (all []any) {
	for i, a := range p.Arms {
		if a.Open {
			all = append(all, a.Settings[s.Set[i]])
		}
	}
	return append(all, p.Generator.Amplitudes[s.Amplitude], s.Frequency, s.Tap, p.Detector.Ranges[s.Range],
		math.Cos(s.Phase), math.Sin(s.Phase), s.TimeConstant, s.Repeats)
}

// 10 V over 100 kΩ and 20 kΩ is 1.67 V, which no range holds.
func TestCandidatesThatOverload(t *testing.T) {
	p := parseString(t, sound+"[bench]\nsettings.box = [\"1 kΩ\", \"20 kΩ\"]\nsource_off = false\namplitudes = \"10 V\"\n")
	all, err := p.Candidates()
	if err != nil {
		t.Fatal(err)
	}
	check(t, "steps", len(all.Steps), 1+2) // 1 kΩ at 0° and at 180°
}

func TestTooManyCandidates(t *testing.T) {
	list := func(unit string) string {
		var items []string
		for i := range 150 {
			items = append(items, fmt.Sprintf("\"%d %s\"", i+1, unit))
		}
		return "[" + strings.Join(items, ", ") + "]\n"
	}
	p := parseString(t, sound+"[bench]\nfrequencies = "+list("Hz")+"amplitudes = "+list("mV"))
	if _, err := p.Candidates(); err == nil || !strings.Contains(err.Error(), "more than 20000 steps") {
		t.Error(err)
	}
}

func TestPrefix(t *testing.T) {
	check(t, "prefix", parseString(t, sound).Prefix(), "N")
	check(t, "taken", parseString(t, strings.Replace(sound, `"A"`, `"N1."`, 1)).Prefix(), "NN")
}
