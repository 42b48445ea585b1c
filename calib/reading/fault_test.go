package reading

import (
	"errors"
	"fmt"
	"strings"
	"testing"

	"rungproof/calib/fault"
	"rungproof/calib/plan"
)

// Each file is bad in one place, or in those listed. A fault is given as its line and column,
// and words that its text must have; "|" parts the words.
func TestFaults(t *testing.T) {
	for _, c := range []struct {
		name, text string
		reads      string // plan.InPhase where empty
		want       []string
	}{
		{name: "empty", text: "", want: []string{"0:0 empty|step,x"}},
		{name: "comments alone", text: "# none\n\n", want: []string{"0:0 empty"}},
		{name: "header alone", text: "step,x\n", want: []string{"0:0 no readings"}},
		{name: "UTF-16", text: "\xff\xfes\x00t\x00", want: []string{"0:0 UTF-16|UTF-8"}},
		{name: "UTF-16 without a mark", text: "s\x00t\x00e\x00p\x00", want: []string{"0:0 NUL"}},
		{name: "NUL", text: "step,x\nS1,\x001\n", want: []string{"0:0 NUL"}},
		{name: "workbook", text: "PK\x03\x04\x14\x00", want: []string{"0:0 workbook|CSV UTF-8"}},
		{name: "older code page", text: "step,note,x [\xb5V]\nS1,,1\n", want: []string{"1:14 not text in UTF-8"}},
		{name: "no step column", text: "x [mV]\n7.07\n", want: []string{"1:0 no column step|step,x [µV]"}},
		{name: "no reading column", text: "step,note\nS1,a\n", want: []string{`1:0 "in-phase"|x, or output, or r and theta|none`}},
		{name: "in-phase with y", text: "step,x,y\nS1,1,2\n", want: []string{"1:0 x and y"}},
		{name: "in-phase, r alone", text: "step,r\nS1,1\n", want: []string{"1:0 r and theta|has r"}},
		{name: "two-phase, x alone", reads: plan.TwoPhase, text: "step,x\nS1,1\n", want: []string{"1:0 x and y, or r and theta|has x"}},
		{name: "two-phase, all four", reads: plan.TwoPhase, text: "step,x,y,r,theta\nS1,3,4,5,53\n", want: []string{"1:0 no second way"}},
		{name: "magnitude, x", reads: plan.Magnitude, text: "step,x\nS1,1\n", want: []string{"1:0 written as r, or output|has x"}},
		{name: "output without one in the plan", text: "step,output\nS1,1\n", want: []string{"1:6 no analogue output|full_scale"}},
		{name: "output in rms", text: "step,output [Vrms]\nS1,1\n", want: []string{"1:6 direct voltage", "1:6 no analogue output"}},
		{name: "unknown column", text: "step,x,flga\nS1,1,\n", want: []string{"1:8 flga|nearest|flag"}},
		{name: "column far from any", text: "step,x,operator's initials\nS1,1,\n", want: []string{"1:8 known are step, x"}},
		{name: "column twice", text: "step,x,x [mV]\nS1,1,2\n", want: []string{"1:8 x is there twice"}},
		{name: "unit of another kind", text: "step,x [µA]\nS1,1\n", want: []string{"1:6 µA|voltage"}},
		{name: "unit on a name", text: "step [V],x\nS1,1\n", want: []string{"1:1 takes no unit"}},
		{name: "too many cells", text: "step,x\nS1,1,2\n", want: []string{"2:0 3 cells|header 2|decimal comma"}},
		{name: "too few cells", text: "step,x\nS1\nS2,1\n", want: []string{"2:0 1 cell,|header 2"}},
		{name: "cell under no heading", text: "step,x,\nS1,1,a\n", want: []string{"2:6 no heading"}},
		{name: "text for a number", text: "step,x\nS1,seven\n", want: []string{"2:4 seven"}},
		{name: "NaN", text: "step,x\nS1,NaN\n", want: []string{"2:4 NaN"}},
		{name: "infinite", text: "step,x\nS1,-Inf\n", want: []string{"2:4 -Inf"}},
		{name: "beyond float64", text: "step,x\nS1,1e999\n", want: []string{"2:4 1e999|too large"}},
		{name: "beyond float64 by its unit", text: "step,x [kV]\nS1,1e307\n", want: []string{"2:4 1e307|too large"}},
		{name: "hexadecimal", text: "step,x\nS1,0x10\n", want: []string{"2:4 0x10"}},
		{name: "thousands separator", text: "step;x [µV]\nS1;7.070,5\n", want: []string{"2:4 7.070,5"}},
		{name: "decimal comma between tabs", text: "step\tx [mV]\nS1\t7,07\n", want: []string{"2:4 7,07|semicolons"}},
		{name: "current for a voltage", text: "step,x\nS1,70 µA\n", want: []string{"2:4 µA|voltage"}},
		{name: "uncertainty in a cell", text: "step,x\nS1,7.07(2) mV\n", want: []string{"2:4 uncertainty"}},
		{name: "x without y", reads: plan.TwoPhase, text: "step,x,y\nS1,1,\n", want: []string{"2:6 empty|filled in"}},
		{name: "negative magnitude", reads: plan.Magnitude, text: "step,r\nS1,-1\n", want: []string{"2:4 negative"}},
		{name: "unknown step", text: "step,x\nS11,1\n", want: []string{"2:1 no step|S11|nearest is S1"}},
		{name: "no step", text: "step,x\n,1\n", want: []string{"2:1 every row names its step"}},
		{name: "unknown range", text: "step,x,range\nS1,1,12 mV\n", want: []string{"2:6 no range|nearest is 10 mV"}},
		{name: "range that is none", text: "step,x,range\nS1,1,big\n", want: []string{"2:6 big"}},
		{name: "unknown flag", text: "step,x,flag\nS1,1,overlod\n", want: []string{"2:6 overload, unlocked"}},
		{name: "bad time", text: "step,x,time\nS1,1,12.3.2026 14:05\n", want: []string{"2:6 RFC 3339"}},
		{name: "mark within a cell", text: "step,x,note\nS1,1,5\" lead\nS2,1,\n", want: []string{"2:7 quotation marks"}},
		{name: "cell without an end", text: "step,note,x\nS1,a,1\nS1,\"a,1\nS2,b,1\n", want: []string{"3:0 does not end"}},
		{name: "other box setting", text: "step,x,box\nS1,1,500 Ω\n", want: []string{"2:6 500 Ω|step S1|1 kΩ"}},
		{name: "other amplitude", text: "step,x,amplitude\nS1,1,20 Vrms\n", want: []string{"2:6 20 Vrms|20 V"}},
		{name: "other frequency", text: "step,frequency,x\nS1,138 Hz,1\n", want: []string{"2:4 137 Hz"}},
		{name: "other phase", text: "step,x,phase\nS2,1,0 deg\n", want: []string{"2:6 180 deg"}},
		{name: "other tap", text: "step,x,tap\nS2,1,top\n", want: []string{"2:6 top|box"}},
		{name: "setting that is none", text: "step,x,box\nS1,1,1 kV\n", want: []string{"2:6 kV|resistance"}},
		{name: "columns count characters", text: "step,note,x\nS1,µµµ,a\n", want: []string{"2:8 \"a\""}},
		{name: "after a cell of two lines", text: "step,note,x\nS1,\"a\nb\",c\n", want: []string{"3:4 \"c\""}},
		{name: "all at once", text: "step,x,flag,colour\nS9,1,,\nS1,a,b,\n\nS1,1\n",
			want: []string{"1:13 colour", "2:1 S9", "3:4 \"a\"", "3:6 \"b\"", "5:0 2 cells"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if c.reads == "" {
				c.reads = plan.InPhase
			}
			s, err := Parse("r.csv", []byte(c.text), small(c.reads))
			var list fault.List
			if s != nil || !errors.As(err, &list) {
				t.Fatalf("set %v, error %v", s, err)
			}
			if len(list) != len(c.want) {
				t.Fatalf("%d faults, want %d:\n%v", len(list), len(c.want), err)
			}
			for i, f := range list {
				place, words, _ := strings.Cut(c.want[i], " ")
				if got := fmt.Sprintf("%d:%d", f.Line, f.Column); got != place {
					t.Errorf("at %s, want %s: %v", got, place, f)
				}
				for _, w := range strings.Split(words, "|") {
					if !strings.Contains(f.String(), w) {
						t.Errorf("%q is not in %q", w, f)
					}
				}
				if f.File != "r.csv" {
					t.Errorf("in file %q", f.File)
				}
			}
		})
	}
}

func TestManyFaults(t *testing.T) {
	text := "step,x\n" + strings.Repeat("S1,a\n", 50)
	for _, c := range []struct {
		rows, faults int
		last         string
	}{
		{0, 50, `r.csv:51:4: x: "a"`},
		{1, 51, "r.csv:52:4: from here on there is 1 fault more"},
		{100_000, 51, "r.csv:52:4: from here on there are 100000 faults more"},
	} {
		_, err := Parse("r.csv", []byte(text+strings.Repeat("S1,b\n", c.rows)), small(plan.InPhase))
		list := err.(fault.List)
		if last := list[len(list)-1].String(); len(list) != c.faults || !strings.HasPrefix(last, c.last) {
			t.Errorf("%d rows more: %d faults, the last %q", c.rows, len(list), last)
		}
	}
}
