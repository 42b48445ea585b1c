package correct

import (
	"bytes"
	"encoding/csv"
	"io"
	"regexp"
	"slices"
	"strings"
	"testing"
	"testing/iotest"

	"pgregory.net/rapid"
)

// Files put together piece by piece: every piece is found again in the output, in order, with
// nothing between but the added cells, and those behind rows alone. Taking them away gives
// the file back.
func TestUntouched(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		sep := rapid.SampledFrom([]string{",", ";", "\t"}).Draw(t, "separator")
		cell := rapid.OneOf(
			rapid.SampledFrom([]string{"", " ", "2.001", " -7 ", "1e-3", "2.001 V", `"3.5 mV"`, "70(2) µV", "abc", "2 A", "−1", `" 4"`, "\"a\n#b\"", `"q"" q"`, "100 mV", "1", "10 V"}),
			rapid.StringMatching(`[a-z.0-9µ]{0,12}`),
			rapid.StringMatching(`"([a-z,;\t\n\r# ]|""){0,12}"`),
		)
		type piece struct {
			text, end string
			grows     bool
		}
		draw := func(text string, grows bool, last bool) piece {
			ends := []string{"\n", "\r\n"}
			if last {
				ends = append(ends, "")
			}
			return piece{text, rapid.SampledFrom(ends).Draw(t, "end"), grows}
		}
		// A field that begins with a tab or a space before its mark is trimmed; none of these is a comment.
		notComment := cell.Filter(func(s string) bool { return !strings.HasPrefix(strings.TrimLeft(s, "\" \t"), "#") })
		pieces := []piece{}
		for range rapid.IntRange(0, 2).Draw(t, "before") {
			pieces = append(pieces, draw(rapid.SampledFrom([]string{"", " ", "# a \"b", `"# c"` + sep + sep}).Draw(t, "before"), false, false))
		}
		pieces = append(pieces, draw(strings.Join([]string{"n", `"x [mV]"`, "r"}, sep), true, false))
		rows := rapid.IntRange(0, 8).Draw(t, "rows")
		for i := range rows {
			kind, last := rapid.IntRange(0, 9).Draw(t, "kind"), i == rows-1
			switch cells := 3; kind {
			case 0:
				pieces = append(pieces, draw(rapid.SampledFrom([]string{"", "  ", "#", " # \"", `"#"`}).Draw(t, "passed"), false, last))
			case 1:
				cells = rapid.SampledFrom([]int{2, 4, 6}).Draw(t, "cells")
				fallthrough
			default:
				row := []string{notComment.Draw(t, "first")}
				for len(row) < cells {
					row = append(row, cell.Draw(t, "cell"))
				}
				pieces = append(pieces, draw(strings.Join(row, sep), cells == 3, last))
			}
		}
		in := rapid.SampledFrom([]string{"", "\ufeff"}).Draw(t, "mark")
		for _, p := range pieces {
			in += p.text + p.end
		}

		c := ranged()
		c.Offset = 1e-3
		var out strings.Builder
		if _, err := Stream(strings.NewReader(in), &out, c, Options{RangeColumn: "r"}); err != nil {
			t.Fatalf("%q: %v", in, err)
		}
		left := strings.TrimPrefix(out.String(), "\ufeff")
		added := regexp.MustCompile(`^(` + sep + `[^` + sep + `"\r\n]*){3}`)
		for _, p := range pieces {
			rest, ok := strings.CutPrefix(left, p.text)
			if p.grows {
				ok = ok && added.MatchString(rest)
				rest = added.ReplaceAllString(rest, "")
			}
			if left = strings.TrimPrefix(rest, p.end); !ok || len(rest)-len(left) != len(p.end) {
				t.Fatalf("%q became %q; %q is not in its place", in, out.String(), p.text)
			}
		}
		if left != "" {
			t.Fatalf("%q became %q; too much is %q", in, out.String(), left)
		}
	})
}

