package plan

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"strconv"
	"strings"
)

// maxCandidates is more than anyone can choose from by hand, and few enough to be computed at once.
const maxCandidates = 20_000

// Candidates is the plan with all further steps that the bench's freedoms allow behind its own, of one reading each.
// Those that no range holds are left out.
func (p *Plan) Candidates() (*Plan, error) {
	all := *p
	all.Steps, all.Frequencies = slices.Clone(p.Steps), slices.Clone(p.Frequencies)
	all.Generator.Amplitudes = slices.Clone(p.Generator.Amplitudes)
	all.Arms = slices.Clone(p.Arms)
	b := block{node: &node{}, name: "candidate ", frequencies: p.Bench.Frequencies, taps: p.Bench.Taps,
		ranges: p.Bench.Ranges, phases: p.Bench.Phases, repeats: 1}
	for _, f := range b.frequencies {
		all.Frequencies = including(all.Frequencies, f)
	}
	for _, a := range p.Bench.Amplitudes {
		all.Generator.Amplitudes = including(all.Generator.Amplitudes, a)
		b.amplitudes = append(b.amplitudes, slices.Index(all.Generator.Amplitudes, a))
	}
	for i := range all.Arms {
		b.settings = append(b.settings, all.Arms[i].free(p.Bench.Settings[i]))
	}
	for _, tau := range p.timeConstants() {
		if b.timeConstant = tau; len(all.Steps)-len(p.Steps)+b.count() > maxCandidates {
			return nil, fmt.Errorf("%s: what [bench] allows comes to more than %d steps to choose from; shorten its lists", p.File, maxCandidates)
		}
		b.run(&all)
	}
	all.holdCandidates(len(p.Steps))
	return &all, nil
}

func including[T comparable](list []T, x T) []T {
	if slices.Contains(list, x) {
		return list
	}
	return append(list, x)
}

// free adds the settings that the bench has to those that the steps use, and gives the indices of the former.
func (a *Arm) free(settings []Setting) (indices []int) {
	if !a.Open {
		return []int{0}
	}
	a.Settings, a.Nominal = slices.Clone(a.Settings), slices.Clone(a.Nominal)
	for _, s := range settings {
		k := slices.Index(a.Nominal, s.Nominal)
		if k < 0 {
			k = len(a.Nominal)
			a.Settings, a.Nominal = append(a.Settings, s.Quantity), append(a.Nominal, s.Nominal)
		}
		indices = append(indices, k)
	}
	return indices
}

// timeConstants are the different ones of the steps.
func (p *Plan) timeConstants() (seconds []float64) {
	for _, s := range p.Steps {
		seconds = including(seconds, s.TimeConstant)
	}
	return seconds
}

// holdCandidates chooses the ranges of the steps from one on, and drops those whose range does not hold the reading.
func (p *Plan) holdCandidates(from int) {
	transfer := transfers{plan: p, known: map[string]complex128{}}
	kept := p.Steps[:from]
	for _, s := range p.Steps[from:] {
		h, err := transfer.of(&s)
		if err != nil {
			continue
		}
		reading := p.reading(&s, cmplx.Abs(h)*p.Generator.Amplitudes[s.Amplitude].EMF.X)
		if s.Auto {
			s.Range = p.Detector.smallest(reading)
		}
		if p.Detector.Ranges[s.Range] >= headroom*reading {
			kept = append(kept, s)
		}
	}
	p.Steps = kept
}

// Prefix is one for the names of new blocks: no step's id begins with it.
func (p *Plan) Prefix() string {
	for prefix := "N"; ; prefix += "N" {
		if !slices.ContainsFunc(p.Steps, func(s Step) bool { return strings.HasPrefix(s.ID, prefix) }) {
			return prefix
		}
	}
}

// Block writes a step as a block of the plan's file; its id will be the name and a 1.
func (p *Plan) Block(s *Step, name string) string {
	var b strings.Builder
	line := func(key, value string) { fmt.Fprintf(&b, "%-9s = %s\n", key, value) }
	figure := func(key string, x float64, unit string) {
		line(key, strconv.Quote(strconv.FormatFloat(x, 'f', -1, 64)+" "+unit))
	}
	b.WriteString("[[steps]]\n")
	line("name", strconv.Quote(name))
	figure("frequency", s.Frequency, "Hz")
	line("amplitude", strconv.Quote(p.Generator.Amplitudes[s.Amplitude].Shown))
	if taps := slices.DeleteFunc(slices.Clone(p.Arms), func(a Arm) bool { return a.Place == Series }); len(taps) > 1 {
		line("tap", strconv.Quote(p.Arms[s.Tap].Name))
	}
	var set []string
	for i, a := range p.Arms {
		if a.Open {
			set = append(set, fmt.Sprintf("%s = %q", tomlKey(a.Name), a.Nominal[s.Set[i]]))
		}
	}
	if len(set) > 0 {
		line("set", "{ "+strings.Join(set, ", ")+" }")
	}
	if s.Auto {
		line("range", `"auto"`)
	} else {
		figure("range", p.Detector.Ranges[s.Range]/p.Detector.ToRMS, "V")
	}
	figure("phase", math.Round(s.Phase*180/math.Pi*1e9)/1e9, "deg")
	if s.TimeConstant != p.Detector.TimeConstant {
		figure("time_constant", s.TimeConstant, "s")
	}
	line("repeats", strconv.Itoa(s.Repeats))
	return b.String()
}
