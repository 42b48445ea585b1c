// Package fault holds what is wrong with a file that a person wrote: where it
// stands, what was found, and what would be right. All faults of a file are
// gathered and reported at once.
package fault

import (
	"fmt"
	"sort"
	"strings"
)

// Fault is one thing wrong in a file.
type Fault struct {
	File   string
	Line   int      // from 1; 0 where the fault is in no one line
	Column int      // from 1; 0 where it does not matter
	Where  string   // the key of a plan (arm[2].tolerance) or the column of readings; may be empty
	What   string   // what was found and what would be right, in one line
	Hints  []string // further lines
}

// String is the error line and the hint lines behind it, without a newline at the end.
func (f Fault) String() string {
	var b strings.Builder
	b.WriteString(f.File)
	if f.Line > 0 {
		fmt.Fprintf(&b, ":%d", f.Line)
		if f.Column > 0 {
			fmt.Fprintf(&b, ":%d", f.Column)
		}
	}
	b.WriteString(": ")
	if f.Where != "" {
		b.WriteString(f.Where + ": ")
	}
	b.WriteString(f.What)
	for _, h := range f.Hints {
		b.WriteString("\n  hint: " + h)
	}
	return b.String()
}

// List is all the faults of a file, an error unless it is empty.
type List []Fault

// Error is every fault, in the order of the lines.
func (l List) Error() string {
	lines := make([]string, len(l))
	for i, f := range l {
		lines[i] = f.String()
	}
	return strings.Join(lines, "\n")
}

// Err is the list sorted by line and column, or nil where it is empty.
func (l List) Err() error {
	if len(l) == 0 {
		return nil
	}
	sort.SliceStable(l, func(i, j int) bool {
		if l[i].Line != l[j].Line {
			return l[i].Line < l[j].Line
		}
		return l[i].Column < l[j].Column
	})
	return l
}
