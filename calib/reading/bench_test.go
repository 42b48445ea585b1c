package reading

import (
	"math"
	"strconv"

	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// The plans of the tests, made by hand: what the readings in testdata were taken by, as
// far as this package looks at it.

// detector has decade ranges from the largest down.
func detector(reads string, largest float64, ranges int) plan.Detector {
	d := plan.Detector{Reads: reads, Displays: "rms", ToRMS: 1, TimeConstant: 0.3}
	for i := range ranges {
		d.Ranges = append(d.Ranges, largest/math.Pow10(i))
	}
	return d
}

func box(nominal ...string) plan.Arm {
	a := plan.Arm{Name: "box", Place: plan.Shunt, Open: true, Nominal: nominal}
	for _, n := range nominal {
		v, err := quantity.Parse(n, quantity.Resistance)
		if err != nil {
			panic(err)
		}
		a.Settings = append(a.Settings, plan.Quantity{X: v.X})
	}
	return a
}

func top(ohm float64) plan.Arm {
	return plan.Arm{Name: "top", Place: plan.Series, Settings: []plan.Quantity{{X: ohm}}, Nominal: []string{""}}
}

// add appends a step on the smallest range that holds 1.05 × the drop, and gives the drop back.
func add(p *plan.Plan, prefix string, s plan.Step, drop float64) float64 {
	s.ID = prefix + strconv.Itoa(len(p.Steps)+1)
	for i, r := range p.Detector.Ranges {
		if r >= 1.05*drop {
			s.Range = i
		}
	}
	s.TimeConstant = p.Detector.TimeConstant
	p.Steps = append(p.Steps, s)
	return drop * math.Cos(s.Phase)
}

// arrival is two amplitudes, 13 settings of a box below 1 MΩ, two phases, and the ideal readings.
func arrival() (*plan.Plan, []float64) {
	p := &plan.Plan{Detector: detector(plan.InPhase, 0.1, 5)}
	p.Generator = plan.Generator{ShownAs: "peak-to-peak", Amplitudes: []plan.Amplitude{
		{Shown: "20 V", EMF: plan.Quantity{X: 20 / (2 * math.Sqrt2)}}, {Shown: "1 V", EMF: plan.Quantity{X: 1 / (2 * math.Sqrt2)}}}}
	p.Arms = []plan.Arm{top(1e6), box("10 kΩ", "5 kΩ", "2 kΩ", "1 kΩ", "500 Ω", "200 Ω", "100 Ω", "50 Ω", "20 Ω", "10 Ω", "5 Ω", "2 Ω", "1 Ω")}
	expected := []float64{}
	for a, amplitude := range p.Generator.Amplitudes {
		for k, r := range p.Arms[1].Settings {
			for _, phase := range []float64{0, math.Pi} {
				expected = append(expected, add(p, "A", plan.Step{Frequency: 137, Amplitude: a, Tap: 1, Set: []int{0, k}, Phase: phase, Repeats: 3},
					amplitude.EMF.X*r.X/(1e6+r.X)))
			}
		}
	}
	return p, expected
}

func oneAmplitude() (*plan.Plan, []float64) {
	p := &plan.Plan{Detector: detector(plan.InPhase, 0.1, 5)}
	p.Generator = plan.Generator{ShownAs: "peak-to-peak", Amplitudes: []plan.Amplitude{{Shown: "200 mV"}}}
	p.Arms = []plan.Arm{top(1e6), box("10 kΩ", "5 kΩ", "2 kΩ", "1 kΩ", "500 Ω", "200 Ω", "100 Ω", "50 Ω", "20 Ω", "10 Ω")}
	expected := []float64{}
	for k, r := range p.Arms[1].Settings {
		expected = append(expected, add(p, "", plan.Step{Frequency: 137, Tap: 1, Set: []int{0, k}, Repeats: 1}, 0.2/(2*math.Sqrt2)*r.X/(1e6+r.X)))
	}
	return p, expected
}

func quadrature() (*plan.Plan, []float64) {
	p := &plan.Plan{Detector: detector(plan.TwoPhase, 1, 5)}
	p.Generator = plan.Generator{ShownAs: "rms", ShownFor: "matched load", Amplitudes: []plan.Amplitude{{Shown: "1 V", EMF: plan.Quantity{X: 2}}, {Shown: "50 mV", EMF: plan.Quantity{X: 0.1}}}}
	p.Arms = []plan.Arm{top(1e5), box("1 kΩ", "100 Ω", "10 Ω")}
	expected := []float64{}
	for _, f := range []float64{17, 170, 1.7e3, 17e3, 90e3} {
		for a, amplitude := range p.Generator.Amplitudes {
			for k, r := range p.Arms[1].Settings {
				expected = append(expected, add(p, "", plan.Step{Frequency: f, Amplitude: a, Tap: 1, Set: []int{0, k}, Repeats: 2}, amplitude.EMF.X*r.X/(1e5+r.X)))
			}
		}
	}
	return p, expected
}

// taps is a string of resistors, read as magnitudes.
func taps() (*plan.Plan, []float64) {
	p := &plan.Plan{Detector: detector(plan.Magnitude, 1, 6)}
	p.Generator = plan.Generator{ShownAs: "rms", Amplitudes: []plan.Amplitude{{Shown: "1 V", EMF: plan.Quantity{X: 1}}, {Shown: "100 mV", EMF: plan.Quantity{X: 0.1}}, {Shown: "10 mV", EMF: plan.Quantity{X: 0.01}}}}
	for _, name := range []string{"j1", "j2", "j3", "foot"} {
		p.Arms = append(p.Arms, plan.Arm{Name: name, Place: plan.Tap})
	}
	expected := []float64{}
	for a, amplitude := range p.Generator.Amplitudes {
		for k := range p.Arms {
			expected = append(expected, add(p, "", plan.Step{Frequency: 317, Amplitude: a, Tap: k, Set: make([]int, 4), Repeats: 5}, amplitude.EMF.X*math.Pow10(-k-1)))
		}
	}
	return p, expected
}

// small is a plan of two steps, S1 and S2, at 1 kΩ and 500 Ω on the 10 mV range.
func small(reads string) *plan.Plan {
	p := &plan.Plan{Detector: detector(reads, 0.1, 3)}
	p.Generator = plan.Generator{ShownAs: "peak-to-peak", Amplitudes: []plan.Amplitude{{Shown: "20 V"}}}
	p.Arms = []plan.Arm{top(1e6), box("1 kΩ", "500 Ω")}
	add(p, "S", plan.Step{Frequency: 137, Tap: 1, Set: []int{0, 0}, Repeats: 1}, 7.07e-3)
	add(p, "S", plan.Step{Frequency: 137, Tap: 1, Set: []int{0, 1}, Repeats: 1, Phase: math.Pi}, 3.535e-3)
	return p
}
