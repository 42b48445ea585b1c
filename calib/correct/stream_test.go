package correct

import (
	"errors"
	"io"
	"strings"
	"testing"
	"testing/iotest"
	"time"

	"rungproof/calib/fault"
)

// simple doubles what it sees: gain 2 ± 0.002, offset 1 mV, U = 0.1 % of a large value.
func simple() *Calibration {
	c := inForce()
	c.Gains, c.Offset, c.UOffset = []Gain{{Value: 2, U: 0.001}}, 1e-3, 0
	return c
}

// The values are (x − 1 mV)/2 with U = 2·0.0005 of that, by hand.
func TestFiles(t *testing.T) {
	for _, c := range []struct{ name, in, want string }{
		{"bare volts", "t,x\n1,2.001\n", "t,x,corrected,U,warning\n1,2.001,1.0000,0.0010,\n"},
		{"unit of the header", "x [mV],t\n2001,1\n", "x [mV],t,corrected [mV],U [mV],warning\n2001,1,1000.0,1.0,\n"},
		{"parentheses, capitals", "X (uV)\n2001\n", "X (uV),corrected (uV),U (uV),warning\n2001,500.50,0.50,\n"},
		{"own units, mixed", "x [mV]\n2.001 V\n\"2001mV\"\n−2001\n", "x [mV],corrected [mV],U [mV],warning\n2.001 V,1.0000 V,0.0010 V,\n\"2001mV\",1000.0 mV,1.0 mV,\n−2001,-1001.0,1.0,\n"},
		{"own convention", "x\n2.83 Vpk\n", "x,corrected,U,warning\n2.83 Vpk,1.4143 Vpk,0.0014 Vpk,\n"},
		{"semicolons, decimal commas", "x;n\n2,001;a,b\n2;\n", "x;n;corrected;U;warning\n2,001;a,b;1,0000;0,0010;\n2;;0,9995;0,0010;\n"},
		{"semicolons, points", "x;n\n2.001;\n2;\n", "x;n;corrected;U;warning\n2.001;;1.0000;0.0010;\n2;;0.9995;0.0010;\n"},
		{"tabs, empty cells", "\tn\tx\n\t\t2.001\n\t\t\n", "\tn\tx\tcorrected\tU\twarning\n\t\t2.001\t1.0000\t0.0010\t\n\t\t\t\t\t\n"},
		{"exponents", "x\n2.001e0\n", "x,corrected,U,warning\n2.001e0,1.0000e+00,1.0e-03,\n"},
		{"ends of lines", "\ufeff# \"a\r\n\r\nx,n\r\n2.001,\"a\r\nb\"\"\"\r\n\n2.001,#\n \t\n#,\r\n2.001,", "\ufeff# \"a\r\n\r\nx,n,corrected,U,warning\r\n2.001,\"a\r\nb\"\"\",1.0000,0.0010,\r\n\n2.001,#,1.0000,0.0010,\n \t\n#,\r\n2.001,,1.0000,0.0010,"},
		{"carriage returns alone", "x\r2.001\r", "x,corrected,U,warning\r2.001,1.0000,0.0010,\r"},
		{"comment of a spreadsheet", "\"# a\";;\nx;n;\n\"#;\";;\n2,001;;\n", "\"# a\";;\nx;n;;corrected;U;warning\n\"#;\";;\n2,001;;;1,0000;0,0010;\n"},
		{"bare quotes", "n,x\na\"b,2.001\n\"a\"b,2.001\n", "n,x,corrected,U,warning\na\"b,2.001,1.0000,0.0010,\n\"a\"b,2.001,1.0000,0.0010,\n"},
		{"names that are taken", "U,x [V]\n1,2.001\n", "U,x [V],corrected x [V],U x [V],warning x\n1,2.001,1.0000,0.0010,\n"},
		{"header alone", "x", "x,corrected,U,warning"},
		{"text, too much, too many cells", "x,n\nNaN,\n2.001,a,b\n1e400,\n2.0(1) V,\n", "x,n,corrected,U,warning\nNaN,,,,reading cannot be read\n2.001,a,b\n1e400,,,,reading cannot be read\n2.0(1) V,,,,reading cannot be read\n"},
	} {
		for _, reader := range []func(io.Reader) io.Reader{func(r io.Reader) io.Reader { return r }, iotest.OneByteReader, iotest.DataErrReader} {
			var out strings.Builder
			if _, err := Stream(reader(strings.NewReader(c.in)), &out, simple(), Options{}); err != nil || out.String() != c.want {
				t.Errorf("%s: %v, and\n%q, not\n%q", c.name, err, out.String(), c.want)
			}
		}
	}
}

