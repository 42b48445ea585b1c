// Package reading takes in the readings of a plan's steps, a CSV file, and
// writes the bench sheet that they can be noted on.
//
// A file has a header line and one row a reading. In the file, voltages are in
// the convention that the detector displays (plan.Detector.ToRMS), unless a
// unit says its own; in a Set they are V rms, and signed: an in-phase reading
// at 180° is negative. What the file says beside the readings (frequency,
// settings of the arms and so on) is checked against the plan.
//
// All that is wrong with a file is reported at once, as a fault.List.
package reading

import (
	"bytes"
	"encoding/csv"
	"errors"
	"io"
	"math"
	"strings"
	"time"

	"rungproof/calib/fault"
	"rungproof/calib/plan"
)

// Reading is one row of the file.
type Reading struct {
	Step   int       // index in Plan.Steps
	X, Y   float64   // V rms; X alone for an in-phase detector; a magnitude stands in X
	Range  int       // index in Detector.Ranges it was taken on, the step's own where the file says nothing
	Output bool      // taken at the analogue output
	Time   time.Time // zero where not stated
	Flag   string    // Overload, Unlocked or ""
	Note   string
	Line   int // in the file, from 1
}

// What a detector signals beside its reading. Flagged readings are kept.
const (
	Overload = "overload"
	Unlocked = "unlocked"
)

// Set is the readings of one file.
type Set struct {
	File     string
	Source   []byte    // the file as read
	Readings []Reading // in the order of the file
	Missing  []int     // the steps without a reading, in the order of the plan
}

// Parse reads a file of readings. A row whose reading is not filled in was not
// taken; it is no fault. The error is a fault.List, and the Set is nil with it.
func Parse(file string, source []byte, p *plan.Plan) (*Set, error) {
	text, problem := clean(source)
	if problem != nil {
		problem.File = file
		return nil, fault.List{*problem}
	}
	t := &table{
		plan:      p,
		faults:    faults{file: file, text: text},
		steps:     make(map[string]int, len(p.Steps)),
		separator: separator(text),
	}
	for i, s := range p.Steps {
		t.steps[s.ID] = i
	}
	t.csv = csv.NewReader(bytes.NewReader(text))
	t.csv.Comma = t.separator
	t.csv.Comment = '#'
	t.csv.FieldsPerRecord = -1
	t.csv.ReuseRecord = true
	// Where tabs part the cells, encoding/csv would take an empty cell for leading space.
	t.csv.TrimLeadingSpace = t.separator != '\t'

	if readings := t.read(bytes.Count(text, []byte("\n"))); len(t.faults.list) == 0 {
		return &Set{File: file, Source: source, Readings: readings, Missing: missing(readings, len(p.Steps))}, nil
	}
	return nil, t.faults.err()
}

func missing(readings []Reading, steps int) []int {
	seen := make([]bool, steps)
	for i := range readings {
		seen[readings[i].Step] = true
	}
	var out []int
	for i, s := range seen {
		if !s {
			out = append(out, i)
		}
	}
	return out
}

// table is a file on its way in.
type table struct {
	plan      *plan.Plan
	steps     map[string]int // index of each step's id
	separator rune
	csv       *csv.Reader
	header    header
	record    []string // the row at hand, cells trimmed
	faults    faults
}

// read goes through the file; lines is how many rows to expect.
func (t *table) read(lines int) []Reading {
	if !t.next() {
		t.faults.add(0, 0, "", "the file is empty; its first line is a header such as step,x [µV]")
		return nil
	}
	t.readHeader()
	if t.header.step < 0 {
		return nil
	}
	readings, rows := make([]Reading, 0, lines), 0
	for t.next() {
		rows++
		if r, taken := t.row(); taken {
			readings = append(readings, r)
		}
	}
	if rows == 0 {
		t.faults.add(0, 0, "", "the file has a header and no readings below it")
	}
	return readings
}

