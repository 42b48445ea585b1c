package correct

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"testing"
	"time"

	"rungproof/calib/quantity"
)

// A faulty detector is calibrated, with the errors that the calibration states, and
// its readings are corrected: the intervals hold the true voltage in 95 % of the
// draws. Of 10 000, the fraction has a standard deviation of 0.22 % (binomial).
func TestIntervalsHoldTheTruth(t *testing.T) {
	const draws = 10_000
	for _, test := range []struct {
		name             string
		g, ug, o, uo, r  float64 // offset in V rms
		toRMS, fullScale float64
		share            bool
		drift            *Drift
		unit             string
		worth            float64
	}{
		{name: "gain and offset", g: 1.03, ug: 0.002, o: 4e-6, uo: 3e-7, toRMS: 1, unit: "µV", worth: 1e-6},
		{name: "correlated, peak", g: 0.94, ug: 0.001, o: -2e-5, uo: 4e-6, r: -0.8, toRMS: 1 / math.Sqrt2, unit: "mV", worth: 1e-3 / math.Sqrt2},
		{name: "share of range, drift", g: 1.01, ug: 0.0005, o: 3e-5, uo: 1e-6, r: 0.5, toRMS: 1, fullScale: 0.01, share: true,
			drift: &Drift{PerYear: 0.002, U: 0.0004}, unit: "µVpk", worth: 1e-6 / math.Sqrt2},
	} {
		random := rand.New(rand.NewPCG(5, 17))
		calibrated := time.Date(2024, 3, 1, 0, 0, 0, 0, time.UTC)
		held := 0
		for range draws {
			a, b := random.NormFloat64(), random.NormFloat64()
			estimate := Calibration{
				ID: "1", Date: calibrated, K: 1.959964, ToRMS: test.toRMS, // the normal's 97.5 % quantile
				Gains:   []Gain{{Range: test.fullScale, Value: test.g + test.ug*a, U: test.ug, Correlation: test.r}},
				Offset:  test.o + test.uo*(test.r*a+math.Sqrt(1-test.r*test.r)*b),
				UOffset: test.uo,
			}
			o := Options{Column: "signal"}
			gain := test.g
			if test.share {
				estimate.OffsetShare, estimate.Offset, estimate.UOffset = true, estimate.Offset/test.fullScale, test.uo/test.fullScale
				o.Range = quantity.Plain(test.fullScale/test.toRMS, "V")
			}
			if test.drift != nil {
				const after = 1.5
				o.Drift, o.Date = true, calibrated.Add(time.Duration(after*365.25*24*float64(time.Hour)))
				estimate.Drift = &Drift{test.drift.PerYear + test.drift.U*random.NormFloat64(), test.drift.U}
				gain += test.drift.PerYear * after
			}
			truth := math.Pow(10, random.Float64()*3-5) // 10 µV to 10 mV
			reading := (gain*truth + test.o) / test.worth
			var out bytes.Buffer
			in := fmt.Sprintf("signal [%s]\n%.9g\n", test.unit, reading)
			if s, err := Stream(bytes.NewReader([]byte(in)), &out, &estimate, o); err != nil || s.Corrected != 1 {
				t.Fatal(s, err)
			}
			records, err := csv.NewReader(&out).ReadAll()
			if err != nil {
				t.Fatal(err)
			}
			corrected, err1 := strconv.ParseFloat(records[1][1], 64)
			expanded, err2 := strconv.ParseFloat(records[1][2], 64)
			if err1 != nil || err2 != nil {
				t.Fatal(records)
			}
			if math.Abs(corrected-truth/test.worth) <= expanded {
				held++
			}
		}
		share := float64(held) / draws
		t.Logf("%s: %.4f", test.name, share)
		if share < 0.94 || share > 0.96 {
			t.Errorf("%s: %.4f of the intervals hold the truth", test.name, share)
		}
	}
}
