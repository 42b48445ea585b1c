package uncertainty

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// GUM H.1, the end gauge, in nm and K: l = ls + d − ls·(δα·θ + αs·δθ). Figures "printed" are those of H.1.3 to H.1.6,
// table H.1; the fuller ones were recomputed from its inputs with numpy 1.24.
func TestGUMH1EndGauge(t *testing.T) {
	const ls = 50_000_623.0
	d := New([]Line{ // H.1.3.2
		{Name: "repeated observations", U: 5.8, Sensitivity: 1, DOF: 24},
		{Name: "random effects of the comparator", U: 3.9, Sensitivity: 1, DOF: 5},
		{Name: "its systematic effects", U: 6.7, Sensitivity: 1, DOF: 8},
	}, 0.95)
	within(t, "u(d), printed", d.U, 9.7, 0.05)
	within(t, "u(d)", d.U, 9.6819419540, 1e-9)
	within(t, "ν(d), printed, with the rounded u", d.DOF*math.Pow(9.7/d.U, 4), 25.6, 0.05)

	b := New([]Line{
		{Name: "ls", Value: ls, U: 25, DOF: 18, Sensitivity: 1, Unit: "nm"},
		{Name: "d", Value: 215, U: 9.7, DOF: 25.6, Sensitivity: 1, Unit: "nm"},
		{Name: "αs", Value: 11.5e-6, U: 1.2e-6, Shape: Rectangular, Sensitivity: 0, Unit: "1/K"},
		{Name: "θ", Value: -0.1, U: 0.41, Shape: Arcsine, Sensitivity: 0, Unit: "K"},
		{Name: "δα", U: 0.58e-6, Shape: Rectangular, DOF: 50, Sensitivity: -ls * -0.1, Unit: "1/K"},
		{Name: "δθ", U: 0.029, Shape: Rectangular, DOF: 2, Sensitivity: -ls * 11.5e-6, Unit: "K"},
	}, 0.99)
	for i, c := range []float64{25, 9.7, 0, 0, 2.9000361340, -16.6752077705} {
		within(t, "contribution of "+b.Lines[i].Name, b.Lines[i].Contribution, c, 1e-9)
	}
	within(t, "u, printed", b.U, 32, 0.5)
	within(t, "u", b.U, 31.7106096404, 1e-9)
	within(t, "ν, printed", b.DOF, 16.7, 0.05)
	within(t, "ν", b.DOF, 16.6560627030, 1e-3) // ν(d) is 25.6 here
	within(t, "U99, printed, with ν truncated", StudentFactor(0.99, math.Floor(b.DOF))*b.U, 93, 0.5)
	within(t, "the same", StudentFactor(0.99, math.Floor(b.DOF))*b.U, 92.6197659, 1e-6)
	within(t, "U99, ν as it is", b.Expanded, 92.1, 0.05)
	if want := "Student's t, 16.7 effective degrees of freedom"; b.Basis != want {
		t.Errorf("basis %q, want %q", b.Basis, want)
	}
}

// GUM G.4.1: y = b·x1·x2·x3, relative uncertainties in %; inputs and print from memory, recomputed with scipy 1.10.
func TestGUMG41WelchSatterthwaite(t *testing.T) {
	b := New([]Line{
		{Name: "x1", U: 0.25, Sensitivity: 1, DOF: 9},
		{Name: "x2", U: 0.57, Sensitivity: 1, DOF: 4},
		{Name: "x3", U: 0.82, Sensitivity: 1, DOF: 14},
	}, 0.95)
	within(t, "u, printed", b.U, 1.03, 0.005)
	within(t, "u", b.U, 1.0294658809, 1e-9)
	within(t, "ν, printed", b.DOF, 19.0, 0.05)
	within(t, "ν", b.DOF, 18.9987423, 1e-6)
	within(t, "t95(19), printed", StudentFactor(0.95, 19), 2.09, 0.005)
	within(t, "U95, printed", b.Expanded, 2.2, 0.05)
	within(t, "U95 with ν = 19", StudentFactor(0.95, 19)*b.U, 2.1546969, 1e-6)

	// Four equal contributions of 10 degrees of freedom each have 40 (GUM G.4.1, equation G.2b).
	within(t, "four equal", New(lines(Normal, 10, 3, 3, 3, 3), 0.95).DOF, 40, 1e-12)
}