// ranged has two ranges, displays peak values, is overdue and has failed.
func ranged() *Calibration {
	c := simple()
	c.ToRMS, c.Verdict, c.Offset = 0.5, "conditional fail", 0
	c.Gains = []Gain{{Range: 0.5, Value: 2, U: 0.001, From: 0.01, To: 0.25}, {Range: 0.05, Value: 4, U: 0.002, From: 0.001, To: 0.025}}
	return c
}

func TestRangesAndWarnings(t *testing.T) {
	const in = "x [mV],on [V]\n100,1\n100,100 mV\n1e3,1.0\n10,1\n100,10\n100,\n100,-1\n100,x\n,1\n"
	c := ranged()
	c.Verdict = "pass"
	check := func(c *Calibration, o Options, want string, counts ...Kind) {
		t.Helper()
		var out strings.Builder
		o.Column = "x"
		s, err := Stream(strings.NewReader(in), &out, c, o)
		if err != nil {
			t.Fatal(err)
		}
		got := strings.Split(out.String(), "\n")
		for i, line := range strings.Split(want, "\n") {
			if !strings.HasSuffix(got[i], line) {
				t.Errorf("line %d is %s, not …%s", i+1, got[i], line)
			}
		}
		for _, w := range s.Warnings {
			if len(counts) == 0 || counts[0] != w.Kind {
				t.Fatalf("warnings %+v; expected %q", s.Warnings, counts)
			}
			counts = counts[1:]
		}
		if len(counts) > 0 {
			t.Errorf("warnings %+v; expected also %q", s.Warnings, counts)
		}
	}
	// By hand: 100 mV on the range with gain 2 is 50 mV, on that with gain 4 25 mV; U is 0.1 %.
	check(c, Options{RangeColumn: "on"}, `corrected [mV],U [mV],warning
100,1,50.000,0.050,
100,100 mV,25.000,0.025,
1e3,1.0,5.0000e+02,5.0e-01,
10,1,5.0000,0.0050,below the smallest calibrated (20 mV)
100,10,,,range never calibrated
100,,,,range cannot be read
100,-1,,,range cannot be read
100,x,,,range cannot be read
,1,,,`, Below, Never, NoRange)

	c.Due = time.Date(2025, 6, 1, 0, 0, 0, 0, time.UTC)
	c.Verdict = "fail"
	o := Options{Range: "100 mV", Date: time.Date(2025, 6, 2, 0, 0, 0, 0, time.UTC)}
	check(c, o, `corrected [mV],U [mV],warning
25.000,0.025,failed calibration | calibration overdue since 2025-06-01
25.000,0.025,failed calibration | calibration overdue since 2025-06-01
2.5000e+02,2.5e-01,failed calibration | calibration overdue since 2025-06-01 | above the largest calibrated (50 mV)`, Failed, Overdue, Above)
	o.Date = time.Date(2025, 6, 1, 23, 0, 0, 0, time.UTC) // the last day
	check(c, o, "warning\n,failed calibration", Failed, Above)

	// A common gain stands in for a range that was never calibrated.
	common := ranged()
	common.Verdict = "conditional pass"
	common.Gains = append(common.Gains, Gain{Value: 2, U: 0.001})
	check(common, Options{Range: "2 V"}, "warning\n100,1,50.000,0.050,range never calibrated", Never)
	check(common, Options{}, "warning\n100,1,50.000,0.050,")
}

