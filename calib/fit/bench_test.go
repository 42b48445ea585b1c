package fit

import (
	"fmt"
	"testing"
)

func BenchmarkSolve(b *testing.B) {
	for _, size := range [][3]int{{52, 20, 17}, {10000, 20, 0}, {10000, 200, 0}} {
		b.Run(fmt.Sprintf("%dx%d", size[0], size[1]), func(b *testing.B) {
			p := sinhOfSum(size[0], size[1], size[2], 1, 1)
			for b.Loop() {
				b.ReportMetric(float64(mustSolve(b, p).Iterations), "steps")
			}
		})
	}
}