// EA-4/02 M:2022 S2, a weight of 10 kg in mg: standard uncertainties as printed. With k = 2 the print has U = 59 mg;
// at 34.4 degrees of freedom it is 61 mg.
func TestEA402S2Weight(t *testing.T) {
	l := append(lines(Normal, 0, 22.5), lines(Rectangular, 0, 8.95, 5.77, 5.77)...)
	b := New(append(l, lines(Student, 2, 14.4)...), 0.9545)
	within(t, "u, printed", b.U, 29.3, 0.05)
	within(t, "ν", b.DOF, 34.4, 0.05)
	within(t, "2·u, printed", 2*b.U, 59, 0.5)
	within(t, "U", b.Expanded, 61, 0.5)
}

// EA-4/02 M:2022 S3, a resistor of 10 kΩ, in Ω: R = (Rs + δRd + δRts)·rc·r − δRtx. Print: 10 000.178 Ω, u = 8.33 mΩ,
// U = 17 mΩ with k = 2.
func TestEA402S3Resistor(t *testing.T) {
	root3, root6 := math.Sqrt(3), math.Sqrt(6)
	r := Summarise([]float64{1.0000104, 1.0000107, 1.0000106, 1.0000103, 1.0000105}, 0.95)
	within(t, "ratio, printed", r.Mean, 1.0000105, 0.5e-9)
	within(t, "its scatter, printed", r.SD, 0.158e-6, 0.5e-9)
	value := (10_000.053 + 0.020) * r.Mean
	within(t, "value, printed", value, 10_000.178, 0.5e-3)
	within(t, "value", value, 10_000.1780007665, 1e-9)
	b := New([]Line{
		{Name: "Rs", U: 2.5e-3, Sensitivity: r.Mean},
		{Name: "δRd", U: 10e-3 / root3, Shape: Rectangular, Sensitivity: r.Mean},
		{Name: "δRts", U: 2.75e-3 / root3, Shape: Rectangular, Sensitivity: r.Mean},
		{Name: "δRtx", U: 5.5e-3 / root3, Shape: Rectangular, Sensitivity: -1},
		{Name: "rc", U: 1.0e-6 / root6, Shape: Triangular, Sensitivity: 10_000.073 * r.Mean},
		{Name: "r", U: r.SD / math.Sqrt(5), DOF: 4, Sensitivity: 10_000.073},
	}, 0.9545)
	within(t, "u, printed", b.U, 8.33e-3, 0.005e-3)
	relative(t, "u", b.U, 8.3278716769e-3, 2e-5) // recomputed with sensitivities of 1 and 10 kΩ, which are up to 1.8e-5 more
	relative(t, "ν", b.DOF, 7.7e4, 0.01)
	within(t, "k, printed", b.K, 2, 0.005)
	within(t, "U, printed", b.Expanded, 17e-3, 0.5e-3)
}

// EA-4/02 M:2022 S9, a hand-held meter at 100 V, in mV: the last digit is ±50 mV. Print: u = 30 mV, U = 0.05 V with
// k = 1.65, the factor of a rectangle alone, because one rectangular line dominates. Limits from memory.
func TestEA402S9Meter(t *testing.T) {
	b := New([]Line{
		{Name: "reference", U: 1, Sensitivity: -1},
		{Name: "resolution", U: 50 / math.Sqrt(3), Sensitivity: 1, Shape: Rectangular},
		{Name: "drift of the reference", U: 11 / math.Sqrt(3), Sensitivity: -1, Shape: Rectangular},
	}, 0.95)
	within(t, "u, printed", b.U, 30, 0.5)
	within(t, "U, printed", b.Expanded, 50, 5)
	within(t, "coverage", boxes(b.Expanded, 50, 11, 1), 0.95, 1e-8)
	// 50.5597 mV by averaging a closed form over the 11 mV, in 2000 steps (CPython's math.erfc).
	within(t, "U", b.Expanded, 50.559693, 1e-5)
	if want := "convolution of the lines' shapes; resolution, rectangular, is the largest"; b.Basis != want {
		t.Errorf("basis %q, want %q", b.Basis, want)
	}
}

