package circuit

import (
	"math"
	"testing"
)

// One trial of a Monte Carlo simulation: 13 settings of a decade box under one top resistor, 26 drops at two amplitudes.
func BenchmarkCompiledTrial(b *testing.B) {
	l := &samples()[0].ladder
	c, err := l.Compile(1e3, []Variable{{ArmR, 0}, {ArmR, 1}})
	if err != nil {
		b.Fatal(err)
	}
	box := [13]float64{10, 20, 50, 100, 200, 500, 1e3, 2e3, 3e3, 5e3, 7e3, 9e3, 10e3}
	var drops [2 * len(box)]float64
	var setting Compiled
	top := []float64{1e6}
	b.ReportAllocs()
	for b.Loop() {
		c.Contract(top, &setting)
		for k, r := range box {
			h := math.Sqrt(setting.Squared(r))
			drops[2*k], drops[2*k+1] = 0.1*h, 7*h
		}
	}
}

func BenchmarkCompiledGradient3(b *testing.B) { benchmarkGradient(b, 3) }
func BenchmarkCompiledGradient8(b *testing.B) { benchmarkGradient(b, 8) }

func benchmarkGradient(b *testing.B, variables int) {
	c, x := compiledOf(b, variables)
	dh := make([]complex128, variables)
	b.ReportAllocs()
	for b.Loop() {
		c.Gradient(x, dh)
	}
}

func BenchmarkCompiledTransfer1(b *testing.B) { benchmarkTransfer(b, 1) }
func BenchmarkCompiledTransfer2(b *testing.B) { benchmarkTransfer(b, 2) }
func BenchmarkCompiledTransfer8(b *testing.B) { benchmarkTransfer(b, 8) }

func benchmarkTransfer(b *testing.B, variables int) {
	c, x := compiledOf(b, variables)
	b.ReportAllocs()
	for b.Loop() {
		c.Transfer(x)
	}
}

func BenchmarkCompile8(b *testing.B) {
	l := &samples()[4].ladder
	for b.Loop() {
		if _, err := l.Compile(1e3, allVariables(l)[:8]); err != nil {
			b.Fatal(err)
		}
	}
}

// compiledOf compiles a sample in so many of its numbers and gives their values.
func compiledOf(b testing.TB, variables int) (*Compiled, []float64) {
	l := &samples()[4].ladder
	all := allVariables(l)[:variables]
	c, err := l.Compile(1e3, all)
	if err != nil {
		b.Fatal(err)
	}
	var x []float64
	for _, v := range all {
		x = append(x, *v.In(l))
	}
	return c, x
}
