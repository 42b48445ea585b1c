package correct

import (
	"bytes"
	"fmt"

	"rungproof/calib/quantity"
)

// content is what stands in a cell, without spaces and quotation marks around it.
func content(cell []byte) []byte {
	cell = trim(cell)
	if len(cell) > 1 && cell[0] == '"' && cell[len(cell)-1] == '"' {
		cell = trim(cell[1 : len(cell)-1])
	}
	return cell
}

// voltage reads one, in V rms, and tells the unit and the style it is written in.
func (s *stream) voltage(cell []byte) (x float64, u unit, written style, ok bool) {
	n := scan(cell, s.separator == ';')
	u = s.bare
	if rest := cell[n.length:]; n.length > 0 && len(rest) > 0 {
		u = s.unitOf(bytes.TrimSpace(rest))
	}
	if n.length == 0 || u.worth == 0 || !finite(n.x) {
		return 0, u, written, false
	}
	if n.mark != 0 {
		s.mark = n.mark
	}
	return n.x * u.worth, u, style{s.mark, n.exponent}, true
}

// whyNot says what is wrong with a cell that is no voltage.
func (s *stream) whyNot(cell []byte) string {
	if len(cell) > 100 {
		return fmt.Sprintf("%.40q… is no voltage", cell)
	}
	v, err := quantity.Parse(string(cell), quantity.Voltage)
	switch {
	case !finite(scan(cell, s.separator == ';').x):
		return fmt.Sprintf("%q is too large", cell)
	case err == nil && v.HasU:
		return fmt.Sprintf("%q states an uncertainty; here it is a number alone", cell)
	case err == nil:
		return fmt.Sprintf("%q is not a number and a unit that can be read", cell)
	case s.separator != ';' && bytes.ContainsRune(cell, ','):
		return err.Error() + "; a decimal comma is taken only where semicolons part the cells"
	}
	return err.Error()
}

// lineOf is the line on the range that a cell states.
func (s *stream) lineOf(cell []byte) *line {
	if l, ok := s.lines[string(cell)]; ok {
		return l
	}
	l := line{}
	n := scan(cell, s.separator == ';')
	u := s.bareRange
	if rest := bytes.TrimSpace(cell[n.length:]); n.length > 0 && len(rest) > 0 {
		u = s.unitOf(rest)
	}
	switch fullScale := n.x * u.worth; {
	case len(cell) == 0:
		l.unread = "the cell is empty; it states the range of the reading"
	case n.length == 0 || u.worth == 0:
		l.unread = s.whyNot(cell)
	case !(fullScale > 0) || !finite(fullScale):
		l.unread = fmt.Sprintf("%q is not the full scale of a range", cell)
	default:
		l = s.calibration.on(fullScale, s.drifted)
	}
	if len(s.lines) < remembered && len(cell) <= longestKept {
		s.lines[string(cell)] = &l
	}
	return &l
}