// encoding/csv reads the same cells in the output as in the file, and three more.
func TestAgreesWithEncodingCSV(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var in bytes.Buffer
		w := csv.NewWriter(&in)
		w.Comma = rapid.SampledFrom([]rune{',', ';', '\t'}).Draw(t, "separator")
		w.UseCRLF = rapid.Bool().Draw(t, "CRLF")
		w.Write([]string{"x", "n;\"", "m"})
		field := rapid.StringOfN(rapid.SampledFrom([]rune("ab1.,;\t\" \r\n#µ-e")), 0, 8, -1)
		for range rapid.IntRange(0, 6).Draw(t, "rows") {
			w.Write([]string{rapid.StringMatching(`-?[0-9]{1,5}(\.[0-9]{0,3})?`).Draw(t, "x"), field.Draw(t, "n"), field.Draw(t, "m")})
		}
		w.Flush()
		if bytes.ContainsRune(in.Bytes()[:5], '\t') && w.Comma != '\t' {
			return
		}
		var out bytes.Buffer
		s, err := Stream(bytes.NewReader(in.Bytes()), &out, simple(), Options{Strict: true})
		if err != nil {
			t.Fatal(err)
		}
		read := func(r io.Reader) [][]string {
			c := csv.NewReader(r)
			c.Comma = w.Comma
			records, err := c.ReadAll()
			if err != nil {
				t.Fatal(err)
			}
			return records
		}
		before, after := read(&in), read(&out)
		if len(before) != len(after) || int(s.Corrected) != len(before)-1 {
			t.Fatalf("%d records became %d, of which %d corrected", len(before), len(after), s.Corrected)
		}
		for i := range before {
			if len(after[i]) != 6 || !slices.Equal(after[i][:3], before[i]) {
				t.Errorf("%q became %q", before[i], after[i])
			}
		}
	})
}

// No file makes it panic; how a file comes in pieces does not matter; all its bytes come
// out, in order; and what came out can be corrected once more.
func FuzzStream(f *testing.F) {
	for _, seed := range []string{
		"x\n1\n", "\ufeffn;x [mV];r\r\n\"a\";2,5;1 V\r\n", "# c\n\nx\tr\n1e3 µV\t100 mV\n", "x,r\n\"1\n2\",\n-.5e-300,1\n1(2) V,x",
		"x\r1\r2\r", "U,x,r,warning\n1,2,1 V,\"\"\"\"\n", "x,r\n\"\n", "x\n1e308 V\n1e-320\n99999999999999999999\n",
	} {
		f.Add([]byte(seed), true)
		f.Add([]byte(seed), false)
	}
	f.Fuzz(func(t *testing.T, in []byte, byRange bool) {
		c, o := simple(), Options{}
		if byRange {
			c, o = ranged(), Options{RangeColumn: "r"}
		}
		var once, pieces, twice bytes.Buffer
		s, err := Stream(bytes.NewReader(in), &once, c, o)
		s1, err1 := Stream(iotest.OneByteReader(bytes.NewReader(in)), &pieces, c, o)
		if (err == nil) != (err1 == nil) || err == nil && !bytes.Equal(once.Bytes(), pieces.Bytes()) || s.Corrected != s1.Corrected {
			t.Fatalf("%q became %q, %v; byte by byte %q, %v", in, once.Bytes(), err, pieces.Bytes(), err1)
		}
		if err != nil {
			return
		}
		left := in
		for _, b := range once.Bytes() {
			if len(left) > 0 && left[0] == b {
				left = left[1:]
			}
		}
		if len(left) > 0 {
			t.Fatalf("%q became %q, without %q", in, once.Bytes(), left)
		}
		s2, err := Stream(bytes.NewReader(once.Bytes()), &twice, c, o)
		if err == nil && s2.Corrected < s.Corrected {
			t.Fatalf("%q became %q: %+v, then %q: %+v", in, once.Bytes(), s, twice.Bytes(), s2)
		}
	})
}
