package calib

import (
	"math"
	"math/rand/v2"
	"testing"

	"rungproof/calib/plan"
)

// searching is the search before it has chosen anything.
func searching(t testing.TB, p *plan.Plan, what string) *search {
	t.Helper()
	m := perfect(p)
	known, err := m.known()
	if err != nil {
		t.Fatal(err)
	}
	all, err := p.Candidates()
	if err != nil {
		t.Fatal(err)
	}
	s, err := newSearch(m.extend(all, known), len(m.obs), asking(what, len(m.obs)), len(p.Steps)-1)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// No choice made by lot does as well in the same time.
func TestAdviceBeatsChance(t *testing.T) {
	p := casePlan(t, "one-amplitude")
	for _, what := range []string{OfOffset, OfSeries} {
		chosen := searching(t, p, what)
		const seconds = 60
		if _, err := chosen.run(seconds); err != nil {
			t.Fatal(err)
		}
		k := chosen.asked[0]
		random := rand.New(rand.NewPCG(1, 2))
		for range 100 {
			lot, left := searching(t, p, what), float64(seconds)
			for range 1000 {
				c, n := &lot.candidates[random.IntN(len(lot.candidates))], 1<<random.IntN(4)
				if time := lot.cost(c, n); n > c.n && time <= left {
					lot.take(c, n)
					left -= time
				}
			}
			if err := lot.update(); err != nil {
				t.Fatal(err)
			}
			if lot.cov.At(k, k) < chosen.cov.At(k, k) {
				t.Errorf("%s: a lot has a variance of %g, the advice %g", what, lot.cov.At(k, k), chosen.cov.At(k, k))
			}
		}
	}
}

// What falls is the logarithm of the covariance's determinant, as computed from the matrix itself.
func TestFallOfTheDeterminant(t *testing.T) {
	for _, name := range []string{"one-amplitude", "quadrature"} {
		s := searching(t, casePlan(t, name), "")
		det := func() float64 {
			a, b, c := s.asked[0], s.asked[1], s.asked[2]
			at := s.cov.At
			return at(a, a)*(at(b, b)*at(c, c)-at(b, c)*at(b, c)) - at(a, b)*(at(a, b)*at(c, c)-at(b, c)*at(a, c)) + at(a, c)*(at(a, b)*at(b, c)-at(b, b)*at(a, c))
		}
		for i := range 5 {
			c := &s.candidates[7*i]
			w := s.weight(c, 4)
			q, q1 := c.predicted(&s.cov), c.predicted(&s.given)
			want, before := q1.det(w)/q.det(w), det()
			s.take(c, 4)
			if err := s.update(); err != nil {
				t.Fatal(err)
			}
			// The matrix of the first, not separable, has but six digits.
			if got := det() / before; i > 0 && math.Abs(got/want-1) > 1e-5 {
				t.Errorf("%s: the determinant fell to %g, predicted %g", name, got, want)
			}
		}
	}
}
