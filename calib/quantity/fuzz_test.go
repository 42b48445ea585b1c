package quantity

import (
	"math"
	"testing"
)

// Parse never panics, and what it takes it takes again once written.
func FuzzParse(f *testing.F) {
	for k := Voltage; k <= Ratio; k++ {
		f.Add(k.Example(), int(k))
	}
	for _, s := range []string{"1.00021(15) MΩ", "119.8(1.5)e+3 \u2126", "0.1 % + 1e+3 Ω", "−.5(0)\u202fkohm", "1e-308 fΩ", "9(9)e307 Ω", "10 K\u212a"} {
		f.Add(s, int(Resistance))
	}
	f.Fuzz(func(t *testing.T, s string, kind int) {
		if kind < int(Voltage) || kind > int(Ratio) {
			return
		}
		k := Kind(kind)
		if spread, err := ParseSpread(s, k); err == nil && !(spread.Relative >= 0 && spread.Absolute >= 0) {
			t.Errorf("%q is the uncertainty %+v", s, spread)
		}
		v, err := Parse(s, k)
		if err != nil {
			return
		}
		if !finite(v.X) || !finite(v.U) || v.U < 0 || v.U > 0 && !v.HasU {
			t.Fatalf("%q is %+v", s, v)
		}
		const smallest, largest = 1e-290, 1e290 // beyond, float64 itself has fewer digits or none
		if size := math.Abs(v.X); size > largest || size != 0 && size < smallest {
			return
		}
		again, err := Parse(Format(v.X, 17, k.Unit()), k)
		if err != nil || math.Abs(again.X-v.X) > 1e-15*math.Abs(v.X) {
			t.Errorf("%q is %+v, which is read again as %+v, %v", s, v, again, err)
		}
		if v.U < smallest || v.U > largest {
			return
		}
		again, err = Parse(Concise(v.X, v.U, k.Unit()), k)
		allowed := 0.05/0.995*v.U + 1e-15*math.Abs(v.X) // see TestConciseIsReadBack
		if err != nil || math.Abs(again.U-v.U) > allowed || math.Abs(again.X-v.X) > allowed {
			t.Errorf("%q is %+v, which is read again as %+v, %v", s, v, again, err)
		}
	})
}