func TestFaults(t *testing.T) {
	late := Options{Strict: true, Date: time.Date(2028, 1, 1, 0, 0, 0, 0, time.UTC)}
	failed, share, dead := simple(), simple(), simple()
	failed.Verdict, share.OffsetShare, dead.Gains[0].Value = "fail", true, 0
	near := simple()
	near.Gains[0].To = 0.5
	for _, c := range []struct {
		name, in string
		c        *Calibration
		o        Options
		want     string
	}{
		{"no column", "time,Signal X [V]\n1,2\n", simple(), Options{Column: "signal"}, `f.csv:1: the file has no column "signal"; it has "time", "Signal X [V]"`},
		{"the nearest", "t,sginal [V]\n", simple(), Options{Column: "signal"}, "hint: the nearest is sginal"},
		{"no header", "# t,x\n1,2\n", simple(), Options{}, `where "# t,x" is the header, take the # away`},
		{"twice", "x,x [V]\n", simple(), Options{Column: "X"}, "f.csv:1:3: the column X is there twice, before as column 1"},
		{"a unit that is none", "x [uv]\n", simple(), Options{}, `f.csv:1:1: "uv" is no unit of a voltage; the column is written like x [µV]`},
		{"no voltage", "x (A)\n", simple(), Options{}, `"A" is no unit`},
		{"code page", "x [\xb5V]\n", simple(), Options{}, "not text in UTF-8"},
		{"UTF-16", "\xff\xfex\x00", simple(), Options{}, "UTF-16"},
		{"workbook", "PK\x03\x04", simple(), Options{}, "workbook"},
		{"binary", "x\x00\n", simple(), Options{}, "NUL"},
		{"empty", "\n# a\n", simple(), Options{}, "f.csv: the file has no header"},
		{"names all taken", "x,U,corrected x\n", simple(), Options{}, "has a column corrected x already"},
		{"quotes", "x\n1\n\"2\n3\n", simple(), Options{}, "f.csv:3: a cell in quotation marks begins in this row and does not end"},
		{"a huge row", "x\n1\n\"" + strings.Repeat("a", longest), simple(), Options{}, "f.csv:3: a row begins here and is longer than 1048576 bytes"},
		{"which range", "x\n", ranged(), Options{}, "has a gain for each range, 1 V, 100 mV: which range"},
		{"share of which range", "x\n", share, Options{}, "is a share of the range: which range"},
		{"unknown range", "x\n", ranged(), Options{Range: "3 V"}, "does not have the range 3 V; it has 1 V, 100 mV"},
		{"no range", "x\n", simple(), Options{Range: "big"}, `the range: "big"`},
		{"both", "x\n", simple(), Options{Range: "1 V", RangeColumn: "r"}, "one of the two"},
		{"no range column", "x\n", ranged(), Options{RangeColumn: "r"}, `no column "r"`},
		{"dead", "x\n", dead, Options{}, "the calibration 17 of 2026-03-12 cannot correct readings: its gain is 0"},
		{"no drift", "x\n", simple(), Options{Drift: true}, "no drift of the detector R-3 is known"},

		{"strict text", "n,x\n\"µ\",abc\n", simple(), Options{Strict: true}, `f.csv:2:5: x: "abc" does not begin with a number`},
		{"strict decimal comma", "n,x\n,\"1,5\"\n", simple(), Options{Strict: true}, "a decimal comma is taken only where semicolons part the cells"},
		{"strict cells", "n,x\n\n1\n", simple(), Options{Strict: true}, "f.csv:3: cells: 1 in the row, 2 in the header"},
		{"strict uncertainty", "x\n1.0(1) V\n", simple(), Options{Strict: true}, "states an uncertainty"},
		{"strict span", "n,x [mV]\n\"a\nb\",1002\n1,1003\n", near, Options{Strict: true}, "f.csv:4:3: x [mV]: 501 mV is beyond 500 mV, the largest"},
		{"strict range", "x,r\n1,2 V\n", ranged(), Options{Strict: true, RangeColumn: "r"}, "verdict"},
		{"strict overdue", "x\n", simple(), late, "was due on 2027-03-12, and the readings are of 2028-01-01"},
		{"strict failed", "x\n", failed, late, `the verdict of the calibration 17 of 2026-03-12 is "fail"`},
	} {
		c.o.File = "f.csv"
		_, err := Stream(strings.NewReader(c.in), io.Discard, c.c, c.o)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v\nhas no %s", c.name, err, c.want)
		}
	}
}

func TestWarningsSayWhere(t *testing.T) {
	s, err := Stream(strings.NewReader("n,x\n1,a\n2,2.001\n3,b\n"), io.Discard, simple(), Options{File: "f.csv"})
	if err != nil || s.Rows != 3 || s.Corrected != 1 || len(s.Warnings) != 1 {
		t.Fatalf("%+v, %v", s, err)
	}
	w := s.Warnings[0]
	if w.Kind != NotANumber || w.Rows != 2 || w.First.Line != 2 || w.First.Column != 3 || w.First.Where != "x" {
		t.Errorf("%+v", w)
	}
}

type full struct{}

func (full) Write([]byte) (int, error) { return 0, errFull }

var errFull = errors.New("no space")

// What the reader and the writer say comes out, and is no fault of the file.
func TestReadAndWriteErrors(t *testing.T) {
	_, err := Stream(strings.NewReader("x\n1\n"), full{}, simple(), Options{})
	if !errors.Is(err, errFull) {
		t.Error(err)
	}
	_, err = Stream(iotest.TimeoutReader(iotest.OneByteReader(strings.NewReader("x\n1\n"))), io.Discard, simple(), Options{})
	if list := (fault.List)(nil); !errors.Is(err, iotest.ErrTimeout) || errors.As(err, &list) {
		t.Error(err)
	}
}
