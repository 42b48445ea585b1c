package ledger

import (
	"context"
	"crypto/sha256"
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strings"
	"time"
)

// columns of log_entry; the content after them is read only where it is wanted.
const columns = `id, logged, who, software, serial, measured, condition, temperature, verdict, note,
	gain, gain_u, gain_k, offset_v, offset_u, offset_k, series_ohm, series_u, series_k,
	standards, supersedes, reason, plan_sha256, readings_sha256, result_sha256, previous, hash`

const insertEntry = `INSERT INTO log_entry (` + columns + `, plan, readings, result) VALUES
	($1, $2, $3, $4, $5, $6, $7, $8, $9, $10, $11, $12, $13, $14, $15, $16, $17, $18, $19, $20, $21, $22, $23, $24, $25, $26, $27, $28, $29, $30)`

// insert writes an entry with its ranges and its seal.
func insert(ctx context.Context, q querier, e *Entry, plan, readings, result []byte) error {
	standards, err := json.Marshal(append([]string{}, e.Standards...))
	if err != nil {
		return err
	}
	var supersedes *int64
	if e.Supersedes != 0 {
		supersedes = &e.Supersedes
	}
	args := []any{e.ID, e.Logged.UTC().Format(timeLayout), e.Who, e.Software, e.Serial, e.Date, e.Condition, e.Temperature, e.Verdict, e.Note}
	for _, p := range []*Parameter{e.Gain, e.Offset, e.SeriesResistance} {
		if p == nil {
			args = append(args, nil, nil, nil)
		} else {
			args = append(args, p.Value, p.U, p.K)
		}
	}
	args = append(args, string(standards), supersedes, e.Reason, e.PlanSHA256[:], e.ReadingsSHA256[:], e.ResultSHA256[:], e.Previous[:], e.Hash[:],
		plan, readings, result)
	if err := q.exec(ctx, insertEntry, args...); err != nil {
		return err
	}
	for i, r := range e.Ranges {
		if err := q.exec(ctx, `INSERT INTO log_range (entry, position, full_scale, gain, gain_u, gain_k) VALUES ($1, $2, $3, $4, $5, $6)`,
			e.ID, i, r.Range, r.Value, r.U, r.K); err != nil {
			return err
		}
	}
	return q.exec(ctx, `INSERT INTO log_seal (id, hash) VALUES ($1, $2)`, e.ID, e.Hash[:])
}

// row is an entry as it stands in the tables.
type row struct {
	Entry
	size   int64 // bytes of plan, readings and result
	damage error // what cannot be read of it; nil in a sound log
}

// choice is which entries are read, and what of them.
type choice struct {
	where   string // a condition on log_entry AS e
	args    []any
	order   string // of the entries
	content bool   // plan, readings and result
	by      bool   // which entry supersedes it
}

// load reads the entries chosen. Stray are ids for which there are gains by range and
// no entry, where the choice is by id.
func load(ctx context.Context, q querier, c choice) (out []row, stray []int64, err error) {
	extra := ""
	if c.content {
		extra += ", plan, readings, result"
	}
	if c.by {
		extra += ", (SELECT n.id FROM log_entry n WHERE n.supersedes = e.id)"
	}
	r, err := q.query(ctx, `SELECT `+columns+extra+` FROM log_entry e WHERE `+c.where+` ORDER BY `+c.order, c.args...)
	if err != nil {
		return nil, nil, err
	}
	defer r.Close()
	at := map[int64]int{}
	var f fields
	for r.Next() {
		out = append(out, row{})
		if err := out[len(out)-1].scan(r, c, &f); err != nil {
			return nil, nil, err
		}
		at[out[len(out)-1].ID] = len(out) - 1
	}
	if err := errors.Join(r.Err(), r.Close()); err != nil {
		return nil, nil, err
	}
	err = loadRanges(ctx, q, c, func(id int64) *row {
		if i, ok := at[id]; ok {
			return &out[i]
		}
		if len(stray) == 0 || stray[len(stray)-1] != id {
			stray = append(stray, id)
		}
		return nil
	})
	return out, stray, err
}

// standards is a list of names as text, and as it was read. Most entries have the list
// of the entry before.
type standards struct {
	text  string
	names []string
	ok    bool
}

func (s *standards) read(text string) {
	if s.text == text {
		return
	}
	*s = standards{text: text}
	if json.Unmarshal([]byte(text), &s.names) == nil {
		again, err := json.Marshal(s.names)
		s.ok = err == nil && string(again) == text && s.names != nil
		s.names = slices.Clip(s.names) // entries share it
	}
}

// fields are a row's columns on their way into an entry. They are used again for each
// row. A number that may be absent is nil, float64 or int64.
type fields struct {
	logged, standards string
	temperature       any
	parameters        [9]any
	supersedes, by    any
	digests           [5][]byte
	packed            [3][]byte
	into              []any
	names             standards
}

