package plan

import (
	"encoding/csv"
	"math"
	"math/cmplx"
	"os"
	"strconv"
	"testing"

	"rungproof/circuit"
)

// mustParse reads one of the plans in testdata.
func mustParse(t testing.TB, name string) *Plan {
	t.Helper()
	source, err := os.ReadFile("testdata/plans/" + name + ".toml")
	if err != nil {
		t.Fatal(err)
	}
	p, err := Parse(name+".toml", source)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// The drops, phases and ranges were evaluated by another program from the same four plans.
func TestDropsOfThePlans(t *testing.T) {
	for name, steps := range map[string]int{"arrival": 52, "one-amplitude": 10, "quadrature": 30, "string": 12} {
		t.Run(name, func(t *testing.T) {
			p := mustParse(t, name)
			want := readDrops(t, name)
			if len(p.Steps) != steps || len(want) != steps {
				t.Fatalf("%d steps, evaluated %d, want %d", len(p.Steps), len(want), steps)
			}
			var work circuit.Workspace
			for i := range p.Steps {
				s, w := &p.Steps[i], want[i]
				l := p.Ladder(s)
				if err := l.Check(); err != nil {
					t.Fatal(err)
				}
				v := l.Transfer(s.Frequency, &work) * complex(p.Generator.Amplitudes[s.Amplitude].EMF.X, 0)
				if s.ID != w.id {
					t.Errorf("step %d is %s, want %s", i, s.ID, w.id)
				}
				if got := cmplx.Abs(v); math.Abs(got/w.drop-1) > 1e-9 {
					t.Errorf("%s: drop %.12g V, want %.12g", s.ID, got, w.drop)
				}
				if got := cmplx.Phase(v) * 180 / math.Pi; math.Abs(got-w.phase) > 1e-9 {
					t.Errorf("%s: phase %.12g°, want %.12g°", s.ID, got, w.phase)
				}
				if got := p.Detector.Ranges[s.Range]; math.Abs(got/w.fullScale-1) > 1e-9 || !s.Auto {
					t.Errorf("%s: range %g V, want %g", s.ID, got, w.fullScale)
				}
			}
		})
	}
}

type evaluated struct {
	id                     string
	drop, phase, fullScale float64 // V rms, °, V rms
}

func readDrops(t *testing.T, name string) (steps []evaluated) {
	f, err := os.Open("testdata/drops/" + name + ".csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	number := func(s string) float64 {
		x, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return x
	}
	for _, row := range rows[1:] {
		steps = append(steps, evaluated{row[0], number(row[1]), number(row[2]), number(row[3])})
	}
	return steps
}
