package correct

import (
	"bytes"
	"fmt"
	"slices"
	"strings"
	"unicode/utf8"

	"rungproof/calib/fault"
	"rungproof/calib/quantity"
)

// The columns that are added.
const (
	colCorrected = "corrected"
	colU         = "U"
	colWarning   = "warning"
)

// header goes to the header, finds the columns in it and writes it with the added ones.
func (s *stream) header() error {
	comment := ""
	for {
		more, err := s.scanner.next()
		if err != nil {
			return err
		}
		if !more {
			return s.fault("the file has no header; its first line is one such as time,x [µV]")
		}
		if s.scanner.isRow {
			break
		}
		if text := strings.TrimSpace(string(s.scanner.text)); text != "" {
			comment = text
		}
		s.pass()
		s.scanner.separator = 0 // that of a comment in quotes says nothing
	}
	if bytes.IndexByte(s.scanner.text, 0) >= 0 {
		return s.at(-1, "the header holds NUL bytes, as binary files and UTF-16 do; readings are text in UTF-8", asText)
	}
	s.names = make([]string, len(s.scanner.cells))
	for i := range s.names {
		s.names[i] = unquoted(s.scanner.cell(i))
		if !utf8.ValidString(s.names[i]) {
			return s.at(i, "the header is not text in UTF-8; a µ may be in an older code page", asText)
		}
	}
	s.separator, s.mark = s.scanner.separator, '.'
	if s.separator == ';' {
		s.mark = ','
	}
	unit := ""
	var err error
	if s.reading, unit, s.bare, err = s.column(s.options.Column, comment); err != nil {
		return err
	}
	if s.options.RangeColumn != "" {
		if s.onRange, _, s.bareRange, err = s.column(s.options.RangeColumn, comment); err != nil {
			return err
		}
	}
	return s.addHeader(unit)
}

// column finds one by its name, which may be given with its unit, with other
// capitals, and with spaces or hyphens for underscores. The unit is given back as
// it stands in the header, with its brackets, and as what a bare number is worth.
func (s *stream) column(name, comment string) (at int, brackets string, bare unit, err error) {
	for _, same := range []func(cell string) bool{
		func(cell string) bool { return cell == name },
		func(cell string) bool { return short(cell) == name },
		func(cell string) bool {
			return canonical(cell) == canonical(name) || canonical(short(cell)) == canonical(name)
		},
	} {
		at = slices.IndexFunc(s.names, same)
		if at < 0 {
			continue
		}
		if again := slices.IndexFunc(s.names[at+1:], same); again >= 0 {
			return at, "", bare, s.at(at+1+again, fmt.Sprintf("the column %s is there twice, before as column %d of the table", name, at+1))
		}
		cell := s.names[at]
		brackets = strings.TrimSpace(strings.TrimPrefix(cell, short(cell)))
		if brackets == "" {
			return at, "", unit{worth: s.calibration.ToRMS}, nil
		}
		text := strings.TrimSpace(brackets[1 : len(brackets)-1])
		if bare = s.unitOf([]byte(text)); bare.worth == 0 {
			return at, "", bare, s.at(at, fmt.Sprintf("%q is no unit of a voltage; the column is written like %s [µV], or %s where it is in volts", text, short(cell), short(cell)))
		}
		return at, brackets, unit{worth: bare.worth}, nil
	}
	return at, "", bare, s.noColumn(name, comment)
}

func (s *stream) noColumn(name, comment string) error {
	names, bare := []string{}, []string{}
	numbers := true
	for _, cell := range s.names {
		names, bare = append(names, fmt.Sprintf("%q", cell)), append(bare, short(cell))
		v := scan([]byte(cell), s.separator == ';')
		numbers = numbers && (cell == "" || v.length == len(cell))
	}
	hints := []string{}
	if near := fault.Nearest(name, bare); near != "" {
		hints = append(hints, "the nearest is "+near)
	}
	if numbers {
		hints = append(hints, "the first line is the header, and here it holds numbers alone")
		if strings.ContainsAny(comment, ",;\t") {
			hints = append(hints, fmt.Sprintf("a line that begins with # is a comment; where %q is the header, take the # away", comment))
		}
	}
	return s.at(-1, fmt.Sprintf("the file has no column %q; it has %s", name, strings.Join(names, ", ")), hints...)
}

