package plan

import (
	"math"
	"reflect"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"rungproof/circuit"
)

// nearly compares numbers that a conversion may have rounded.
var nearly = cmpopts.EquateApprox(1e-12, 0)

func check(t *testing.T, what string, got, want any) {
	t.Helper()
	if diff := cmp.Diff(want, got, nearly, cmpopts.EquateNaNs()); diff != "" {
		t.Errorf("%s (-want +got):\n%s", what, diff)
	}
}

// The figures follow from testdata/plans/full.toml by plan-format's definitions: a tolerance over √3, U over k, peak-to-peak over 2√2.
func TestEveryKey(t *testing.T) {
	p := mustParse(t, "full")
	none := Uncertainty{Shares: -1, Standard: -1}
	const pp = 2 * math.Sqrt2

	check(t, "head", []string{p.Title, p.Operator, p.Customer, p.Procedure, p.Condition, p.Humidity, p.WarmUp, p.Notes},
		[]string{"Every key", "Bench 1", "in house", "P-7, issue 2", "as left", "45 %", "2 h", "none"})
	check(t, "date", p.Date, time.Date(2026, 4, 1, 0, 0, 0, 0, time.UTC))
	check(t, "temperature", p.Temperature, Quantity{25, Uncertainty{Absolute: 1 / math.Sqrt(3), Shape: Rectangular, Shares: -1, Standard: -1}})

	check(t, "errors", p.Errors, []SharedError{
		{Name: "box", U: 1e-4 / math.Sqrt(3), Shape: Rectangular, Standard: -1},
		{Name: "scale", U: 2e-4 / 2.5, DOF: 30, Standard: 0},
	})
	check(t, "standards", p.Standards, []Standard{{Name: "meter", Description: "six digits", Serial: "9", Certificate: "C-1",
		Calibrated: time.Date(2025, 10, 1, 0, 0, 0, 0, time.UTC), Due: time.Date(2026, 10, 1, 0, 0, 0, 0, time.UTC)}})

	check(t, "generator", p.Generator, Generator{
		SourceResistance: Quantity{50, Uncertainty{Relative: 0.02 / math.Sqrt(3), Shape: Rectangular, Shares: -1, Standard: -1}},
		ShownAs:          "peak-to-peak", ShownFor: "matched load",
		Amplitude:    Uncertainty{Relative: 0.002, Shares: -1, Standard: -1},
		PerSetting:   Uncertainty{Relative: 0.001, Shares: -1, Standard: -1},
		PerFrequency: Uncertainty{Relative: 0.003 / math.Sqrt(3), Shape: Rectangular, DOF: 8, Shares: -1, Standard: -1},
		MaxAmplitude: 10 / pp,
		Amplitudes: []Amplitude{
			{Shown: "2 V", EMF: Quantity{4.002 / pp, Uncertainty{Absolute: 0.002 / pp, Shares: 1, Standard: 0}}, Measured: true},
			{Shown: "0 V", EMF: Quantity{0, none}},
			{Shown: "1 V", EMF: Quantity{0.7071, Uncertainty{Absolute: 0.0002, Shares: -1, Standard: -1}}, Measured: true, AtLadderInput: true},
			{Shown: "0.7071067811865476 Vpk", EMF: Quantity{1, none}}, // 1 V peak is 0.707 V rms; the open circuit has twice 0.5 V rms
		},
	})

	x := p.Detector
	check(t, "detector", x, Detector{
		Serial: "7", Description: "every key", Reads: TwoPhase, Displays: "peak", ToRMS: 1 / math.Sqrt2,
		Ranges: []float64{1 / math.Sqrt2, 0.1 / math.Sqrt2, 0.01 / math.Sqrt2}, Overrange: 0.1, Resolution: 1e-4,
		InputResistance:  Quantity{1e6, Uncertainty{Absolute: 1e5, Shares: -1, Standard: -1}},
		InputCapacitance: Quantity{30e-12, Uncertainty{Absolute: 2e-12, Shares: -1, Standard: -1}},
		Noise:            5e-9, CurrentNoise: 10e-15, InputMax: 10 / math.Sqrt2, TimeConstant: 0.1, Poles: 4, Stability: 2e-4, PhaseAlignment: 1e-3,
		Output: &Output{10, Uncertainty{Relative: 2e-4 / math.Sqrt(3), Absolute: 1e-3 / math.Sqrt(3), Shape: Rectangular, Shares: -1, Standard: -1}},
		Limits: []Limit{
			{Reading: 0.01, Gain: 0.005, Phase: math.Pi / 180, RangeFrom: 0.1 / math.Sqrt2, RangeTo: 1 / math.Sqrt2, FrequencyFrom: 10, FrequencyTo: 10e3, HasReading: true},
			{Range: 0.02, Gain: math.NaN(), Phase: math.NaN(), RangeTo: math.Inf(1), FrequencyTo: math.Inf(1), HasRange: true},
		},
	})
	check(t, "limit on 100 mV at 1 kHz", p.LimitAt(0.1/math.Sqrt2, 1e3).Reading, 0.01)
	check(t, "limit on 10 mV at 1 kHz", p.LimitAt(0.01/math.Sqrt2, 1e3).Range, 0.02)
	check(t, "fit", p.Fit.SeriesExpected, &Quantity{0.1, Uncertainty{Absolute: 0.1, Shares: -1, Standard: -1}})
	check(t, "fit", p.Fit, Fit{SeriesIn: "box", SeriesArm: 2, OffsetPerRange: true, Gain: "per range", SeriesExpected: p.Fit.SeriesExpected})
	check(t, "decision", p.Decision, Decision{Rule: "guarded", Guard: 0.8, Coverage: 0.99})
}