// next fetches the next row that is neither blank nor a comment.
func (t *table) next() bool {
	for {
		record, err := t.csv.Read()
		if err == io.EOF {
			return false
		}
		if err != nil {
			t.badQuotes(err)
			continue
		}
		blank := true
		for i, cell := range record {
			record[i] = strings.TrimSpace(cell)
			blank = blank && record[i] == ""
		}
		// A spreadsheet puts a comment in quotes, and separators behind it.
		comment := strings.HasPrefix(record[0], "#")
		if comment {
			_, isStep := t.steps[record[0]]
			comment = !isStep
		}
		if !blank && !comment {
			t.record = record
			return true
		}
	}
}

func (t *table) badQuotes(err error) {
	var bad *csv.ParseError
	if !errors.As(err, &bad) {
		panic("reading: encoding/csv: " + err.Error())
	}
	line, column, what := bad.Line, bad.Column, "quotation marks enclose the whole cell, and one within it is written twice"
	if errors.Is(err, csv.ErrQuote) && bad.StartLine != bad.Line {
		line, column, what = bad.StartLine, 0, "a cell in quotation marks begins in this row and does not end properly"
	}
	t.faults.add(line, t.faults.character(line, column), "", "%s", what)
}

// row is the reading at hand; not taken where its cells are empty or faulty.
func (t *table) row() (r Reading, taken bool) {
	h := &t.header
	r.Line, _ = t.csv.FieldPos(0)
	if found := len(t.record); found != len(h.names) {
		hint := []string(nil)
		if found > len(h.names) && t.separator == ',' {
			hint = []string{"a decimal comma is taken only where semicolons part the cells"}
		}
		t.faults.add(r.Line, 0, "", "the row has %s, the header %s", count(found, "cell"), count(len(h.names), "cell")).Hints = hint
		return r, false
	}
	for at, name := range h.names {
		if name == "" && t.record[at] != "" {
			t.fault(at, "the cell %q stands under no heading", t.record[at])
		}
	}
	i, known := t.stepOf()
	if !known {
		return r, false
	}
	step := &t.plan.Steps[i]
	r.Step, r.Range = i, step.Range
	if h.onRange.at >= 0 && t.record[h.onRange.at] != "" {
		r.Range = t.rangeOf(r.Range)
	}
	for k := range h.settings {
		t.checkSetting(&h.settings[k], step)
	}
	if h.flag >= 0 {
		r.Flag = t.flagOf()
	}
	if h.time >= 0 {
		r.Time = t.timeOf()
	}
	if h.note >= 0 {
		r.Note = strings.Clone(t.record[h.note])
	}
	return r, t.take(&r)
}

// take puts the values of the reading columns into r.
func (t *table) take(r *Reading) bool {
	empty := -1
	filled := 0
	for k := range t.header.values {
		if c := &t.header.values[k]; t.record[c.at] == "" {
			empty = k
		} else {
			filled++
		}
	}
	if filled == 0 {
		return false
	}
	if empty >= 0 {
		t.fault(t.header.values[empty].at, "the cell is empty, and another of the same reading is filled in")
		return false
	}
	rms := t.plan.Detector.ToRMS
	magnitude, angle, polar := 0.0, 0.0, false
	for k := range t.header.values {
		c := &t.header.values[k]
		v, ok := t.number(c)
		if !ok {
			return false
		}
		switch c.name {
		case colX:
			r.X = inRMS(v, rms)
		case colY:
			r.Y = inRMS(v, rms)
		case colR:
			if v.X < 0 {
				t.fault(c.at, "%q is negative; a magnitude is not", t.record[c.at])
				return false
			}
			magnitude = inRMS(v, rms)
			r.X = magnitude
		case colTheta:
			angle, polar = v.X, true
		case colOutput:
			if out := t.plan.Detector.Output; out != nil {
				r.X = v.X / out.FullScale * t.plan.Detector.Ranges[r.Range]
			}
			r.Output = true
		}
	}
	if polar {
		sin, cos := math.Sincos(angle)
		r.X, r.Y = magnitude*cos, magnitude*sin
		if t.plan.Detector.Reads != plan.TwoPhase {
			r.Y = 0
		}
	}
	return true
}
