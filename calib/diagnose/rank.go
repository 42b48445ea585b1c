package diagnose

import (
	"math"
	"slices"
	"sort"

	"gonum.org/v1/gonum/stat/distuv"

	"rungproof/calib"
	"rungproof/calib/detector"
)

// falseAlarm is the probability that clean readings make this search name any
// cause at all. It is shared out between the causes (Bonferroni's inequality), and
// within a cause between its variants (Šidák 1967): so the critical value is a
// bound of that of the largest statistic of all.
const falseAlarm = 0.025

// mostCauses is how many causes are looked for, one after another.
const mostCauses = 5

// ranked is a cause that the readings show, found beside the ones before it.
type ranked struct {
	cause
	variant variant
	size, u float64
	fall    float64 // of χ², as it is
	tested  float64 // the same over the scale of the F test
	p       float64 // probability of as large a fall by chance, over all variants of the cause
	rivals  []rival // other causes that explain nearly as much
}

// rival is another cause and its Akaike weight beside the chosen one's.
type rival struct {
	kind, label string
	weight      float64
	size        float64 // in its variant's unit
}

// search looks for causes: the clean hypothesis first, then with the best cause
// added to it, as long as one is beyond chance. It gives χ² of the clean one too.
func search(e *calib.Evaluation) (found []ranked, clean, left *calib.Hypothesis) {
	clean, err := e.Suppose()
	if err != nil {
		return nil, nil, nil // nothing to compare with: the other findings stand
	}
	all := causes(e)
	left = clean
	var terms []calib.Term
	used := map[string]bool{}
	for len(found) < mostCauses {
		scores := contest(left, all, used)
		if len(scores) == 0 || scores[0].p > falseAlarm/float64(len(all)) {
			break
		}
		next := refit(e, terms, left, scores)
		if next == nil {
			break
		}
		commonest(scores)
		if chosen := scores[0].fitted; chosen != nil {
			next = chosen
		}
		best := &scores[0].ranked
		best.rivals = rivals(best, scores)
		terms = append(terms, best.variant.on(left))
		used[best.kind+best.variant.label] = true
		found, left = append(found, *best), next
	}
	for i := range found {
		found[i].size, found[i].u = left.Size[i], left.U[i]
	}
	// A later cause can make an earlier one void.
	found = slices.DeleteFunc(found, func(r ranked) bool { return math.Abs(r.size) < 2*r.u })
	return found, clean, left
}

// scored is the best variant of a cause, with its fall of χ² less what the search
// through the variants is worth (twice the logarithm of their number).
type scored struct {
	ranked
	score  float64
	tried  int
	fitted *calib.Hypothesis // where it was fitted in full
}

// rivalSize is the size that the cause would have in the place of the best.
func (s *scored) rivalSize() float64 {
	if s.fitted != nil {
		return s.fitted.Size[len(s.fitted.Size)-1]
	}
	return s.size
}

// finalists is how many causes are fitted in full before one is chosen: beside
// gross errors the inputs are bent so far that the first-order fall misleads.
const finalists = 6

// refit fits the hypothesis with each of the best causes added, sorts them by what
// they then come to, and gives the best fit; nil where none settles.
func refit(e *calib.Evaluation, terms []calib.Term, h *calib.Hypothesis, scores []scored) *calib.Hypothesis {
	for i := range scores[:min(finalists, len(scores))] {
		s := &scores[i]
		next, err := e.Suppose(append(terms[:len(terms):len(terms)], s.variant.on(h))...)
		if err != nil {
			s.score = math.Inf(-1)
			continue
		}
		if size, u := next.Size[len(next.Size)-1], next.U[len(next.U)-1]; s.variant.whole && math.Abs(size-1) > math.Max(0.15, 3*u) {
			s.score = math.Inf(-1) // half a swap is something else
			continue
		}
		s.fitted = next
		fall := h.ChiSquared - next.ChiSquared
		s.fall, s.tested = fall, fall/scale(h, fall)
		s.score = s.tested - 2*math.Log(float64(s.tried))
	}
	sort.SliceStable(scores, func(i, j int) bool { return scores[i].score > scores[j].score })
	return scores[0].fitted
}

// commonest puts a commoner cause first that explains as much, to a weight of e⁻¹.
func commonest(scores []scored) {
	for k, s := range scores {
		if scores[0].score-s.score < 2 && common[s.kind] > common[scores[0].kind] && s.fitted != nil {
			scores[0], scores[k] = scores[k], scores[0]
		}
	}
}

// contest tries every variant of every cause on a hypothesis.
func contest(h *calib.Hypothesis, all []cause, used map[string]bool) []scored {
	var out []scored
	for _, c := range all {
		var best *scored
		tried := 0
		for _, v := range c.variants {
			if used[c.kind+v.label] {
				continue
			}
			s, ok := v.try(h)
			if !ok {
				continue
			}
			tried++
			tested := s.Fall / scale(h, s.Fall)
			if best == nil || tested > best.tested {
				best = &scored{ranked: ranked{cause: c, variant: v, size: s.Size, u: s.U, fall: s.Fall, tested: tested}}
			}
		}
		if best == nil {
			continue
		}
		one := distuv.ChiSquared{K: 1}.Survival(best.tested)
		best.p = -math.Expm1(float64(tried) * math.Log1p(-one))
		best.tried = tried
		best.score = best.tested - 2*math.Log(float64(tried))
		out = append(out, *best)
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].score > out[j].score })
	return out
}

// common orders the causes that are met most (common practice): where two explain
// as much, the commoner one is named and the other as its rival.
var common = map[string]int{Gain: 4, Offset: 3, Series: 2, RangeGain: 1, OneSetting: 1, ReturnSeries: 1}

// scale makes the test of one more term an F test where the readings fit worse
// than their uncertainties say, even with it: χ² left over its degrees of freedom.
func scale(h *calib.Hypothesis, fall float64) float64 {
	if h.DOF < 3 {
		return 1
	}
	return math.Max(1, (h.ChiSquared-fall)/float64(h.DOF-1))
}

// rivals are the causes whose Akaike weight is at least a twentieth of the best's;
// every alternative has one parameter, so that AICc's correction is common to all.
func rivals(best *ranked, all []scored) []rival {
	var out []rival
	for _, s := range all[1:] {
		if w := math.Exp((s.score - all[0].score) / 2); w > 0.05 && s.kind != best.kind {
			out = append(out, rival{s.kind, s.variant.label, w, s.rivalSize()})
		}
	}
	return out
}

// riceExcess is what all the stated noise power once more would add to a
// magnitude's mean.
func riceExcess(s, noise float64) float64 {
	if noise == 0 {
		return 0
	}
	more, _ := detector.RiceMean(s, noise*math.Sqrt2)
	stated, _ := detector.RiceMean(s, noise)
	return more - stated
}
