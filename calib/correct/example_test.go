package correct_test

import (
	"fmt"
	"os"
	"strings"
	"time"

	"rungproof/calib/correct"
)

func ExampleStream() {
	const data = `# weir 3, upper float
time,x [µV],remark
08:00,70.71,
08:10,"71.2 mV",gate opened
08:20,-,no signal
`
	calibration := &correct.Calibration{
		ID: "17", Serial: "R-3", Verdict: "pass",
		Date:  time.Date(2026, 3, 12, 0, 0, 0, 0, time.UTC),
		Due:   time.Date(2027, 3, 12, 0, 0, 0, 0, time.UTC),
		Gains: []correct.Gain{{Value: 1.0040, U: 0.0006, From: 0.7e-6, To: 70e-3}},
		// 150 nV with a standard uncertainty of 9 nV
		Offset: 150e-9, UOffset: 9e-9,
		K: 2, ToRMS: 1,
	}
	summary, err := correct.Stream(strings.NewReader(data), os.Stdout, calibration, correct.Options{File: "weir.csv"})
	fmt.Println(summary.Rows, "rows,", summary.Corrected, "corrected,", err)
	for _, w := range summary.Warnings {
		fmt.Printf("%d × %s: %s\n", w.Rows, w.Kind, w.First)
	}
	// Output:
	// # weir 3, upper float
	// time,x [µV],remark,corrected [µV],U [µV],warning
	// 08:00,70.71,,70.279,0.086,
	// 08:10,"71.2 mV",gate opened,70.916 mV,0.085 mV,above the largest calibrated (70 mV)
	// 08:20,-,no signal,,,reading cannot be read
	// 3 rows, 2 corrected, <nil>
	// 1 × above the largest calibrated: weir.csv:4:7: x [µV]: 70.9162 mV is beyond 70 mV, the largest that the calibration 17 of 2026-03-12 read
	// 1 × reading cannot be read: weir.csv:5:7: x [µV]: "-" does not begin with a number; a voltage is written like "70.7 µV"
}
