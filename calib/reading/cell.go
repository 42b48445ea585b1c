package reading

import (
	"errors"
	"math"
	"strconv"
	"strings"
	"time"

	"rungproof/calib/fault"
	"rungproof/calib/quantity"
)

// fault notes what is wrong with the cell of a column in the row at hand.
func (t *table) fault(at int, format string, args ...any) *fault.Fault {
	line, column := t.csv.FieldPos(at)
	where := ""
	if at < len(t.header.names) {
		where = t.header.names[at]
	}
	return t.faults.add(line, t.faults.character(line, column), where, format, args...)
}

func (t *table) stepOf() (step int, known bool) {
	at := t.header.step
	id := t.record[at]
	if step, known = t.steps[id]; known {
		return step, true
	}
	if id == "" {
		t.fault(at, "the cell is empty; every row names its step")
		return 0, false
	}
	f := t.fault(at, "the plan has no step %q", id)
	if t.faults.more > 0 {
		return 0, false // the search for a hint takes long, and it is not shown
	}
	ids := make([]string, len(t.plan.Steps))
	for i, s := range t.plan.Steps {
		ids[i] = s.ID
	}
	if near := fault.Nearest(id, ids); near != "" {
		f.Hints = []string{"the nearest is " + near}
	}
	return 0, false
}

// rangeOf is the range that the row names; planned where it names none that the detector has.
func (t *table) rangeOf(planned int) int {
	c := &t.header.onRange
	v, ok := t.number(c)
	if !ok {
		return planned
	}
	d := &t.plan.Detector
	x, nearest := inRMS(v, d.ToRMS), 0
	for i, r := range d.Ranges {
		if equal(x, r) {
			return i
		}
		if math.Abs(x-r) < math.Abs(x-d.Ranges[nearest]) {
			nearest = i
		}
	}
	t.fault(c.at, "the detector has no range %q", t.record[c.at]).Hints = []string{"the nearest is " + exact(d.Ranges[nearest]/d.ToRMS, "V")}
	return planned
}

func (t *table) flagOf() string {
	cell := t.record[t.header.flag]
	for _, known := range []string{"", Overload, Unlocked} {
		if strings.EqualFold(cell, known) {
			return known
		}
	}
	t.fault(t.header.flag, "no such flag as %q; a flag is %s, %s or empty", cell, Overload, Unlocked)
	return ""
}

func (t *table) timeOf() time.Time {
	cell := t.record[t.header.time]
	if cell == "" {
		return time.Time{}
	}
	at, err := time.Parse(time.RFC3339, cell)
	if err != nil {
		t.fault(t.header.time, "%q is no time; one is written like 2026-03-12T14:05:00Z or 2026-03-12T15:05:00+01:00 (RFC 3339)", cell)
	}
	return at
}

// number is the quantity in a column of the row at hand, which is not empty.
func (t *table) number(c *column) (quantity.Value, bool) {
	cell := t.record[c.at]
	v, err := c.parse(cell, t.separator == ';')
	switch {
	case err != nil:
		f := t.fault(c.at, "%v", err)
		if t.separator != ';' && strings.ContainsRune(cell, ',') {
			f.Hints = []string{"a decimal comma is taken only where semicolons part the cells"}
		}
	case math.IsInf(v.X, 0):
		t.fault(c.at, "%q is too large", cell)
	case v.HasU:
		t.fault(c.at, "%q states an uncertainty; here it is a number alone", cell)
	case c.name == colOutput && v.Convention != quantity.Unstated:
		t.fault(c.at, "the output is a direct voltage, and %q says an alternating one", cell)
	default:
		return v, true
	}
	return v, false
}

// parse takes a bare number in the unit of the column, or a quantity with its own.
func (c *column) parse(cell string, decimalComma bool) (quantity.Value, error) {
	if decimalComma && strings.Count(cell, ",") == 1 && !strings.ContainsRune(cell, '.') {
		cell = strings.Replace(cell, ",", ".", 1)
	}
	if rest, ok := strings.CutPrefix(cell, "−"); ok { // the minus of typesetting
		cell = "-" + rest
	}
	if x, ok := plain(cell); ok {
		v := c.unit
		v.X *= x
		return v, nil
	}
	return quantity.Parse(cell, c.kind)
}

// plain is a decimal number without a unit. What strconv takes beyond that
// (NaN, Inf, hexadecimal) is none.
func plain(cell string) (float64, bool) {
	for i := 0; i < len(cell); i++ {
		switch c := cell[i]; {
		case '0' <= c && c <= '9', c == '.', c == '-', c == '+', c == 'e', c == 'E':
		default:
			return 0, false
		}
	}
	x, err := strconv.ParseFloat(cell, 64) // infinite where the number is too large
	return x, err == nil || errors.Is(err, strconv.ErrRange)
}

// inRMS is a voltage in V rms: by the convention it states, else by the detector's.
func inRMS(v quantity.Value, toRMS float64) float64 {
	if v.Convention != quantity.Unstated {
		toRMS = v.Convention.ToRMS()
	}
	return v.X * toRMS
}

// equal tells whether two settings are the same but for rounding; exact writes twelve digits.
func equal(a, b float64) bool { return math.Abs(a-b) <= 1e-9*max(math.Abs(a), math.Abs(b)) }
