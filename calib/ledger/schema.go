package ledger

import (
	"context"
	"embed"
	"fmt"
)

// Each migration brings a log from the version before to its own. What was released
// is never edited: a new version is a new file.
//
//go:embed schema/*.sql
var migrations embed.FS

// version of the schema that this package reads and writes.
const version = 2

// migrate brings a log of version from (0: none yet) to the present one.
func migrate(ctx context.Context, q querier, kind string, from int, noted func(version int) error) error {
	for v := from + 1; v <= version; v++ {
		script, err := migrations.ReadFile(fmt.Sprintf("schema/%s%d.sql", kind, v))
		if err != nil {
			return err
		}
		if err := q.exec(ctx, string(script)); err != nil {
			return fmt.Errorf("bringing the log from schema version %d to %d: %w", v-1, v, err)
		}
		if err := noted(v); err != nil {
			return err
		}
	}
	return nil
}

// newer tells of a log of a later version.
func newer(place string, found int) error {
	return fmt.Errorf("%s: %w: its schema is version %d and this program knows up to %d; use a newer rungproof", place, ErrNewer, found, version)
}
