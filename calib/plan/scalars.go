package plan

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"time"

	"github.com/pelletier/go-toml/v2/unstable"

	"rungproof/calib/fault"
)

// list is the items of a list that may not be empty; a scalar is a list of one, and a key left out is none.
func (d *decoder) list(n *node) []*node {
	switch {
	case n == nil:
		return nil
	case n.kind != unstable.Array:
		return []*node{n}
	case len(n.items) == 0:
		d.fault(n, "an empty list; give at least one value")
	}
	return n.items
}

// text is a string.
func (d *decoder) text(n *node) string {
	if n == nil {
		return ""
	}
	if n.kind != unstable.String {
		d.fault(n, "%s where text is due; text stands in double quotes%s", n.what(), quoted(n))
		return ""
	}
	return n.text
}

// name is a text that others may refer to: it may not be empty nor have spaces around it.
func (d *decoder) name(n *node) string {
	s := d.text(n)
	if n != nil && n.kind == unstable.String && (s == "" || s != strings.TrimSpace(s)) {
		d.fault(n, "%q is no name; a name has letters and no space at either end", s)
	}
	return s
}

// choice is one of a few words; the first where the key is left out.
func (d *decoder) choice(n *node, words ...string) string {
	if n == nil {
		return words[0]
	}
	s := d.text(n)
	if n.kind == unstable.String && !slices.Contains(words, s) {
		d.fault(n, "%q is not one of %s%s", s, quotedList(words), didYouMean(s, words))
		return words[0]
	}
	return cmp.Or(s, words[0])
}

// refer is the index of a name among those known, -1 where the key is left out or wrong.
func (d *decoder) refer(n *node, kind string, known []string) int {
	s := d.text(n)
	if n == nil || n.kind != unstable.String {
		return -1
	}
	for i, k := range known {
		if k == s {
			return i
		}
	}
	there := "there is none"
	if len(known) > 0 {
		there = "known: " + quotedList(known)
	}
	d.fault(n, "no %s is called %q; %s%s", kind, s, there, didYouMean(s, known))
	return -1
}

// number is a bare number; missing where the key is left out.
func (d *decoder) number(n *node, missing float64, right string, holds func(float64) bool) float64 {
	if n == nil {
		return missing
	}
	x, err := strconv.ParseFloat(strings.ReplaceAll(n.text, "_", ""), 64)
	if n.kind != unstable.Integer && n.kind != unstable.Float || err != nil || math.IsNaN(x) || math.IsInf(x, 0) || !holds(x) {
		d.fault(n, "%s, want %s", n.what(), right)
		return missing
	}
	return x
}

// count is a whole number from 1 to most.
func (d *decoder) count(n *node, missing, most int) int {
	right := fmt.Sprintf("a whole number from 1 to %d, without quotes", most)
	return int(d.number(n, float64(missing), right, func(x float64) bool {
		return x == math.Trunc(x) && x >= 1 && x <= float64(most)
	}))
}

// flag is true or false.
func (d *decoder) flag(n *node, missing bool) bool {
	if n == nil {
		return missing
	}
	if n.kind != unstable.Bool {
		d.fault(n, "%s, want true or false without quotes", n.what())
		return missing
	}
	return n.text == "true"
}

// date is a day, as TOML writes it or in quotes.
func (d *decoder) date(n *node) time.Time {
	if n == nil {
		return time.Time{}
	}
	t, err := time.Parse(time.DateOnly, n.text)
	if err != nil || n.kind != unstable.LocalDate && n.kind != unstable.String {
		d.fault(n, "%s is no date; a date is written 2026-03-12", strings.TrimPrefix(n.what(), "the date "))
	}
	return t
}

// didYouMean names the nearest known word, ready to stand behind a message; "" where none is near.
func didYouMean(s string, known []string) string {
	if near := fault.Nearest(s, known); near != "" {
		return fmt.Sprintf("; did you mean %q?", near)
	}
	return ""
}

func quotedList(words []string) string {
	q := make([]string, len(words))
	for i, w := range words {
		q[i] = strconv.Quote(w)
	}
	return strings.Join(q, ", ")
}

// quoted shows how a bare scalar would stand in quotes.
func quoted(n *node) string {
	if n.kind == unstable.Table || n.kind == unstable.Array {
		return ""
	}
	return ": " + strconv.Quote(n.text)
}
