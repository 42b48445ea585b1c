package circuit

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// Copper wire tables, Ω per 1000 ft at 20 °C (NBS Handbook 100), and diameters by ASTM B258.
func TestCopperTable(t *testing.T) {
	const thousandFeet = 304.8 // m

	for _, row := range []struct{ gauge, diameter, area, table float64 }{ // AWG, mm, mm², Ω
		{18, 1.02369, 0.823047, 6.385}, {19, 0.91162, 0.652706, 8.051}, {20, 0.81182, 0.517619, 10.15},
		{21, 0.72295, 0.410491, 12.80}, {22, 0.64380, 0.325534, 16.14}, {23, 0.57332, 0.258160, 20.36},
		{24, 0.51056, 0.204730, 25.67}, {25, 0.45467, 0.162359, 32.37}, {26, 0.40489, 0.128756, 40.81},
		{27, 0.36057, 0.102108, 51.47}, {28, 0.32109, 0.080976, 64.90}, {29, 0.28594, 0.064217, 81.83},
		{30, 0.25464, 0.050926, 103.2},
	} {
		if got := GaugeDiameter(row.gauge) * 1e3; math.Abs(got-row.diameter) > 0.51e-5 {
			t.Errorf("AWG %g: diameter %.6f mm, want %.5f", row.gauge, got, row.diameter)
		}
		if got := GaugeArea(row.gauge) * 1e6; math.Abs(got-row.area) > 0.51e-6 {
			t.Errorf("AWG %g: area %.7f mm², want %.6f", row.gauge, got, row.area)
		}
		got, err := Conductor{"copper", GaugeArea(row.gauge), thousandFeet}.Resistance(20)
		if err != nil || math.Abs(got/row.table-1) > 0.0003 {
			t.Errorf("AWG %g: %.5g Ω, %v; want %.4g", row.gauge, got, err, row.table)
		}
	}
}

// ASTM B258 fixes the diameters of two gauges exactly: 0.4600 in for 0000 and 0.0050 in for 36.
func TestGaugesThatDefine(t *testing.T) {
	for gauge, inch := range map[float64]float64{-3: 0.4600, 36: 0.0050} {
		if got := GaugeDiameter(gauge); math.Abs(got/(inch*25.4e-3)-1) > 1e-12 {
			t.Errorf("AWG %g: %g m, want %g in", gauge, got, inch)
		}
	}
	if got, want := GaugeArea(20.5), math.Sqrt(GaugeArea(20)*GaugeArea(21)); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("AWG 20.5: %g m², want the geometric mean of its neighbours, %g", got, want)
	}
	for _, gauge := range []float64{-3.01, 40.01, math.NaN(), math.Inf(1)} {
		if got := GaugeArea(gauge); !math.IsNaN(got) {
			t.Errorf("AWG %g: %g m², want NaN", gauge, got)
		}
	}
}

// IEC 60028: 1 m of 1 mm² has 1/58 Ω at 20 °C, and 0.00393 of that more for each kelvin.
func TestTemperature(t *testing.T) {
	metre := Conductor{"copper", 1e-6, 1}
	for celsius, factor := range map[float64]float64{0: 0.9214, 20: 1, 23: 1.01179, 25: 1.01965, 65: 1.17685} {
		got, err := metre.Resistance(celsius)
		if err != nil || math.Abs(got*58-factor) > 1e-12 {
			t.Errorf("at %g °C: %.12g Ω, %v; want %g/58", celsius, got, err, factor)
		}
	}
	if got, err := metre.TemperatureCoefficient(); err != nil || math.Abs(got/(0.00393/58)-1) > 1e-12 {
		t.Errorf("dR/dT = %g Ω/K, %v; want 0.00393/58", got, err)
	}
	// IEC 60889 (from memory): hard-drawn aluminium has 61 % of the conductivity of annealed copper, 1.7241e-8 Ω·m.
	got, err := Conductor{"aluminium", 1e-6, 1}.Resistance(20)
	if err != nil || math.Abs(got/(1.7241e-2/0.61)-1) > 1e-5 {
		t.Errorf("aluminium: %g Ω, %v; want 28.264 mΩ", got, err)
	}
}

func TestConductorFaults(t *testing.T) {
	for _, c := range []struct {
		conductor Conductor
		celsius   float64
		says      string
	}{
		{Conductor{"unobtainium", 1e-6, 1}, 20, `"unobtainium", want one of: aluminium, copper`},
		{Conductor{"", 1e-6, 1}, 20, "aluminium, copper"},
		{Conductor{"copper", GaugeArea(41), 1}, 20, "gauges run from -3 to 40"},
		{Conductor{"copper", 0, 1}, 20, "0 m²"},
		{Conductor{"copper", 1e-6, -1}, 20, "-1 m"},
		{Conductor{"copper", 1e-6, math.NaN()}, 20, "NaN m"},
		{Conductor{"copper", 1e-6, 1}, -240, "more than -234.5 °C"}, // handbooks: −234.5 °C
		{Conductor{"copper", 1e-6, 1}, math.NaN(), "NaN °C"},
	} {
		if r, err := c.conductor.Resistance(c.celsius); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%+v at %g °C: %g Ω, error %v; want one that says %q", c.conductor, c.celsius, r, err, c.says)
		}
	}
	if _, err := (Conductor{"unobtainium", 1e-6, 1}).TemperatureCoefficient(); err == nil {
		t.Error("dR/dT of an unknown material is no error")
	}
	if names := Materials(); !slices.IsSorted(names) || !slices.Contains(names, "copper") {
		t.Errorf("materials %q, want them sorted and copper among them", names)
	}
}
