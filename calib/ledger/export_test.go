package ledger

import (
	"bytes"
	"encoding/csv"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

func exported(t testing.TB, s Store) []byte {
	t.Helper()
	var b bytes.Buffer
	must(t, s.ExportJSON(background, &b))
	return b.Bytes()
}

// A log goes from each kind of place to each other and comes back byte for byte, with
// the hashes it had.
func TestExportAndImport(t *testing.T) {
	onBoth(t, func(t *testing.T, from backend) {
		onBoth(t, func(t *testing.T, to backend) {
			source, _ := filled(t, from, 7)
			first := exported(t, source)
			copied := open(t, to.location(t))
			added, err := copied.Import(background, bytes.NewReader(first))
			must(t, err)
			if added != 7 {
				t.Errorf("%d entries imported, want 7", added)
			}
			if second := exported(t, copied); !bytes.Equal(first, second) {
				t.Error("exported again, the log is another")
			}
			a, textA := checked(t, source)
			b, textB := checked(t, copied)
			if diff := cmp.Diff(a, b, cmp.AllowUnexported(Finding{})); diff != "" || !a.Sound() {
				t.Errorf("checks differ or fail: %s\n%s\n%s", textA, textB, diff)
			}

			// What was logged since is appended, and only that.
			_, err = source.Add(background, invented(8))
			must(t, err)
			if added, err := copied.Import(background, bytes.NewReader(exported(t, source))); err != nil || added != 1 {
				t.Errorf("%d entries appended, want 1; %v", added, err)
			}
			if added, err := copied.Import(background, bytes.NewReader(exported(t, source))); err != nil || added != 0 {
				t.Errorf("%d entries appended by the same import, %v", added, err)
			}
			if !bytes.Equal(exported(t, source), exported(t, copied)) {
				t.Error("the logs differ")
			}
		})
	})
}

func TestImportRefuses(t *testing.T) {
	source, _ := filled(t, sqliteBackend, 3)
	good := string(exported(t, source))
	lines := strings.SplitAfter(good, "\n")
	onBoth(t, func(t *testing.T, b backend) {
		for name, c := range map[string]struct{ text, says string }{
			"altered text":    {strings.Replace(good, "visit 2", "visit 3", 1), "entry 2 of the import was altered: its content does not give its hash"},
			"altered content": {strings.Replace(good, `"readings":"c3`, `"readings":"d3`, 1), "entry 1 of the import was altered: its readings does not give its SHA-256"},
			"removed":         {lines[0] + lines[2], "entry 2 of the import says that it is entry 3"},
			"swapped":         {lines[1] + lines[0] + lines[2], "entry 1 of the import says that it is entry 2"},
			"relabelled":      {lines[0] + strings.Replace(lines[2], `"id":3`, `"id":2`, 1), "entry 2 of the import does not follow"},
			"cut off":         {good[:len(good)-40], "entry 3 of the import cannot be read"},
			"another file":    {"{\"title\": 1}\n", "entry 1 of the import cannot be read"},
			"CSV":             {"id,logged\n1,2\n", "cannot be read"},
		} {
			s := open(t, b.location(t))
			if _, err := s.Import(background, strings.NewReader(c.text)); err == nil || !strings.Contains(err.Error(), c.says) || !strings.Contains(err.Error(), "nothing was imported") {
				t.Errorf("%s: %v", name, err)
			}
			if r, _ := checked(t, s); r.Entries != 0 {
				t.Errorf("%s: %d entries were imported", name, r.Entries)
			}
		}
		other := open(t, b.location(t))
		_, err := other.Add(background, invented(1))
		must(t, err)
		if _, err := other.Import(background, strings.NewReader(good)); err == nil || !strings.Contains(err.Error(), "two logs cannot be made one") {
			t.Errorf("into another log: %v", err)
		}
	})
}

// Whatever the record, the log gives it back, on either kind of place and through an
// export.
func TestAnyRecordComesBack(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		s := open(t, b.location(t))
		text := rapid.Map(rapid.String(), func(s string) string { return strings.ReplaceAll(s, "\x00", "") })
		number := rapid.Float64Range(-math.MaxFloat64, math.MaxFloat64)
		parameter := rapid.Custom(func(t *rapid.T) Parameter {
			return Parameter{number.Draw(t, "value") + 0, number.Draw(t, "u") + 0, number.Draw(t, "k") + 0}
		})
		rapid.Check(t, func(t *rapid.T) {
			r := Record{Serial: "D" + text.Draw(t, "serial"), Date: "2026-03-12", Who: text.Draw(t, "who"), Software: text.Draw(t, "software"), Verdict: text.Draw(t, "verdict"),
				Note: text.Draw(t, "note"), Gain: rapid.Ptr(parameter, true).Draw(t, "gain"), Offset: rapid.Ptr(parameter, true).Draw(t, "offset"),
				SeriesResistance: rapid.Ptr(parameter, true).Draw(t, "series"), Temperature: rapid.Ptr(rapid.Float64Range(-20, 50), true).Draw(t, "temperature"),
				Standards: rapid.SliceOf(text).Draw(t, "standards"), Plan: rapid.SliceOf(rapid.Byte()).Draw(t, "plan"), Result: rapid.SliceOf(rapid.Byte()).Draw(t, "result")}
			for _, p := range rapid.SliceOfN(parameter, 0, 4).Draw(t, "ranges") {
				r.Ranges = append(r.Ranges, RangeGain{p.K, p})
			}
			added, err := s.Add(background, r)
			if err != nil {
				t.Fatal(err)
			}
			shown, err := s.Show(background, added.ID)
			if err != nil {
				t.Fatal(err)
			}
			if diff := cmp.Diff(normal(added), normal(shown)); diff != "" {
				t.Fatal(diff)
			}
		})
		if r, found := checked(t, s); !r.Sound() {
			t.Fatal(found)
		}
		copied := open(t, sqliteBackend.location(t))
		_, err := copied.Import(background, bytes.NewReader(exported(t, s)))
		must(t, err)
	})
}

