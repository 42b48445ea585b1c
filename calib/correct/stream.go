package correct

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"
	"time"

	"rungproof/calib/fault"
	"rungproof/calib/quantity"
)

// Options say what a file holds and how it is to be corrected.
type Options struct {
	File        string    // its name, for messages
	Column      string    // of the readings; "x" where it is ""
	Range       string    // the range that all were taken on, as displayed: "100 mV"; "": not stated
	RangeColumn string    // the column with the range of each; "": none
	Date        time.Time // of the readings; zero: not stated, and then nothing is overdue
	Drift       bool      // the gain is that of the Date by the calibration's Drift
	Strict      bool      // the first warning is an error
	Progress    func(read int64)
}

// Summary is what became of a file.
type Summary struct {
	Rows      int64     // of data
	Corrected int64     // of them
	Warnings  []Warning // in the order of the first of each
}

// Stream copies a CSV file and adds three cells to each row: corrected, U and
// warning. All else stays byte for byte: quotation marks, spaces, ends of lines, blank
// lines, comments. Where a cell or the header states a unit, corrected and U are
// in the same one. Cells are parted as in a file of readings: by tab, semicolon (and
// then a comma may be the decimal mark) or comma, whichever the header has first.
//
// A row without a reading was not taken; its cells are empty. One whose number of
// cells is not the header's is left as it is, and counted. Memory does not grow with
// the file; a row may have a megabyte. With an error, what was written is incomplete.
//
// Progress is called after each piece of the file with the bytes read so far.
func Stream(in io.Reader, out io.Writer, c *Calibration, o Options) (Summary, error) {
	if o.Column == "" {
		o.Column = "x"
	}
	s := &stream{
		calibration: c, options: o, writer: out, onRange: -1,
		units: map[string]unit{}, lines: map[string]*line{},
		scanner: scanner{in: in, file: o.File, progress: o.Progress},
	}
	err := s.run()
	for i := range s.summary.Warnings {
		if k := s.summary.Warnings[i].Kind; k == Failed || k == Overdue {
			s.summary.Warnings[i].Rows = s.summary.Corrected
		}
	}
	return s.summary, err
}

// stream is a file on its way.
type stream struct {
	calibration *Calibration
	options     Options
	scanner     scanner
	writer      io.Writer
	out         []byte // not yet written
	summary     Summary

	names     []string // of the columns
	separator byte
	reading   int  // its column
	bare      unit // of a number without a unit there
	onRange   int  // column of the range; -1: none
	bareRange unit
	units     map[string]unit

	drifted float64          // since the calibration, a
	fixed   *line            // where the rows state no range
	lines   map[string]*line // by the cell that states the range
	always  string           // the warnings of every corrected row
	mark    byte             // the last decimal mark that was read
}

func (s *stream) run() error {
	if err := s.prepare(); err != nil {
		return err
	}
	mark, err := s.scanner.begin()
	if err != nil {
		return err
	}
	s.out = append(s.out, mark...)
	if err := s.header(); err != nil {
		return err
	}
	for {
		// Before reading on, which may wait for a pipe, all is handed on.
		if left := s.scanner.buffer[s.scanner.start:s.scanner.end]; len(s.out) >= chunk || bytes.IndexByte(left, s.scanner.newline) < 0 {
			if err := s.flush(); err != nil {
				return err
			}
		}
		more, err := s.scanner.next()
		if err != nil || !more {
			return errors.Join(err, s.flush())
		}
		if !s.scanner.isRow {
			s.pass()
		} else if err := s.row(); err != nil {
			return err
		}
	}
}

func (s *stream) flush() error {
	if len(s.out) == 0 {
		return nil
	}
	_, err := s.writer.Write(s.out)
	s.out = s.out[:0]
	return err
}

// pass hands on what is at hand as it is.
func (s *stream) pass() { s.out = append(append(s.out, s.scanner.text...), s.scanner.ending...) }

// prepare settles what holds for all rows.
func (s *stream) prepare() error {
	c, o := s.calibration, &s.options
	if err := c.check(); err != nil {
		return err
	}
	if o.Drift {
		switch {
		case c.Drift == nil:
			return fmt.Errorf("no drift of the detector %s is known to adjust for", c.Serial)
		case o.Date.IsZero():
			return fmt.Errorf("without a date of the readings there is no drift to adjust for")
		}
		s.drifted = years(c.Date, o.Date)
	}
	if err := s.rangeOfAll(); err != nil {
		return err
	}
	doubts := []string{}
	if c.failed() {
		doubts = append(doubts, string(Failed))
		if err := s.note(Failed, 0, fault.Fault{File: o.File, What: fmt.Sprintf("the verdict of the calibration %s is %q", c.name(), c.Verdict)}); err != nil {
			return err
		}
	}
	if c.overdue(o.Date) {
		due := c.Due.Format(time.DateOnly)
		doubts = append(doubts, string(Overdue)+" "+due)
		if err := s.note(Overdue, 0, fault.Fault{File: o.File, What: fmt.Sprintf("the calibration %s was due on %s, and the readings are of %s", c.name(), due, o.Date.Format(time.DateOnly))}); err != nil {
			return err
		}
	}
	s.always = strings.Join(doubts, between)
	return nil
}

