package ledger

import (
	"context"
	"crypto/sha256"
	"errors"
	"fmt"
	"time"
)

func (s *store) Add(ctx context.Context, r Record) (Entry, error) {
	e := Entry{Record: r}
	if err := e.Record.check(); err != nil {
		return Entry{}, fmt.Errorf("not added to the log: %w", err)
	}
	e.PlanSHA256, e.ReadingsSHA256, e.ResultSHA256 = sha256.Sum256(r.Plan), sha256.Sum256(r.Readings), sha256.Sum256(r.Result)
	plan, readings, result := pack(r.Plan), pack(r.Readings), pack(r.Result)
	err := s.write(ctx, func(q querier) error {
		last, hash, err := head(ctx, q)
		if err != nil {
			return err
		}
		if e.Supersedes != 0 {
			if err := superseded(ctx, q, &e); err != nil {
				return err
			}
		}
		e.ID, e.Previous, e.Logged = last+1, hash, time.Now().UTC().Truncate(time.Microsecond)
		e.Hash = e.Seal()
		return insert(ctx, q, &e, plan, readings, result)
	}, func(q querier) (bool, error) {
		return sealed(ctx, q, e.ID, e.Hash)
	})
	if err != nil {
		var unsure *Unsure
		if errors.As(err, &unsure) {
			unsure.Entry = e
			return Entry{}, unsure
		}
		return Entry{}, fmt.Errorf("not added to the log: %w", err)
	}
	return e, nil
}

// Unsure is the error of an Add or an Import whose connection was lost while the
// database was committing, and that could not connect again to ask. What was added is
// whole in the log or absent.
type Unsure struct {
	Entry Entry // as it is if it is there; of an import the last one's ID and Hash
	Cause error
}

func (u *Unsure) Error() string {
	return fmt.Sprintf("%v while entry %d (hash %s) was being committed: it is in the log whole or not at all; list the log before adding it again: %v",
		ErrLost, u.Entry.ID, u.Entry.Hash, u.Cause)
}

func (u *Unsure) Unwrap() []error { return []error{ErrLost, u.Cause} }

// head is the last entry by the seals.
func head(ctx context.Context, q querier) (id int64, hash Digest, err error) {
	var b []byte
	if _, err = one(ctx, q, `SELECT id, hash FROM log_seal ORDER BY id DESC LIMIT 1`, nil, &id, &b); err != nil {
		return 0, hash, err
	}
	copy(hash[:], b)
	return id, hash, nil
}

// sealed tells whether an entry is in the log with this hash.
func sealed(ctx context.Context, q querier, id int64, hash Digest) (bool, error) {
	var b []byte
	found, err := one(ctx, q, `SELECT hash FROM log_seal WHERE id = $1`, []any{id}, &b)
	return found && string(b) == string(hash[:]), err
}

// superseded checks the entry that e is to supersede.
func superseded(ctx context.Context, q querier, e *Entry) error {
	var serial string
	found, err := one(ctx, q, `SELECT serial FROM log_entry WHERE id = $1`, []any{e.Supersedes}, &serial)
	if err != nil {
		return err
	}
	if !found {
		return fmt.Errorf("it supersedes entry %d: %w", e.Supersedes, ErrNoEntry)
	}
	if serial != e.Serial {
		return fmt.Errorf("it supersedes entry %d, which is of detector %s and not of %s", e.Supersedes, serial, e.Serial)
	}
	var by int64
	found, err = one(ctx, q, `SELECT id FROM log_entry WHERE supersedes = $1`, []any{e.Supersedes}, &by)
	if err == nil && found {
		err = fmt.Errorf("it supersedes entry %d, which entry %d supersedes already; supersede that one", e.Supersedes, by)
	}
	return err
}

func (s *store) List(ctx context.Context, f Filter) ([]Entry, error) {
	c := choice{where: "1 = 1", order: "e.measured, e.id", by: true}
	and := func(condition string, value string) {
		c.args = append(c.args, value)
		c.where += fmt.Sprintf(" AND "+condition+" $%d", len(c.args))
	}
	if f.Serial != "" {
		and("e.serial =", f.Serial)
	}
	for _, bound := range []struct{ name, date, condition string }{{"from", f.From, "e.measured >="}, {"to", f.To, "e.measured <="}} {
		if bound.date == "" {
			continue
		}
		if err := checkDate(bound.date); err != nil {
			return nil, fmt.Errorf("%s: %w", bound.name, err)
		}
		and(bound.condition, bound.date)
	}
	if f.InForce {
		c.where += " AND NOT EXISTS (SELECT 1 FROM log_entry n WHERE n.supersedes = e.id)"
	}
	return s.entries(ctx, c)
}

func (s *store) Show(ctx context.Context, id int64) (Entry, error) {
	found, err := s.entries(ctx, choice{where: byID + "= $1", args: []any{id}, order: "e.id", content: true, by: true})
	if err != nil {
		return Entry{}, err
	}
	if len(found) == 0 {
		return Entry{}, fmt.Errorf("entry %d: %w", id, ErrNoEntry)
	}
	return found[0], nil
}

// entries reads what is chosen and takes no damaged entry.
func (s *store) entries(ctx context.Context, c choice) (out []Entry, err error) {
	err = s.read(ctx, func(q querier) error {
		rows, _, err := load(ctx, q, c)
		for i := range rows {
			if rows[i].damage != nil {
				return fmt.Errorf("entry %d of the log was altered: %w; check the log", rows[i].ID, rows[i].damage)
			}
			out = append(out, rows[i].Entry)
		}
		return err
	})
	return out, err
}
