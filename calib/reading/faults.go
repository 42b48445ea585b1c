package reading

import (
	"bytes"
	"fmt"
	"unicode/utf8"

	"rungproof/calib/fault"
)

// shown is how many faults of one file are listed; the rest are counted.
const shown = 50

// faults gathers what is wrong, in about the order of the lines.
type faults struct {
	file string
	text []byte
	list fault.List
	more int
	next fault.Fault // the first that is not listed

	line, start int // a line and the offset of its start, from where the next search goes on
}

// add notes a fault, which the caller may still add hints to.
func (l *faults) add(line, column int, where, format string, args ...any) *fault.Fault {
	f := fault.Fault{File: l.file, Line: line, Column: column, Where: where}
	if len(l.list) == shown {
		if l.more++; l.more == 1 {
			l.next = f
		}
		return &fault.Fault{}
	}
	f.What = fmt.Sprintf(format, args...)
	l.list = append(l.list, f)
	return &l.list[len(l.list)-1]
}

func (l *faults) err() error {
	if l.more > 0 {
		verb := "are"
		if l.more == 1 {
			verb = "is"
		}
		l.list = append(l.list, fault.Fault{File: l.file, Line: l.next.Line, Column: l.next.Column,
			What: fmt.Sprintf("from here on there %s %s more", verb, count(l.more, "fault"))})
	}
	return l.list.Err()
}

// character turns a position in bytes, which encoding/csv gives, into one in
// characters, which editors show. The search goes on from the line before, so
// that many faults in a long file are found in one pass.
func (l *faults) character(line, column int) int {
	if column == 0 || len(l.list) == shown {
		return column
	}
	if l.line == 0 || line < l.line {
		l.line, l.start = 1, 0
	}
	for l.line < line {
		l.start += bytes.IndexByte(l.text[l.start:], '\n') + 1
		l.line++
	}
	return utf8.RuneCount(l.text[l.start:min(l.start+column-1, len(l.text))]) + 1
}

func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}
