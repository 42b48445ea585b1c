package main

import (
	"fmt"
	"math/rand/v2"
	"os"

	"rungproof/calib"
	"rungproof/calib/plan"
)

func main() {
	for _, c := range []struct {
		dir, col string
		scale    float64
		format   string
		t        calib.Truth
		seed     uint64
	}{
		{"examples/arrival", "x [µV]", 1e6, "%.6g", calib.Truth{Gain: 1.0007, Offset: 11e-9, Series: 0.031}, 1},
		{"examples/recalibration", "r [µV]", 1e6, "%.6g", calib.Truth{Gain: 0.9992, Offset: 2e-9, Series: 0.004, RangeGain: map[int]float64{3: 1.021}}, 2},
		{"examples/stray", "x [µV]", 1e6, "%.6g", calib.Truth{Gain: 1.002, Offset: 9e-9, Series: 0.36}, 3},
	} {
		src, _ := os.ReadFile(c.dir + "/plan.toml")
		p, err := plan.Parse(c.dir, src)
		if err != nil {
			fmt.Println(err)
			os.Exit(1)
		}
		set := calib.NewSimulator(p).Readings(c.t, rand.New(rand.NewPCG(c.seed, 77)))
		f, _ := os.Create(c.dir + "/readings.csv")
		fmt.Fprintf(f, "step,%s\n", c.col)
		for _, r := range set.Readings {
			fmt.Fprintf(f, "%s,"+c.format+"\n", p.Steps[r.Step].ID, r.X*c.scale)
		}
		f.Close()
	}
}