// rangeOfAll settles the line where the rows do not state the range.
func (s *stream) rangeOfAll() error {
	c, o := s.calibration, &s.options
	if o.RangeColumn != "" {
		if o.Range != "" {
			return fmt.Errorf("the range is %q, and it is in the column %q: one of the two", o.Range, o.RangeColumn)
		}
		return nil
	}
	fullScale := 0.0
	if o.Range != "" {
		v, err := quantity.Parse(o.Range, quantity.Voltage)
		if err == nil && !(v.X > 0) {
			err = fmt.Errorf("%q is not the full scale of a range", o.Range)
		}
		if err != nil {
			return fmt.Errorf("the range: %w", err)
		}
		fullScale = v.X * c.ToRMS
		if v.Convention != quantity.Unstated {
			fullScale = v.X * v.Convention.ToRMS()
		}
	}
	l := c.on(fullScale, s.drifted)
	switch {
	case fullScale == 0 && c.OffsetShare:
		return fmt.Errorf("the offset of the calibration %s is a share of the range: which range, or which column states it?", c.name())
	case fullScale == 0 && l.unknown:
		return fmt.Errorf("the calibration %s has a gain for each range, %s: which range, or which column states it?", c.name(), c.ranges())
	case l.unknown:
		return fmt.Errorf("the calibration %s does not have the range %s; it has %s", c.name(), o.Range, c.ranges())
	}
	s.fixed = &l
	return nil
}

// row corrects the row at hand.
func (s *stream) row() error {
	sc := &s.scanner
	s.summary.Rows++
	if len(sc.cells) != len(s.names) {
		err := s.warn(Ragged, -1, func() string {
			return fmt.Sprintf("cells: %d in the row, %d in the header; the row is left as it is", len(sc.cells), len(s.names))
		})
		s.pass()
		return err
	}
	s.out = append(s.out, sc.text...)
	err := s.add(content(sc.cell(s.reading)))
	s.out = append(s.out, sc.ending...)
	return err
}

// add adds the three cells for a reading.
func (s *stream) add(cell []byte) error {
	if len(cell) == 0 {
		s.out = append(s.out, s.separator, s.separator, s.separator)
		return nil
	}
	x, u, written, ok := s.voltage(cell)
	if !ok {
		return s.without(NotANumber, s.reading, func() string { return s.whyNot(cell) })
	}
	l := s.fixed
	if l == nil {
		l = s.lineOf(content(s.scanner.cell(s.onRange)))
	}
	never := func() string {
		return fmt.Sprintf("the calibration %s has only the ranges %s", s.calibration.name(), s.calibration.ranges())
	}
	switch {
	case l.unread != "":
		return s.without(NoRange, s.onRange, func() string { return l.unread })
	case l.unknown:
		return s.without(Never, s.onRange, never)
	}
	v, expanded := l.correct(x)
	if !finite(v) || !finite(expanded) {
		return s.without(NotANumber, s.reading, func() string { return fmt.Sprintf("%q is too large to correct", cell) })
	}
	s.summary.Corrected++
	s.out = append(s.out, s.separator)
	s.out = appendPair(s.out, v/u.worth, expanded/u.worth, s.separator, u.text, written)
	s.out = append(s.out, s.separator)
	from := len(s.out)
	s.out = append(s.out, s.always...)
	if l.never {
		s.doubt(from, string(Never))
		if err := s.warn(Never, s.onRange, never); err != nil {
			return err
		}
	}
	return s.span(l, v, expanded, from)
}

// span adds the warning where a value is beyond what was calibrated by more than its U.
func (s *stream) span(l *line, v, expanded float64, from int) error {
	size := math.Abs(v)
	switch {
	case l.to == 0:
	case size-expanded > l.to:
		s.doubt(from, l.above)
		return s.warn(Above, s.reading, func() string {
			return fmt.Sprintf("%s is beyond %s, the largest that the calibration %s read", s.calibration.shown(v), s.calibration.shown(l.to), s.calibration.name())
		})
	case size+expanded < l.from:
		s.doubt(from, l.below)
		return s.warn(Below, s.reading, func() string {
			return fmt.Sprintf("%s is less than %s, the smallest that the calibration %s read", s.calibration.shown(v), s.calibration.shown(l.from), s.calibration.name())
		})
	}
	return nil
}

// doubt adds a text to the cell of warnings that began at from.
func (s *stream) doubt(from int, text string) {
	if len(s.out) > from {
		s.out = append(s.out, between...)
	}
	s.out = append(s.out, text...)
}

// without adds the cells of a row that cannot be corrected.
func (s *stream) without(k Kind, cell int, what func() string) error {
	s.out = append(append(s.out, s.separator, s.separator, s.separator), k...)
	return s.warn(k, cell, what)
}
