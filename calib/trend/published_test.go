package trend

import (
	"math"
	"testing"
)

// The thermometer of JCGM 100:2008, H.3: correction b/°C against temperature t/°C, here
// taken as years. Table H.6; expected values H.3.3 to H.3.5, and to more digits by numpy
// 1.24.
func thermometer(u float64) History {
	var h History
	for _, p := range [][2]float64{
		{21.521, -0.171}, {22.012, -0.169}, {22.512, -0.166}, {23.003, -0.159}, {23.507, -0.164}, {23.999, -0.165},
		{24.513, -0.156}, {25.002, -0.157}, {25.503, -0.159}, {26.010, -0.161}, {26.511, -0.160},
	} {
		h = append(h, Point{Time: at(p[0]), Value: p[1], U: u})
	}
	return h
}

// Without stated uncertainty the scatter is all there is, as in H.3.
func TestGUMThermometer(t *testing.T) {
	tr := must(Of(thermometer(0), Options{}))(t)
	near(t, "y2", tr.Drift.PerYear, 0.00218, 0.000005)
	near(t, "s(y2)", tr.Drift.U, 0.00067, 0.000005)
	near(t, "s", tr.Points[0].U, 0.0035, 0.00005)
	relative(t, "y2", tr.Drift.PerYear, 0.002182697739887278)
	relative(t, "s(y2)", tr.Drift.U, 0.000667938773227832)
	relative(t, "s", tr.Points[0].U, 0.003497563963505285)
	if !tr.Unstated || tr.DOF != 9 || tr.Drift.DOF != 9 {
		t.Errorf("unstated %v, %d and %d degrees of freedom; want true, 9 and 9", tr.Unstated, tr.DOF, tr.Drift.DOF)
	}
	p, _ := tr.At(at(30))
	near(t, "b(30 °C)", p.Error, -0.1494, 0.00005)
	near(t, "u", p.U, 0.0041, 0.00005)
	relative(t, "b(30 °C)", p.Error, -0.14937681273247738)
	relative(t, "u", p.U, 0.004138595752854947)
	p, _ = tr.At(at(20))
	relative(t, "y1", p.Error, -0.17120379013134998)
	relative(t, "s(y1)", p.U, 0.002877597835159954)

	// t(9) at 97.5 %, JCGM 100:2008, table G.2: 2.26.
	near(t, "half the 95 % interval", (tr.Drift.High-tr.Drift.Low)/2/tr.Drift.U, 2.262157, 0.0000005)

	// p of |t| = 3.2678 with 9 degrees of freedom lies between the two-sided 1 % and 0.2 %
	// points 3.250 and 4.297 of Student's tables.
	if p := tr.Drift.P; !(0.002 < p && p < 0.01) || !tr.Drift.Significant() {
		t.Errorf("p = %g, significant %v; want 0.002 to 0.01, true", p, tr.Drift.Significant())
	}
}

// A stated u of 1 mK is far too small: the Birge ratio makes of it the s of H.3, and all
// that follows.
func TestBirgeRatioRestoresTheScatter(t *testing.T) {
	tr := must(Of(thermometer(0.001), Options{}))(t)
	relative(t, "R", tr.Scale, 3.497563963505285)
	relative(t, "s(y2)", tr.Drift.U, 0.000667938773227832)
	relative(t, "spread", tr.Spread, math.Sqrt(3.497563963505285*3.497563963505285-1)*0.001)
	relative(t, "χ²", tr.ChiSquared, 1.10096583109297e-4/1e-6) // SSR of H.3, by numpy 1.24
}

// ISO/TS 28037:2010, 6.3: y against x with stated u(y), printed and recomputed with numpy
// 1.24. The intercept is the line at x = 0.
func TestISO28037(t *testing.T) {
	for _, c := range []struct {
		name                string
		y, u                [6]float64
		a, b, ua, ub, chi2  float64 // printed
		fa, fb, fua, fub, f float64
	}{
		{"equal weights", [6]float64{3.3, 5.6, 7.1, 9.3, 10.7, 12.1}, [6]float64{.5, .5, .5, .5, .5, .5},
			1.867, 1.757, 0.465, 0.120, 1.665,
			1.86666666666667, 1.75714285714286, 0.465474668125631, 0.119522860933439, 1.66476190476191},
		{"unequal weights", [6]float64{3.2, 4.3, 7.6, 8.6, 11.7, 12.8}, [6]float64{.5, .5, .5, 1, 1, 1},
			0.885, 2.057, 0.530, 0.178, 4.131,
			0.885232067510549, 2.05696202531646, 0.529708143508836, 0.177892016741205, 4.13080168776371},
	} {
		t.Run(c.name, func(t *testing.T) {
			var h History
			for i := range c.y {
				h = append(h, Point{Time: at(float64(i + 1)), Value: c.y[i], U: c.u[i]})
			}
			tr := must(Of(h, Options{}))(t)
			p, _ := tr.At(at(0))
			for _, v := range []struct {
				name               string
				got, printed, full float64
			}{{"a", p.Error, c.a, c.fa}, {"b", tr.Drift.PerYear, c.b, c.fb}, {"u(a)", p.U, c.ua, c.fua},
				{"u(b)", tr.Drift.U, c.ub, c.fub}, {"χ²", tr.ChiSquared, c.chi2, c.f}} {
				near(t, v.name, v.got, v.printed, 0.0005)
				relative(t, v.name, v.got, v.full)
			}
			if tr.DOF != 4 || tr.Scale != 1 || tr.Drift.DOF != 0 {
				t.Errorf("ν = %d, scale %g, Student's %d; want 4, 1 and normal (χ² is below its 95 %% limit 9.488)", tr.DOF, tr.Scale, tr.Drift.DOF)
			}
		})
	}
}