// scan reads one row. What can only stand there by another hand is its damage.
func (w *row) scan(r rows, c choice, f *fields) error {
	f.into = append(f.into[:0], &w.ID, &f.logged, &w.Who, &w.Software, &w.Serial, &w.Date, &w.Condition, &f.temperature, &w.Verdict, &w.Note)
	for i := range f.parameters {
		f.into = append(f.into, &f.parameters[i])
	}
	f.into = append(f.into, &f.standards, &f.supersedes, &w.Reason)
	for i := range f.digests {
		f.into = append(f.into, &f.digests[i])
	}
	if c.content {
		f.into = append(f.into, &f.packed[0], &f.packed[1], &f.packed[2])
	}
	if c.by {
		f.into = append(f.into, &f.by)
	}
	if err := r.Scan(f.into...); err != nil {
		return fmt.Errorf("entry %d cannot be read: %w", w.ID, err)
	}
	if temperature, ok := f.temperature.(float64); ok {
		w.Temperature = &temperature
	}
	w.Supersedes, _ = f.supersedes.(int64)
	w.SupersededBy, _ = f.by.(int64)
	hurt := func(format string, args ...any) {
		if w.damage == nil {
			w.damage = fmt.Errorf(format, args...)
		}
	}
	if f.supersedes == int64(0) {
		hurt("it supersedes entry 0")
	}
	var err error
	var again [len(timeLayout)]byte
	if w.Logged, err = time.Parse(timeLayout, f.logged); err != nil || string(w.Logged.AppendFormat(again[:0], timeLayout)) != f.logged {
		hurt("the time logged is %q", f.logged)
	}
	f.names.read(f.standards)
	if w.Standards = f.names.names; !f.names.ok {
		hurt("the list of standards is %q", f.standards)
	}
	for i, into := range []**Parameter{&w.Gain, &w.Offset, &w.SeriesResistance} {
		x := f.parameters[3*i:]
		value, ok := x[0].(float64)
		u, okU := x[1].(float64)
		k, okK := x[2].(float64)
		if ok && okU && okK {
			*into = &Parameter{value, u, k}
		} else if ok || okU || okK {
			hurt("%s lacks its value, u or k", []string{"gain", "offset", "series resistance"}[i])
		}
	}
	for i, into := range []*Digest{&w.PlanSHA256, &w.ReadingsSHA256, &w.ResultSHA256, &w.Previous, &w.Hash} {
		if copy(into[:], f.digests[i]) != len(into) || len(f.digests[i]) != len(into) {
			hurt("a SHA-256 of %d bytes", len(f.digests[i]))
		}
	}
	if c.content {
		w.open(f.packed, hurt)
	}
	return nil
}

// open unpacks the content and compares it with its hashes.
func (w *row) open(packed [3][]byte, hurt func(string, ...any)) {
	for i, part := range []struct {
		name string
		into *[]byte
		hash Digest
	}{{"plan", &w.Plan, w.PlanSHA256}, {"readings", &w.Readings, w.ReadingsSHA256}, {"result", &w.Result, w.ResultSHA256}} {
		b, err := unpack(packed[i])
		if err != nil {
			hurt("%s: %v", part.name, err)
			continue
		}
		*part.into = b
		w.size += int64(len(b))
		if sha256.Sum256(b) != part.hash {
			hurt("%s: its bytes do not give its SHA-256", part.name)
		}
	}
}

// loadRanges reads the gains by range of the entries chosen.
func loadRanges(ctx context.Context, q querier, c choice, entry func(int64) *row) error {
	// Where the choice is by id, the ranges are chosen so too: those of no entry are read
	// with the others.
	from := `log_range g WHERE g.entry IN (SELECT e.id FROM log_entry e WHERE ` + c.where + `)`
	if strings.HasPrefix(c.where, byID) {
		from = `log_range g WHERE ` + strings.ReplaceAll(c.where, "e.id", "g.entry")
	}
	r, err := q.query(ctx, `SELECT entry, position, full_scale, gain, gain_u, gain_k FROM `+from+` ORDER BY entry, position`, c.args...)
	if err != nil {
		return err
	}
	defer r.Close()
	for r.Next() {
		var id int64
		var position int
		var g RangeGain
		if err := r.Scan(&id, &position, &g.Range, &g.Value, &g.U, &g.K); err != nil {
			return fmt.Errorf("gains by range of entry %d cannot be read: %w", id, err)
		}
		w := entry(id)
		if w == nil {
			continue
		}
		if position != len(w.Ranges) && w.damage == nil {
			w.damage = fmt.Errorf("its gains by range lack number %d", len(w.Ranges))
		}
		w.Ranges = append(w.Ranges, g)
	}
	return errors.Join(r.Err(), r.Close())
}

const byID = "e.id "
