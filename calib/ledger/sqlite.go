package ledger

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"io"
	"net/url"
	"os"
	"path/filepath"
	"strings"
	"time"

	"modernc.org/sqlite"
	sqlite3 "modernc.org/sqlite/lib"
)

// applicationID marks a SQLite file as a log, "RPLG".
const applicationID = 0x52504c47

// wait is how long a statement waits for other writers.
const wait = 60 * time.Second

// sqliteFile is a log in a file. A writer takes the file's write lock at BEGIN, and a
// commit returns once it is on the disk (WAL, synchronous = FULL).
type sqliteFile struct {
	path     string
	db       *sql.DB
	readOnly bool
}

func openSQLite(ctx context.Context, path string) (database, error) {
	absolute, err := filepath.Abs(path)
	if err != nil {
		return nil, err
	}
	if err := os.MkdirAll(filepath.Dir(absolute), 0o777); err != nil {
		return nil, fmt.Errorf("the log's folder: %w", err)
	}
	f := &sqliteFile{path: path, readOnly: cannotWrite(absolute)}
	if err := headed(path); err != nil {
		return nil, err
	}
	options := url.Values{"_pragma": {fmt.Sprintf("busy_timeout(%d)", wait.Milliseconds()), "page_size(1024)", "cache_size(-16000)", "synchronous(FULL)"}}
	if f.readOnly {
		options.Set("mode", "ro")
		if info, err := os.Stat(absolute + "-wal"); err != nil || info.Size() == 0 {
			options.Set("immutable", "1") // a folder that takes no file is no hindrance
		}
	}
	slashed := "/" + strings.TrimPrefix(filepath.ToSlash(absolute), "/")
	f.db, err = sql.Open("sqlite", (&url.URL{Scheme: "file", Path: slashed, RawQuery: options.Encode()}).String())
	if err != nil {
		return nil, err
	}
	if err := f.prepare(ctx); err != nil {
		return nil, errors.Join(f.explain(err), f.db.Close())
	}
	return f, nil
}

// cannotWrite tells of a file that is there and is not to be written. Its mode counts
// for the administrator too.
func cannotWrite(path string) bool {
	info, err := os.Stat(path)
	if err != nil {
		return false
	}
	file, err := os.OpenFile(path, os.O_RDWR, 0)
	if err != nil {
		return true
	}
	file.Close()
	return info.Mode().Perm()&0o222 == 0
}

// headed refuses a file that is not SQLite's, before anything can be written to it.
func headed(path string) error {
	const magic = "SQLite format 3\x00"
	file, err := os.Open(path)
	if errors.Is(err, os.ErrNotExist) {
		return nil
	}
	if err != nil {
		return err
	}
	defer file.Close()
	head := make([]byte, len(magic))
	n, err := io.ReadFull(file, head)
	if err == io.EOF {
		return nil // empty: it is made a log
	}
	if string(head[:n]) != magic {
		return fmt.Errorf("%s: %w: it is no SQLite file", path, ErrNotALog)
	}
	return nil
}

// prepare makes the file a log, or brings it to the present schema.
func (f *sqliteFile) prepare(ctx context.Context) error {
	found, err := f.version(ctx, f.db)
	if err != nil || found == version {
		return err
	}
	if f.readOnly {
		return fmt.Errorf("%w: its schema is version %d and cannot be brought to %d", ErrReadOnly, found, version)
	}
	if err := f.writeAhead(ctx); err != nil {
		return err
	}
	return f.write(ctx, func(q querier) error {
		found, err := f.version(ctx, q.(sqliteConn).Conn) // another program may have been first
		if err != nil {
			return err
		}
		return migrate(ctx, q, "sqlite", found, func(v int) error {
			return q.exec(ctx, fmt.Sprintf("PRAGMA user_version = %d; PRAGMA application_id = %d", v, applicationID))
		})
	}, nil)
}

type rowQuerier interface {
	QueryRowContext(context.Context, string, ...any) *sql.Row
}

