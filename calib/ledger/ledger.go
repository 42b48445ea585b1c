// Package ledger keeps the log of calibrations: one entry a judged calibration, in
// a file (SQLite) or in a PostgreSQL database, for decades.
//
// Nothing in the log is ever changed or removed. A correction is a new entry that
// names the one it supersedes, with a reason. Each entry carries the SHA-256 of its
// content and of the entry before (see Entry.Seal), and a second table, the seals,
// keeps every entry's hash once more, so that Check can say which entry was altered,
// added or removed. What removes the last entries with their seals, or writes the
// whole log anew, shows only against a hash noted elsewhere.
//
// Values are SI units: V, ohm, 1; temperatures in °C.
package ledger

import (
	"context"
	"errors"
	"io"
	"strings"
)

// Store is a log. It may be used by several goroutines at once.
type Store interface {
	// Add logs one calibration and returns the entry once it is safe on disk. After an
	// error nothing was added, but for *Unsure.
	Add(context.Context, Record) (Entry, error)
	// List gives the entries that the filter lets through, by date of the measurements,
	// then in the order logged, without plan, readings and result.
	List(context.Context, Filter) ([]Entry, error)
	// Show gives one whole entry, or ErrNoEntry.
	Show(ctx context.Context, id int64) (Entry, error)
	// Check walks the chain and finds what was altered, added or removed. The error is
	// of the reading alone: what is wrong with the log stands in the report.
	Check(context.Context) (Report, error)
	// ExportJSON writes the whole log, one entry a line, for Import to read.
	ExportJSON(context.Context, io.Writer) error
	// ExportCSV writes the columns, one entry a row, for a spreadsheet.
	ExportCSV(context.Context, io.Writer) error
	// Import appends an exported log, all of it or nothing, and tells how many entries
	// it added. The log must be empty or hold the first entries of the same chain. After
	// an error nothing was, but for *Unsure.
	Import(context.Context, io.Reader) (added int64, err error)
	// Place names the log, without a password.
	Place() string
	Close() error
}

// Filter chooses entries; its zero value lets all through.
type Filter struct {
	Serial  string // of the detector
	From    string // first date of the measurements, "2026-03-12", inclusive
	To      string // last date, inclusive
	InForce bool   // only entries that no other supersedes
}

var (
	ErrNoEntry  = errors.New("no such entry")
	ErrNotALog  = errors.New("not a rungproof log")
	ErrNewer    = errors.New("the log was written by a newer version of rungproof")
	ErrReadOnly = errors.New("the log is read-only")
	ErrFull     = errors.New("no space is left on the disk of the log")
	ErrLost     = errors.New("the connection to the log was lost")
)

// Open opens the log at a location: "postgres://…" or the path of a file. A file
// that is not there is created, with its folder; so are the tables in a database. A
// log of an older schema is brought to the present one.
func Open(ctx context.Context, location string) (Store, error) {
	open := openSQLite
	if strings.HasPrefix(location, "postgres://") || strings.HasPrefix(location, "postgresql://") {
		open = openPostgres
	}
	db, err := open(ctx, location)
	if err != nil {
		return nil, err
	}
	return &store{db}, nil
}

// store is a log in either database: the statements are the same in both.
type store struct{ database }

// database is what the two kinds of database do in their own ways.
type database interface {
	// read runs do on one consistent state of the log. Several may run at once.
	read(ctx context.Context, do func(querier) error) error
	// write runs do in one transaction, alone among all that write to the log, in this
	// program or another, and commits it. Where the commit's outcome is not known,
	// landed is asked.
	write(ctx context.Context, do func(querier) error, landed func(querier) (bool, error)) error
	Place() string
	Close() error
}

// querier is a connection with a transaction open on it. Parameters are $1, $2, …
type querier interface {
	exec(ctx context.Context, statement string, args ...any) error
	query(ctx context.Context, statement string, args ...any) (rows, error)
}

type rows interface {
	Next() bool
	Scan(...any) error
	Err() error
	Close() error
}

// one reads the first row of an answer; found is false where there is none.
func one(ctx context.Context, q querier, statement string, args []any, into ...any) (found bool, err error) {
	r, err := q.query(ctx, statement, args...)
	if err != nil {
		return false, err
	}
	defer r.Close()
	if !r.Next() {
		return false, r.Err()
	}
	if err := r.Scan(into...); err != nil {
		return false, err
	}
	return true, r.Close()
}
