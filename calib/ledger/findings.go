package ledger

import (
	"fmt"
	"sort"
)

// Finding is something that was done to the log by another hand.
type Finding struct {
	Kind        Kind
	First, Last int64 // the entries
	Text        string

	from int64 // of a moved one: where its first entry was logged
}

// Kind is what was done.
type Kind string

const (
	Altered Kind = "altered" // the entry is not what was logged
	Added   Kind = "added"   // the entry was never logged
	Removed Kind = "removed" // the entry was logged and is gone
	Moved   Kind = "moved"   // the entry was logged as another one
	Broken  Kind = "broken"  // two entries do not follow one another
)

// odd is a place where not all is good.
type odd struct {
	place
	next   Digest // what the entry after it says was before
	follow bool   // there is such an entry
	from   int64  // where the seal is that the content gives; 0: nowhere
}

// judge joins the spans and names what was done to the entries.
func judge(parts []part) Report {
	var r Report
	var odds []odd
	before := place{entry: true, seal: true} // ahead of entry 1, whose previous hash is zero
	sound := true                            // before is
	visit := func(at place, good bool) {
		if at.seal {
			r.Last, r.Head = at.id, at.sealed
		}
		switch {
		case at.id < 1:
		case at.seal && at.id > before.id+1:
			r.find(Removed, before.id+1, at.id-1, "%s removed, seal and all", subject(before.id+1, at.id-1))
		case good && sound && !at.follows(&before):
			if before.id == 0 {
				r.find(Broken, at.id, at.id, "entry 1 is not the first of its chain: entries before it were removed")
				break
			}
			r.find(Broken, at.id, at.id, "entry %d does not follow entry %d: entries between them were removed, or entry %[2]d altered, with their seals", at.id, before.id)
		}
		if n := len(odds); n > 0 && at.entry && odds[n-1].id == at.id-1 {
			odds[n-1].next, odds[n-1].follow = at.previous, true
		}
		if !good {
			odds = append(odds, odd{place: at})
		}
		if at.id >= 1 {
			before, sound = at, good
		}
	}
	for i := range parts {
		p := &parts[i]
		r.Entries += p.entries
		r.Bytes += p.bytes
		if p.sound && p.entries > 0 {
			visit(p.first, true)
			before, sound = p.last, true
			r.Last, r.Head = p.last.id, p.last.sealed
		}
		for _, at := range p.all {
			visit(at, at.good())
		}
	}
	r.name(odds)
	for i := range parts {
		for _, id := range parts[i].stray {
			if !r.covers(id) {
				r.find(Added, id, id, "entry %d: gains by range of an entry that was never logged", id)
			}
		}
	}
	r.gather()
	return r
}

// name says of each odd place what was done there.
func (r *Report) name(odds []odd) {
	sealAt := map[Digest]int{}
	for i := range odds {
		if odds[i].seal {
			sealAt[odds[i].sealed] = i
		}
	}
	claimed := map[int]bool{} // seals whose content is in the log, wherever
	for i := range odds {
		o := &odds[i]
		if !o.entry || o.damage != nil {
			continue
		}
		if j, ok := sealAt[o.computed]; ok && !claimed[j] {
			claimed[j], o.from = true, odds[j].id
		}
	}
	for i := range odds {
		o := &odds[i]
		switch {
		case o.id < 1:
			r.find(Added, o.id, o.id, "entry %d was added: it was never logged", o.id)
		case o.entry && o.from == o.id:
			r.find(Altered, o.id, o.id, "entry %d was altered: its hash is not that of its content, which is as logged", o.id)
		case o.entry && o.from != 0:
			r.Findings = append(r.Findings, Finding{Kind: Moved, First: o.id, Last: o.id, from: o.from}) // gather makes the sentence
			if o.seal && !claimed[i] {
				r.find(Removed, o.id, o.id, "%s removed", subject(o.id, o.id))
			}
		case o.entry && o.seal && !claimed[i]:
			r.find(Altered, o.id, o.id, "entry %d was altered: %s", o.id, o.how())
		case o.entry && !o.seal && o.damage == nil && o.follow && o.next == o.computed:
			r.find(Altered, o.id, o.id, "entry %d is as logged; its seal was removed", o.id)
		case o.entry:
			r.find(Added, o.id, o.id, "entry %d was added: it was never logged", o.id)
		case !claimed[i]:
			r.find(Removed, o.id, o.id, "%s removed", subject(o.id, o.id))
		}
	}
}

// how tells in what way an entry and its seal differ.
func (o *odd) how() string {
	switch {
	case o.damage != nil:
		return o.damage.Error()
	case o.stored != o.computed:
		return "its content does not give its hash"
	case o.follow && o.next == o.computed:
		return "its seal; the entry itself is as logged"
	}
	return "its content, and its hash was made to fit"
}

func (r *Report) find(kind Kind, first, last int64, format string, args ...any) {
	r.Findings = append(r.Findings, Finding{Kind: kind, First: first, Last: last, Text: fmt.Sprintf(format, args...)})
}

func (r *Report) covers(id int64) bool {
	for _, f := range r.Findings {
		if f.First <= id && id <= f.Last {
			return true
		}
	}
	return false
}

// gather puts the findings in order and says once what was done to a row of entries.
func (r *Report) gather() {
	sort.SliceStable(r.Findings, func(i, j int) bool { return r.Findings[i].First < r.Findings[j].First })
	var out []Finding
	last := map[Kind]int{} // of each kind, in out
	for _, f := range r.Findings {
		if i, ok := last[f.Kind]; ok && out[i].Last+1 == f.First &&
			(f.Kind == Removed || f.Kind == Moved && out[i].from-out[i].First == f.from-f.First) {
			out[i].Last = f.Last
			if f.Kind == Removed {
				out[i].Text = subject(out[i].First, f.Last) + " removed"
			}
			continue
		}
		out = append(out, f)
		last[f.Kind] = len(out) - 1
	}
	for i := range out {
		if f := &out[i]; f.Kind == Moved {
			f.Text = fmt.Sprintf("what stands as %s was logged as %s", these(f.First, f.Last), these(f.from, f.from+f.Last-f.First))
		}
	}
	r.Findings = out
}

func these(first, last int64) string {
	if first == last {
		return fmt.Sprintf("entry %d", first)
	}
	return fmt.Sprintf("entries %d to %d", first, last)
}

func subject(first, last int64) string {
	if first == last {
		return these(first, last) + " was"
	}
	return these(first, last) + " were"
}