// EA-4/02 M:2022 S11, a block calibrator at 180 °C, in mK: standard uncertainties as printed; all but the first
// rectangular (from memory). Print: u = 164 mK, U = 0.3 K with k = 1.81, where a trapezoid of its two largest lines,
// 250 mK and 100 mK, has 1.797.
func TestEA402S11Block(t *testing.T) {
	all := append(lines(Normal, 0, 15), lines(Rectangular, 0, 10, 23, 29, 58, 144, 29, 17)...)
	b := New(all, 0.95)
	within(t, "u, printed", b.U, 164, 0.5)
	within(t, "U, printed", b.Expanded, 300, 50)
	two := lines(Rectangular, 0, 250/math.Sqrt(3), 100/math.Sqrt(3))
	within(t, "k of the trapezoid", ConvolutionFactor(two, 0.95), 1.7966, 0.5e-4)
	// No one line dominates by the rule of New; the convolution lies between the trapezoid and the normal factor.
	if k := ConvolutionFactor(all, 0.95); k < 1.797 || k > 1.96 || !strings.HasPrefix(b.Basis, "normal") {
		t.Errorf("k = %v by convolution; New takes the %s", k, b.Basis)
	}
}

// The rule for the factor changes where all others have 0.3 of the uncertainty of one line with limits.
func TestDominance(t *testing.T) {
	for _, c := range []struct {
		normal float64
		want   string
	}{{0.299, "convolution"}, {0.301, "normal"}} {
		b := New(append(lines(Rectangular, 0, 1), lines(Normal, 0, c.normal)...), 0.95)
		if !strings.HasPrefix(b.Basis, c.want) {
			t.Errorf("a normal line of %g beside a rectangular of 1: %s, want %s", c.normal, b.Basis, c.want)
		}
	}
	certain := New(lines(Rectangular, 0, 0, 0), 0.95)
	if certain.U != 0 || certain.Expanded != 0 || !math.IsInf(certain.DOF, 1) || certain.Lines[1].Share != 0 {
		t.Errorf("nothing uncertain: %+v", certain)
	}
}

// The contributions' squares add up to u², the shares to 1, and ν is between the smallest and the sum of the lines'
// (GUM G.4.1, note 1). The lines given stay as they were.
func TestBudgetAddsUp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		given := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) Line {
			return Line{U: rapid.Float64Range(0.01, 10).Draw(t, "u"), Sensitivity: rapid.Float64Range(-2, 2).Draw(t, "c") + 2.1,
				Shape: Normal, DOF: rapid.Float64Range(1, 50).Draw(t, "ν")}
		}), 1, 8).Draw(t, "lines")
		b := New(given, 0.95)
		squares, shares, least, sum := 0.0, 0.0, math.Inf(1), 0.0
		for i, l := range b.Lines {
			squares += l.Contribution * l.Contribution
			shares += l.Share
			least, sum = min(least, l.DOF), sum+l.DOF
			if given[i].Contribution != 0 {
				t.Fatal("the lines given were changed")
			}
		}
		relative(t, "u", b.U, math.Sqrt(squares), 1e-14)
		within(t, "shares", shares, 1, 1e-14)
		if b.DOF < least*(1-1e-12) || b.DOF > sum*(1+1e-12) {
			t.Errorf("ν = %v of lines from %v on that sum to %v", b.DOF, least, sum)
		}
	})
}
