package fault

import (
	"errors"
	"testing"
)

func TestString(t *testing.T) {
	for _, c := range []struct {
		fault Fault
		want  string
	}{
		{Fault{File: "plan.toml", What: "there are no steps"}, "plan.toml: there are no steps"},
		{Fault{File: "plan.toml", Line: 7, What: "a mistake"}, "plan.toml:7: a mistake"},
		{Fault{File: "plan.toml", Line: 7, Column: 3, What: "a mistake"}, "plan.toml:7:3: a mistake"},
		{Fault{File: "plan.toml", Column: 3, What: "a mistake"}, "plan.toml: a mistake"}, // a column of no line is none
		{Fault{File: "plan.toml", Line: 7, Where: "arm[2].tolerance", What: "a mistake", Hints: []string{"one", "two"}},
			"plan.toml:7: arm[2].tolerance: a mistake\n  hint: one\n  hint: two"},
	} {
		if got := c.fault.String(); got != c.want {
			t.Errorf("%+v:\n%s\nwant\n%s", c.fault, got, c.want)
		}
	}
}

func TestListIsSorted(t *testing.T) {
	at := func(line, column int, what string) Fault {
		return Fault{File: "f", Line: line, Column: column, What: what}
	}
	err := List{at(10, 1, "e"), at(2, 9, "c"), at(2, 1, "b"), at(0, 0, "a"), at(2, 9, "d")}.Err()
	want := "f: a\nf:2:1: b\nf:2:9: c\nf:2:9: d\nf:10:1: e" // those of one place in the order found
	if err == nil || err.Error() != want {
		t.Errorf("the list is\n%v\nwant\n%s", err, want)
	}
	var list List
	if !errors.As(err, &list) || len(list) != 5 {
		t.Errorf("the error gives %d faults back, want 5", len(list))
	}
}

func TestNoFaultIsNoError(t *testing.T) {
	for _, l := range []List{nil, {}} {
		if err := l.Err(); err != nil {
			t.Errorf("an empty list is the error %q", err)
		}
	}
}