// version is the file's schema version, 0 where the file is empty.
func (f *sqliteFile) version(ctx context.Context, q rowQuerier) (found int, err error) {
	var application, tables int
	if err = q.QueryRowContext(ctx, "SELECT (SELECT user_version FROM pragma_user_version), (SELECT application_id FROM pragma_application_id), (SELECT count(*) FROM sqlite_schema)").Scan(
		&found, &application, &tables); err != nil {
		return 0, err
	}
	if application != applicationID && (application != 0 || tables > 0 || found != 0) {
		return 0, fmt.Errorf("%s: %w: it is a SQLite file of another kind", f.path, ErrNotALog)
	}
	if found > version {
		return found, newer(f.path, found)
	}
	return found, nil
}

// writeAhead puts the file in WAL mode, which is kept in it. The change needs the file
// for itself and does not wait for it by the busy timeout.
func (f *sqliteFile) writeAhead(ctx context.Context) error {
	for began := time.Now(); ; time.Sleep(10 * time.Millisecond) {
		_, err := f.db.ExecContext(ctx, "PRAGMA journal_mode = WAL")
		var e *sqlite.Error
		if err == nil || !errors.As(err, &e) || e.Code()&0xff != sqlite3.SQLITE_BUSY || time.Since(began) > wait {
			return err
		}
	}
}

func (f *sqliteFile) read(ctx context.Context, do func(querier) error) error {
	return f.transaction(ctx, "BEGIN", do)
}

// write needs no asking: a commit of SQLite's that failed is undone.
func (f *sqliteFile) write(ctx context.Context, do func(querier) error, _ func(querier) (bool, error)) error {
	if f.readOnly {
		return fmt.Errorf("%s: %w", f.path, ErrReadOnly)
	}
	return f.transaction(ctx, "BEGIN IMMEDIATE", do)
}

func (f *sqliteFile) transaction(ctx context.Context, begin string, do func(querier) error) error {
	conn, err := f.db.Conn(ctx)
	if err != nil {
		return f.explain(err)
	}
	q := sqliteConn{conn, map[string]*sql.Stmt{}}
	defer q.Close()
	if err := q.exec(ctx, begin); err != nil {
		return f.explain(err)
	}
	if err = do(q); err == nil {
		err = q.exec(ctx, "COMMIT")
	}
	if err != nil {
		// Some failures have undone it already; then there is nothing to roll back.
		_, _ = conn.ExecContext(context.WithoutCancel(ctx), "ROLLBACK")
	}
	return f.explain(err)
}

// explain says in words what SQLite says in numbers.
func (f *sqliteFile) explain(err error) error {
	var e *sqlite.Error
	if !errors.As(err, &e) {
		return err
	}
	kinds := map[int]error{sqlite3.SQLITE_FULL: ErrFull, sqlite3.SQLITE_READONLY: ErrReadOnly, sqlite3.SQLITE_NOTADB: ErrNotALog,
		sqlite3.SQLITE_IOERR:   errors.New("the disk of the log fails, or is full"),
		sqlite3.SQLITE_CORRUPT: errors.New("the file of the log is damaged"),
		sqlite3.SQLITE_BUSY:    fmt.Errorf("other programs kept the log busy for %v", wait)}
	if kind, ok := kinds[e.Code()&0xff]; ok {
		return fmt.Errorf("%s: %w (%v)", f.path, kind, e)
	}
	return fmt.Errorf("%s: %w", f.path, err)
}

func (f *sqliteFile) Place() string { return f.path }
func (f *sqliteFile) Close() error  { return f.explain(f.db.Close()) }

// sqliteConn is a connection in a transaction. What is said again and again is
// compiled once.
type sqliteConn struct {
	*sql.Conn
	compiled map[string]*sql.Stmt
}

func (c sqliteConn) exec(ctx context.Context, statement string, args ...any) error {
	if len(args) == 0 {
		_, err := c.ExecContext(ctx, statement)
		return err
	}
	s := c.compiled[statement]
	if s == nil {
		var err error
		if s, err = c.PrepareContext(ctx, statement); err != nil {
			return err
		}
		c.compiled[statement] = s
	}
	_, err := s.ExecContext(ctx, args...)
	return err
}

func (c sqliteConn) query(ctx context.Context, statement string, args ...any) (rows, error) {
	return c.QueryContext(ctx, statement, args...)
}

func (c sqliteConn) Close() error {
	var errs []error
	for _, s := range c.compiled {
		errs = append(errs, s.Close())
	}
	return errors.Join(append(errs, c.Conn.Close())...)
}
