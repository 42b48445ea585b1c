package correct

import "rungproof/calib/fault"

// Kind is a doubt about a corrected value, or why there is none; in the column
// warning it stands as it is written here, some with a value behind.
type Kind string

// The kinds of warning.
const (
	Failed     Kind = "failed calibration"
	Overdue    Kind = "calibration overdue since" // and the last day it was valid
	Never      Kind = "range never calibrated"    // no corrected value where no common gain is known
	Above      Kind = "above the largest calibrated"
	Below      Kind = "below the smallest calibrated"
	NoRange    Kind = "range cannot be read"   // no corrected value
	NotANumber Kind = "reading cannot be read" // no corrected value
	Ragged     Kind = "wrong number of cells"  // the row is left as it is, without the added cells
)

// Warning is all of one kind in a file.
type Warning struct {
	Kind  Kind
	Rows  int64       // that carry it
	First fault.Fault // the first of them
}

// between parts two warnings in one cell. No warning has a comma, a semicolon, a
// tab or a quotation mark in it, so that the cell needs no quotation.
const between = " | "

// warn counts a warning of the row at hand. Where faults are errors, it is the error.
func (s *stream) warn(k Kind, cell int, what func() string) error {
	for i := range s.summary.Warnings {
		if w := &s.summary.Warnings[i]; w.Kind == k {
			w.Rows++
			return nil
		}
	}
	f := fault.Fault{File: s.options.File, What: what()}
	f.Line, f.Column = s.scanner.position(cell)
	if cell >= 0 {
		f.Where = s.names[cell]
	}
	return s.note(k, 1, f)
}

// note begins the count of a kind.
func (s *stream) note(k Kind, rows int64, first fault.Fault) error {
	s.summary.Warnings = append(s.summary.Warnings, Warning{k, rows, first})
	if s.options.Strict {
		return fault.List{first}
	}
	return nil
}
