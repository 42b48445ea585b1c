package ledger

import (
	"context"
	"errors"
	"runtime"
	"sync"
)

// Report is what a check found.
type Report struct {
	Entries  int64     // found in the log
	Bytes    int64     // of plans, readings and results read
	Last     int64     // the last entry and its hash: noted elsewhere, they tell
	Head     Digest    // later whether the end of the log was cut off
	Findings []Finding // none: the log is sound
}

// Sound tells that nothing was altered, added or removed.
func (r *Report) Sound() bool { return len(r.Findings) == 0 }

// chunk is how many entries are read at a time.
const chunk = 512

// place is what stands at one id.
type place struct {
	id       int64
	entry    bool   // there is one
	seal     bool   // there is one
	sealed   Digest // by the seal
	computed Digest // from the content; meaningless where damaged
	stored   Digest // in the entry
	previous Digest
	damage   error
}

// span is ids from first to last, both within.
type span struct{ first, last int64 }

// Check reads the log in spans, each by whichever worker is free, and hashes every
// entry. Ids run from 1 without a gap in a sound log: what stands outside is in the
// first and the last span.
func (s *store) Check(ctx context.Context) (Report, error) {
	var n int64
	err := s.read(ctx, func(q querier) error {
		_, err := one(ctx, q, `SELECT count(*) FROM log_seal`, nil, &n)
		return err
	})
	if err != nil {
		return Report{}, err
	}
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	spans := spansOf(n)
	parts := make([]part, len(spans))
	next := make(chan int)
	go func() {
		defer close(next)
		for i := range spans {
			select {
			case next <- i:
			case <-ctx.Done():
				return
			}
		}
	}()
	var workers sync.WaitGroup
	errs := make([]error, runtime.GOMAXPROCS(0))
	for w := range errs {
		workers.Add(1)
		go func() {
			defer workers.Done()
			for i := range next {
				// A span is short: what watches for a cancellation would cost more than it.
				ctx := context.WithoutCancel(ctx)
				if errs[w] = s.read(ctx, func(q querier) error { return parts[i].read(ctx, q, spans[i]) }); errs[w] != nil {
					cancel()
					return
				}
			}
		}()
	}
	workers.Wait()
	if err := errors.Join(append(errs, ctx.Err())...); err != nil {
		return Report{}, err
	}
	return judge(parts), nil
}

func spansOf(n int64) []span {
	spans := []span{{-1 << 63, 0}}
	for first := int64(1); first <= n; first += chunk {
		spans = append(spans, span{first, min(first+chunk-1, n)})
	}
	return append(spans, span{n + 1, 1<<63 - 1})
}

// part is a span as read. Of what is sound only the ends are kept, to be joined to
// the spans beside it.
type part struct {
	entries, bytes int64
	sound          bool
	first, last    place // where it is sound and not empty
	all            []place
	stray          []int64 // entries that have gains by range and do not exist
}

func (p *part) read(ctx context.Context, q querier, s span) error {
	args := []any{s.first, s.last}
	loaded, stray, err := load(ctx, q, choice{where: byID + "BETWEEN $1 AND $2", args: args, order: "e.id", content: true})
	if err != nil {
		return err
	}
	seals, err := readSeals(ctx, q, args)
	if err != nil {
		return err
	}
	p.stray = stray
	for i := 0; i < len(loaded) || len(seals) > 0; {
		var at place
		if i < len(loaded) && (len(seals) == 0 || loaded[i].ID <= seals[0].id) {
			e := &loaded[i]
			at = place{id: e.ID, entry: true, computed: e.Seal(), stored: e.Hash, previous: e.Previous, damage: e.damage}
			p.entries++
			p.bytes += e.size
			i++
		} else {
			at.id = seals[0].id
		}
		if len(seals) > 0 && seals[0].id == at.id {
			at.seal, at.sealed = true, seals[0].hash
			seals = seals[1:]
		}
		p.all = append(p.all, at)
	}
	p.shrink()
	return nil
}

// shrink keeps the ends alone of a span in which everything is as it should be.
func (p *part) shrink() {
	for i := range p.all {
		at := &p.all[i]
		if !at.good() || i > 0 && !at.follows(&p.all[i-1]) {
			return
		}
	}
	p.sound = true
	if n := len(p.all); n > 0 {
		p.first, p.last, p.all = p.all[0], p.all[n-1], nil
	}
}

// good tells of an entry that is what was logged at its place.
func (p *place) good() bool {
	return p.id >= 1 && p.entry && p.seal && p.damage == nil && p.computed == p.sealed && p.stored == p.sealed
}

func (p *place) follows(before *place) bool {
	return p.id == before.id+1 && p.previous == before.sealed
}

type sealRow struct {
	id   int64
	hash Digest
}

func readSeals(ctx context.Context, q querier, args []any) (out []sealRow, err error) {
	r, err := q.query(ctx, `SELECT id, hash FROM log_seal WHERE id BETWEEN $1 AND $2 ORDER BY id`, args...)
	if err != nil {
		return nil, err
	}
	defer r.Close()
	for r.Next() {
		var s sealRow
		var b []byte
		if err := r.Scan(&s.id, &b); err != nil {
			return nil, err
		}
		if len(b) == len(s.hash) { // any other is no hash, and equals none
			copy(s.hash[:], b)
		}
		out = append(out, s)
	}
	return out, errors.Join(r.Err(), r.Close())
}