func TestExportCSV(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		s, _ := filled(t, b, 4)
		bare := Record{Serial: "a,\"b\"\nc", Date: "2026-03-12"}
		_, err := s.Add(background, bare)
		must(t, err)
		var out bytes.Buffer
		must(t, s.ExportCSV(background, &out))
		table, err := csv.NewReader(&out).ReadAll()
		must(t, err)
		if len(table) != 6 {
			t.Fatalf("%d rows for 5 entries and a head", len(table))
		}
		cell := func(row int, column string) string {
			for i, name := range table[0] {
				if name == column {
					return table[row][i]
				}
			}
			t.Fatalf("no column %q", column)
			return ""
		}
		last, err := s.Show(background, 5)
		must(t, err)
		for _, c := range []struct {
			row          int
			column, want string
		}{{1, "id", "1"}, {2, "superseded by", "4"}, {4, "supersedes", "2"}, {4, "reason", "the wrong plan"}, {1, "gain", "1.0027613136403792"}, {1, "offset [V]", "1.197861793096473e-07"},
			{1, "gain by range", "0.1:1.0026:0.0004:2 0.01:1.0028:0.0005:2"}, {1, "standards", "bench multimeter; 10 kΩ, no. 3"}, {5, "serial", bare.Serial}, {5, "gain", ""},
			{5, "temperature [°C]", ""}, {5, "hash", last.Hash.String()}} {
			if got := cell(c.row, c.column); got != c.want {
				t.Errorf("row %d, %s: %q, want %q", c.row, c.column, got, c.want)
			}
		}
	})
}

// An import into a log that cannot be written changes nothing and says so.
func TestImportIntoReadOnly(t *testing.T) {
	source, location := filled(t, sqliteBackend, 2)
	text := exported(t, source)
	must(t, source.Close())
	readOnly := open(t, protect(t, location))
	if _, err := readOnly.Import(background, bytes.NewReader(text)); !errors.Is(err, ErrReadOnly) {
		t.Errorf("import: %v", err)
	}
}
