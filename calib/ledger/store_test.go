package ledger

import (
	"errors"
	"math"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

func TestAddAndShow(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		s := open(t, b.location(t))
		var previous Digest
		bare := Record{Serial: "B", Date: "2026-03-12"}
		for i, r := range []Record{invented(1), bare, invented(3)} {
			began := time.Now()
			added, err := s.Add(background, r)
			must(t, err)
			if added.ID != int64(i+1) || added.Previous != previous || added.Hash != added.Seal() {
				t.Errorf("entry %d has id %d, previous %s, hash %s", i+1, added.ID, added.Previous, added.Hash)
			}
			if added.Logged.Before(began.Truncate(time.Microsecond)) || added.Logged.After(time.Now()) || added.Logged.Location() != time.UTC {
				t.Errorf("logged at %v, added after %v", added.Logged, began)
			}
			if added.PlanSHA256 != hashOf(r.Plan) || added.ReadingsSHA256 != hashOf(r.Readings) || added.ResultSHA256 != hashOf(r.Result) {
				t.Error("the content's hashes are others")
			}
			shown, err := s.Show(background, added.ID)
			must(t, err)
			if diff := cmp.Diff(normal(added), normal(shown)); diff != "" {
				t.Errorf("entry %d as added and as shown:\n%s", added.ID, diff)
			}
			previous = added.Hash
		}
		if _, err := s.Show(background, 4); !errors.Is(err, ErrNoEntry) {
			t.Errorf("entry 4 of 3: %v", err)
		}
		if r, text := checked(t, s); !r.Sound() || r.Entries != 3 || r.Last != 3 || r.Head != previous {
			t.Errorf("%+v %s", r, text)
		}
	})
}

// normal takes an empty list for none.
func normal(e Entry) Entry {
	for _, b := range []*[]byte{&e.Plan, &e.Readings, &e.Result} {
		if len(*b) == 0 {
			*b = nil
		}
	}
	if len(e.Standards) == 0 {
		e.Standards = nil
	}
	if len(e.Ranges) == 0 {
		e.Ranges = nil
	}
	return e
}

func TestList(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		s := open(t, b.location(t))
		for _, r := range []struct {
			serial, date string
			supersedes   int64
		}{{"A", "2025-05-01", 0}, {"B", "2024-01-01", 0}, {"A", "2024-05-02", 0}, {"A", "2026-04-30", 0}, {"A", "2024-05-01", 3}} {
			x := invented(1)
			x.Serial, x.Date, x.Supersedes = r.serial, r.date, r.supersedes
			if r.supersedes != 0 {
				x.Reason = "misread date"
			}
			_, err := s.Add(background, x)
			must(t, err)
		}
		for _, c := range []struct {
			filter Filter
			want   []int64
		}{
			{Filter{}, []int64{2, 5, 3, 1, 4}},
			{Filter{Serial: "A"}, []int64{5, 3, 1, 4}},
			{Filter{Serial: "A", InForce: true}, []int64{5, 1, 4}},
			{Filter{From: "2024-05-02", To: "2025-05-01"}, []int64{3, 1}},
			{Filter{Serial: "A", From: "2025-05-02"}, []int64{4}},
			{Filter{Serial: "a"}, nil},
		} {
			found, err := s.List(background, c.filter)
			must(t, err)
			var ids []int64
			for _, e := range found {
				ids = append(ids, e.ID)
				if want := map[int64]int64{3: 5}[e.ID]; e.SupersededBy != want {
					t.Errorf("entry %d superseded by %d, want %d", e.ID, e.SupersededBy, want)
				}
				if len(e.Ranges) != 2 || e.Gain == nil || e.Result != nil {
					t.Errorf("entry %d is listed with %d ranges, gain %v and %d bytes of result", e.ID, len(e.Ranges), e.Gain, len(e.Result))
				}
			}
			if diff := cmp.Diff(c.want, ids); diff != "" {
				t.Errorf("%+v:\n%s", c.filter, diff)
			}
		}
		if _, err := s.List(background, Filter{From: "12.3.2026"}); err == nil || !strings.Contains(err.Error(), "2026-03-12") {
			t.Errorf("a bad date: %v", err)
		}
	})
}

func TestRefusedRecords(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		s := open(t, b.location(t))
		other := invented(2)
		other.Serial = "other"
		for _, r := range []Record{invented(1), other} {
			_, err := s.Add(background, r)
			must(t, err)
		}
		correction := invented(1)
		correction.Supersedes, correction.Reason = 1, "wrong range"
		_, err := s.Add(background, correction)
		must(t, err)
		for _, c := range []struct {
			spoil func(*Record)
			says  string
		}{
			{func(r *Record) { r.Serial = "" }, "no serial number"},
			{func(r *Record) { r.Date = "2026-02-30" }, `"2026-02-30" is no date`},
			{func(r *Record) { r.Condition = "good" }, `"as found"`},
			{func(r *Record) { r.Note = "a\x00b" }, "note"},
			{func(r *Record) { r.Who = "\xff" }, "who"},
			{func(r *Record) { r.Standards = []string{"\xff"} }, "standards"},
			{func(r *Record) { r.Gain = &Parameter{math.NaN(), 1, 2} }, "gain has NaN"},
			{func(r *Record) { r.Ranges[0].U = math.Inf(1) }, "gain by range has +Inf"},
			{func(r *Record) { r.Supersedes = 1 }, "reason"},
			{func(r *Record) { r.Reason = "why" }, "reason"},
			{func(r *Record) { r.Supersedes, r.Reason = 9, "why" }, "entry 9: no such entry"},
			{func(r *Record) { r.Supersedes, r.Reason = 2, "why" }, "of detector other and not of D-0001"},
			{func(r *Record) { r.Supersedes, r.Reason = 1, "why" }, "entry 3 supersedes already"},
		} {
			r := invented(1)
			c.spoil(&r)
			if _, err := s.Add(background, r); err == nil || !strings.Contains(err.Error(), c.says) {
				t.Errorf("want an error with %q, got %v", c.says, err)
			}
		}
		if r, text := checked(t, s); r.Entries != 3 || !r.Sound() {
			t.Errorf("%d entries after refusals; %s", r.Entries, text)
		}
	})
}

// A zero with a sign would not come back from a file.
func TestSignedZero(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		s := open(t, b.location(t))
		r := invented(1)
		r.Offset = &Parameter{math.Copysign(0, -1), 0, 2}
		_, err := s.Add(background, r)
		must(t, err)
		if report, text := checked(t, s); !report.Sound() {
			t.Error(text)
		}
		if !math.Signbit(r.Offset.Value) {
			t.Error("the caller's record was changed")
		}
	})
}

// The database itself refuses to change or remove what is logged.
func TestTriggers(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		_, location := filled(t, b, 2)
		for _, table := range []string{"log_entry SET note = 'x'", "log_range SET gain = 1", "log_seal SET hash = NULL"} {
			name := strings.Fields(table)[0]
			for _, statement := range []string{"UPDATE " + table, "DELETE FROM " + name} {
				if err := b.raw(location, statement); err == nil || !strings.Contains(err.Error(), "never") {
					t.Errorf("%s: %v", statement, err)
				}
			}
		}
	})
}