func TestEveryKeyOfArmsAndWires(t *testing.T) {
	p := mustParse(t, "full")
	none := Uncertainty{Shares: -1, Standard: -1}
	check(t, "arms", p.Arms, []Arm{
		{Name: "top", Place: Series, Nominal: []string{"100.02(3) kΩ"},
			Settings:    []Quantity{{100.02e3, Uncertainty{Absolute: 30, DOF: 12, Shares: 1, Standard: 0}}},
			Capacitance: Quantity{0.3e-12, none}, Inductance: Quantity{2e-6, none},
			TempCo:               Quantity{25e-6, Uncertainty{Absolute: 5e-6, Shares: -1, Standard: -1}},
			ReferenceTemperature: 20, MaxPower: 0.25},
		{Name: "joint", Place: Tap, Capacitance: Quantity{0, none}, Inductance: Quantity{0, none}, TempCo: Quantity{0, none}, ReferenceTemperature: 23},
		{Name: "box", Place: Shunt, Open: true, Nominal: []string{"1 kΩ", "0.1 kΩ", "10 Ω"},
			Settings: []Quantity{
				{1000.2, Uncertainty{Absolute: 0.1, Shares: 0, Standard: -1}},
				{100.01, Uncertainty{Relative: 1e-3 / math.Sqrt(3), Shape: Rectangular, DOF: 20, Shares: 1, Standard: -1}},
				{10, Uncertainty{Relative: 1e-3 / math.Sqrt(3), Shape: Rectangular, DOF: 20, Shares: 0, Standard: -1}},
			},
			Capacitance: Quantity{0, none}, Inductance: Quantity{0, none}, TempCo: Quantity{0, none}, ReferenceTemperature: 23},
	})
	// 24 AWG: 84.213 Ω/km at 20 °C by ASTM B258 and 0.017241 Ω·mm²/m, which is 1/58 in full, 1.01965 times that at 25 °C; aluminium 28.264e-9 Ω·m, 0.00403 /K
	lead, common := p.Wires[0], p.Wires[2]
	if got, want := lead.Resistance.X, 84.213e-3/0.017241/58*1.01965; math.Abs(got/want-1) > 1e-5 {
		t.Errorf("lead: %g Ω, want %g", got, want)
	}
	check(t, "lead's uncertainty", lead.Resistance.U()/lead.Resistance.X, 0.05)
	check(t, "lead's coefficient", lead.TempCo, 0.00393/1.01965)
	check(t, "common", common.Resistance.X, 28.264e-9*2/1e-6*(1+0.00403*5))
	check(t, "cable", p.Wires[5].Capacitance, Quantity{150e-12, Uncertainty{Relative: 0.1 / 1.5, Shares: -1, Standard: -1}})

	l := p.Ladder(&p.Steps[0])
	check(t, "top at room temperature", l.Arms[0].R, 100.02e3*(1+25e-6*5))
	check(t, "top's lead", l.Arms[0].Lead, 20e-3)
	check(t, "stray", l.Arms[2].Stray, lead.Resistance.X+5e-3)
	check(t, "box's own terminals", l.Arms[2].Lead, 3e-3)
	check(t, "return", l.Return, 7e-3)
	check(t, "return that the detector sees", l.ReturnSeen, common.Resistance.X)
	check(t, "input", l.Input, circuit.Input{Lead: 0.1, R: 1e6, C: 184e-12})
	check(t, "source", l.Source, 50.0)
	check(t, "source where measured at the ladder's input", p.Ladder(&p.Steps[64]).Source, 0.0)
}

// What is left out states no uncertainty and names neither error nor standard.
func TestNothingIsSharedUnasked(t *testing.T) {
	p := mustParse(t, "one-amplitude")
	found := 0
	var walk func(path string, v reflect.Value)
	walk = func(path string, v reflect.Value) {
		if u, ok := v.Interface().(Uncertainty); ok {
			found++
			if u.Shares != -1 || u.Standard != -1 {
				t.Errorf("%s: shares %d, standard %d, want -1", path, u.Shares, u.Standard)
			}
			return
		}
		switch v.Kind() {
		case reflect.Struct:
			for i := range v.NumField() {
				if f := v.Type().Field(i); f.IsExported() {
					walk(path+"."+f.Name, v.Field(i))
				}
			}
		case reflect.Slice:
			for i := range v.Len() {
				walk(path, v.Index(i))
			}
		}
	}
	walk("Plan", reflect.ValueOf(*p))
	if found < 20 {
		t.Errorf("%d uncertainties seen, want all", found)
	}
}
