package ledger

import (
	"context"
	"crypto/sha256"
	"encoding/json"
	"errors"
	"fmt"
	"io"
)

func (s *store) Import(ctx context.Context, from io.Reader) (added int64, err error) {
	var last int64
	var hash Digest
	err = s.write(ctx, func(q querier) (err error) {
		if last, hash, err = head(ctx, q); err != nil {
			return err
		}
		first := last
		decoder := json.NewDecoder(from)
		decoder.DisallowUnknownFields()
		var before Digest
		for n := int64(1); ; n++ {
			var e Entry
			if err := decoder.Decode(&e); errors.Is(err, io.EOF) {
				break
			} else if err != nil {
				return fmt.Errorf("entry %d of the import cannot be read: %w", n, err)
			}
			if err := whole(&e, n, before); err != nil {
				return err
			}
			before = e.Hash
			if n <= last {
				if there, err := sealed(ctx, q, n, e.Hash); err != nil {
					return err
				} else if !there {
					return fmt.Errorf("entry %d of the import is not entry %[1]d of the log: two logs cannot be made one chain; import into an empty log", n)
				}
				continue
			}
			if err := insert(ctx, q, &e, pack(e.Plan), pack(e.Readings), pack(e.Result)); err != nil {
				return fmt.Errorf("entry %d of the import: %w", n, err)
			}
			last, hash = n, e.Hash
		}
		added = last - first
		return nil
	}, func(q querier) (bool, error) { return sealed(ctx, q, last, hash) })
	var unsure *Unsure
	if errors.As(err, &unsure) {
		unsure.Entry.ID, unsure.Entry.Hash = last, hash
		return 0, unsure
	}
	if err != nil {
		return 0, fmt.Errorf("nothing was imported: %w", err)
	}
	return added, nil
}

// whole tells what is wrong with entry n of an import, which is to follow the hash
// before.
func whole(e *Entry, n int64, before Digest) error {
	if e.ID != n {
		return fmt.Errorf("entry %d of the import says that it is entry %d: entries were added, removed or moved", n, e.ID)
	}
	if e.Previous != before {
		return fmt.Errorf("entry %d of the import does not follow the one before it: entries were added, removed or moved", n)
	}
	for _, part := range []struct {
		name    string
		content []byte
		hash    Digest
	}{{"plan", e.Plan, e.PlanSHA256}, {"readings", e.Readings, e.ReadingsSHA256}, {"result", e.Result, e.ResultSHA256}} {
		if sha256.Sum256(part.content) != part.hash {
			return fmt.Errorf("entry %d of the import was altered: its %s does not give its SHA-256", n, part.name)
		}
	}
	if e.Seal() != e.Hash {
		return fmt.Errorf("entry %d of the import was altered: its content does not give its hash", n)
	}
	if err := e.Record.check(); err != nil {
		return fmt.Errorf("entry %d of the import: %w", n, err)
	}
	return nil
}
