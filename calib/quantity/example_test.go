package quantity_test

import (
	"fmt"

	"rungproof/calib/quantity"
)

func ExampleParse() {
	v, err := quantity.Parse("1.00021(15) MΩ", quantity.Resistance)
	fmt.Println(v.X, v.U, err)
	_, err = quantity.Parse("10 KΩ", quantity.Resistance)
	fmt.Println(err)
	// Output:
	// 1.00021e+06 150 <nil>
	// "10 KΩ" has "KΩ" where "kΩ" would be right; a resistance is written like "10 kΩ"
}

func ExampleParseSpread() {
	s, err := quantity.ParseSpread("0.1 % + 10 mΩ", quantity.Resistance)
	fmt.Println(s.Relative, s.Absolute, err)
	fmt.Println(quantity.Format(s.Of(10e3), 4, "Ω"))
	// Output:
	// 0.001 0.01 <nil>
	// 10.01 Ω
}

func ExampleConvention_ToRMS() {
	v, _ := quantity.Parse("20 Vpp", quantity.Voltage)
	fmt.Println(quantity.Format(v.X*v.Convention.ToRMS(), 4, "V"))
	// Output: 7.071 V
}

func ExampleFormat() {
	fmt.Println(quantity.Format(0.0707107, 4, "V"))
	fmt.Println(quantity.Format(1.00021, 4, "1"))
	// Output:
	// 70.71 mV
	// 1.000
}

func ExamplePlain() {
	fmt.Println(quantity.Plain(1700, "Hz"))
	fmt.Println(quantity.Plain(0.09999999999999999, "V"))
	// Output:
	// 1.7 kHz
	// 100 mV
}

func ExampleConcise() {
	fmt.Println(quantity.Concise(1.00021e6, 150, "Ω"))
	fmt.Println(quantity.Concise(119.8e-9, 1.5e-9, "V"))
	// Output:
	// 1.00021(15) MΩ
	// 119.8(15) nV
}

func ExamplePlusMinus() {
	fmt.Println(quantity.PlusMinus(119.8e-9, 1.5e-9, "V"))
	// Output: (119.8 ± 1.5) nV
}

func ExampleSharePlusMinus() {
	fmt.Println(quantity.SharePlusMinus(0.00276, 0.00076))
	fmt.Println(quantity.SharePlusMinus(12.3e-6, 4.5e-6))
	// Output:
	// (0.276 ± 0.076) %
	// (12.3 ± 4.5) ppm
}

// The columns of a table or the axis of a plot share one prefix.
func ExamplePrefix() {
	scale, unit := quantity.Prefix(7e-5, "V")
	for _, v := range []float64{7e-5, 3.2e-6} {
		fmt.Printf("%.1f %s\n", v/scale, unit)
	}
	// Output:
	// 70.0 µV
	// 3.2 µV
}
