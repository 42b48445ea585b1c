package reading

import (
	"slices"
	"strings"

	"rungproof/calib/fault"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

// The columns that a file may have beside the settings.
const (
	colStep     = "step"
	colX        = "x"
	colY        = "y"
	colR        = "r"
	colTheta    = "theta"
	colOutput   = "output"
	colTime     = "time"
	colFlag     = "flag"
	colNote     = "note"
	colExpected = "expected"
)

var fixedColumns = []string{colStep, colX, colY, colR, colTheta, colOutput, colTime, colFlag, colNote, colExpected}

// valueKind says what the columns of a reading hold.
var valueKind = map[string]quantity.Kind{
	colX: quantity.Voltage, colY: quantity.Voltage, colR: quantity.Voltage, colOutput: quantity.Voltage, colTheta: quantity.Angle,
}

// ways are the columns that a reading may be written in, the usual one first.
func ways(reads string) [][]string {
	switch reads {
	case plan.InPhase:
		return [][]string{{colX}, {colOutput}, {colR, colTheta}}
	case plan.Magnitude:
		return [][]string{{colR}, {colOutput}}
	case plan.TwoPhase:
		return [][]string{{colX, colY}, {colR, colTheta}}
	}
	panic("reading: a detector that reads " + reads)
}

// column is one with quantities in it.
type column struct {
	name string
	at   int // index in the row
	kind quantity.Kind
	unit quantity.Value // what a bare 1 in it is worth
}

// header says where in a row everything stands; an index is -1 for what the file does not have.
type header struct {
	names                  []string // of the columns; "" for one without a name
	step, time, flag, note int
	onRange                column   // the range that the reading was taken on
	values                 []column // of the reading, in the order of the file
	settings               []settingColumn
}

type settingColumn struct {
	setting
	column column
}

// readHeader takes the row at hand for the header.
func (t *table) readHeader() {
	t.header = header{step: -1, time: -1, flag: -1, note: -1, onRange: column{at: -1}}
	ofPlan := settings(t.plan)
	known := slices.Clone(fixedColumns)
	for _, s := range ofPlan {
		known = append(known, s.name)
	}
	names := make([]string, len(t.record))
	for at, cell := range t.record {
		if cell == "" {
			continue
		}
		name, unit := split(cell, known)
		if name == "" {
			t.unknownColumn(at, known)
			names[at] = strings.Clone(cell)
			continue
		}
		if before := slices.Index(names, name); before >= 0 {
			t.fault(at, "the column %s is there twice, before as column %d of the table", name, before+1)
			names[at] = name
			continue
		}
		names[at] = name
		t.place(name, at, unit, ofPlan)
	}
	t.checkHeader()
	t.header.names = names
}

// place notes where a column stands.
func (t *table) place(name string, at int, unit string, ofPlan []setting) {
	h := &t.header
	if kind, ok := valueKind[name]; ok {
		h.values = append(h.values, t.column(name, at, kind, unit))
		return
	}
	k := slices.IndexFunc(ofPlan, func(s setting) bool { return s.name == name })
	if k >= 0 && !ofPlan[k].named {
		c := t.column(name, at, ofPlan[k].kind, unit)
		if name == colRange {
			h.onRange = c
		} else {
			h.settings = append(h.settings, settingColumn{ofPlan[k], c})
		}
		return
	}
	if k >= 0 {
		h.settings = append(h.settings, settingColumn{ofPlan[k], column{name: name, at: at}})
	}
	switch name {
	case colStep:
		h.step = at
	case colTime:
		h.time = at
	case colFlag:
		h.flag = at
	case colNote:
		h.note = at
	case colExpected:
		return // for the eye only, in whatever unit
	}
	if unit != "" {
		t.fault(at, "the column %s takes no unit, and %q is given", name, unit)
	}
}

// checkHeader checks that the steps and one whole reading are there.
func (t *table) checkHeader() {
	h := &t.header
	line, _ := t.csv.FieldPos(0)
	if h.step < 0 {
		t.faults.add(line, 0, "", "the header has no column step; the first line is a header such as step,%s [µV]", strings.Join(ways(t.plan.Detector.Reads)[0], " [µV],"))
	}
	have := []string{}
	for _, c := range h.values {
		have = append(have, c.name)
	}
	needed, fits := []string{}, false
	for _, way := range ways(t.plan.Detector.Reads) {
		fits = fits || len(have) == len(way) && !slices.ContainsFunc(way, func(s string) bool { return !slices.Contains(have, s) })
		needed = append(needed, strings.Join(way, " and "))
	}
	if !fits {
		found := "none"
		if len(have) > 0 {
			found = strings.Join(have, " and ")
		}
		t.faults.add(line, 0, "", "the detector reads %q: a reading is written as %s, and in no second way beside it; the header has %s",
			t.plan.Detector.Reads, strings.Join(needed, ", or "), found)
	}
	if k := slices.Index(have, colOutput); k >= 0 && t.plan.Detector.Output == nil {
		t.fault(h.values[k].at, "the plan states no analogue output").Hints = []string{`add output = { full_scale = "10 V" } to its [detector], with what the output really gives`}
	}
}

func (t *table) unknownColumn(at int, known []string) {
	name, _ := bracket(t.record[at])
	f := t.fault(at, "no such column as %q", t.record[at])
	if near := fault.Nearest(name, known); near != "" {
		f.Hints = []string{"the nearest known one is " + near}
	} else {
		f.Hints = []string{"known are " + strings.Join(known, ", ")}
	}
}

// column is one with quantities in the unit of its header, or where the header
// has none, in the unit without prefix; angles are then in degrees.
func (t *table) column(name string, at int, kind quantity.Kind, unit string) column {
	c := column{name: name, at: at, kind: kind, unit: quantity.Value{X: 1}}
	if unit == "" && kind == quantity.Angle {
		unit = "deg"
	}
	if unit == "" {
		return c
	}
	one, err := quantity.Parse("1 "+unit, kind)
	switch {
	case err != nil:
		t.fault(at, "%q is no unit for the column %s, %v; the column is written like %s [%s]", unit, name, kind, name, kind.Unit())
	case name == colOutput && one.Convention != quantity.Unstated:
		t.fault(at, "the output is a direct voltage, and %q says an alternating one", unit)
	default:
		c.unit = one
	}
	return c
}

// split parts a header cell into the known column and the unit behind it, in
// brackets or parentheses. A name may be written with other capitals, and with
// spaces or hyphens for its underscores.
func split(cell string, known []string) (name, unit string) {
	short, unit := bracket(cell)
	for _, try := range []struct{ name, unit string }{{cell, ""}, {short, unit}} {
		for _, loose := range []bool{false, true} {
			for _, k := range known {
				if try.name == k || loose && canonical(try.name) == canonical(k) {
					return k, try.unit
				}
			}
		}
	}
	return "", ""
}

func bracket(cell string) (name, unit string) {
	for _, pair := range []string{"[]", "()"} {
		open := strings.LastIndex(cell, pair[:1])
		if open > 0 && strings.HasSuffix(cell, pair[1:]) {
			return strings.TrimSpace(cell[:open]), strings.TrimSpace(cell[open+1 : len(cell)-1])
		}
	}
	return cell, ""
}

func canonical(name string) string {
	return strings.NewReplacer(" ", "_", "-", "_").Replace(strings.ToLower(name))
}