// addHeader writes the header with the added columns. Where the file has one of
// their names already, they say which column they belong to.
func (s *stream) addHeader(unit string) error {
	if unit != "" {
		unit = " " + unit
	}
	taken := func(name string) bool {
		return slices.ContainsFunc(s.names, func(cell string) bool { return short(cell) == name })
	}
	of := ""
	for _, name := range []string{colCorrected, colU, colWarning} {
		if taken(name) {
			of = " " + short(s.names[s.reading])
		}
	}
	s.out = append(s.out, s.scanner.text...)
	for _, c := range []struct{ name, unit string }{{colCorrected, unit}, {colU, unit}, {colWarning, ""}} {
		if taken(c.name + of) {
			return s.at(-1, fmt.Sprintf("the file has a column %s already; correct the original, or rename the column", c.name+of))
		}
		s.out = append(append(s.out, s.separator), s.quoted(c.name+of+c.unit)...)
	}
	s.out = append(s.out, s.scanner.ending...)
	return nil
}

// at is a fault of a cell of the row at hand, or for -1 of the row.
func (s *stream) at(cell int, what string, hints ...string) error {
	f := fault.Fault{File: s.options.File, What: what, Hints: hints}
	f.Line, f.Column = s.scanner.position(cell)
	return fault.List{f}
}

// fault is one of the file as a whole.
func (s *stream) fault(what string, hints ...string) error {
	return fault.List{{File: s.options.File, What: what, Hints: hints}}
}

// unquoted is what a cell says.
func unquoted(cell []byte) string {
	text := bytes.TrimSpace(cell)
	if len(text) > 1 && text[0] == '"' && text[len(text)-1] == '"' {
		return strings.TrimSpace(strings.ReplaceAll(string(text[1:len(text)-1]), `""`, `"`))
	}
	return string(text)
}

// quoted is a cell that says so.
func (s *stream) quoted(text string) string {
	if strings.ContainsAny(text, string(rune(s.separator))+"\"\r\n") {
		return `"` + strings.ReplaceAll(text, `"`, `""`) + `"`
	}
	return text
}

// short is the name of a column without the unit in brackets or parentheses behind it.
func short(cell string) string {
	for _, pair := range []string{"[]", "()"} {
		open := strings.LastIndex(cell, pair[:1])
		if open > 0 && strings.HasSuffix(cell, pair[1:]) {
			return strings.TrimSpace(cell[:open])
		}
	}
	return cell
}

func canonical(name string) string {
	return strings.NewReplacer(" ", "_", "-", "_").Replace(strings.ToLower(name))
}

// unit is what a number in a cell is in.
type unit struct {
	worth float64 // of a 1, V rms; 0: the text is no unit of a voltage
	text  string  // to be written behind the number; "" where it stands in the header
}

// What is kept of the units and the ranges once read.
const (
	remembered  = 256 // different ones
	longestKept = 64  // bytes of one
)

// unitOf reads the unit behind a number.
func (s *stream) unitOf(text []byte) unit {
	if u, ok := s.units[string(text)]; ok {
		return u
	}
	u := unit{}
	if one, err := quantity.Parse("1 "+string(text), quantity.Voltage); err == nil {
		u = unit{s.calibration.ToRMS * one.X, string(text)}
		if one.Convention != quantity.Unstated {
			u.worth = one.Convention.ToRMS() * one.X
		}
	}
	if len(s.units) < remembered && len(text) <= longestKept {
		s.units[string(text)] = u
	}
	return u
}
