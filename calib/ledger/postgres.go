package ledger

import (
	"context"
	"errors"
	"fmt"
	"net/url"
	"strings"
	"sync"
	"time"

	"github.com/jackc/pgx/v5"
	"github.com/jackc/pgx/v5/pgconn"
)

// postgres is a log in a PostgreSQL database, in the schema that the location's
// search_path names. Writers take an advisory lock of the database, for the length of
// their transaction.
type postgres struct {
	config *pgx.ConnConfig
	place  string
	settle time.Duration // how long a lost commit's outcome is asked for

	mutex sync.Mutex
	idle  []*pgx.Conn
}

// Advisory locks have two numbers: what is locked, and which. Schemas are locked by
// a hash of their name, logs by the number of their table.
const (
	lockSchema = `SELECT pg_advisory_xact_lock(1919969383, hashtext(current_schema()))`
	lockLog    = `SELECT pg_advisory_xact_lock(1919969384, 'log_entry'::regclass::oid::int)`
)

func openPostgres(ctx context.Context, location string) (database, error) {
	config, err := pgx.ParseConfig(location)
	if err != nil {
		return nil, err // pgx leaves the password out
	}
	p := &postgres{config: config, place: location, settle: 10 * time.Second}
	if u, err := url.Parse(location); err == nil {
		p.place = u.Redacted()
	}
	if err := p.prepare(ctx); err != nil {
		return nil, errors.Join(err, p.Close())
	}
	return p, nil
}

// prepare makes the tables, or brings them to the present schema.
func (p *postgres) prepare(ctx context.Context) error {
	found := 0
	look := func(q querier) error {
		var versions, entries bool
		// to_regclass would answer from a cache that is older than the lock.
		if _, err := one(ctx, q, `SELECT coalesce(bool_or(relname = 'log_version'), false), coalesce(bool_or(relname = 'log_entry'), false)
			FROM pg_class WHERE relnamespace = current_schema()::regnamespace`, nil, &versions, &entries); err != nil {
			return err
		}
		if versions {
			if _, err := one(ctx, q, `SELECT coalesce(max(version), 0) FROM log_version`, nil, &found); err != nil {
				return err
			}
		}
		if entries && found == 0 {
			return fmt.Errorf("%w: its table log_entry was made by another program", ErrNotALog)
		}
		if found > version {
			return newer(p.place, found)
		}
		return nil
	}
	if err := p.read(ctx, look); err != nil || found == version {
		return err
	}
	return p.transaction(ctx, pgx.TxOptions{}, func(q querier) error {
		if err := q.exec(ctx, lockSchema); err != nil {
			return err
		}
		if err := look(q); err != nil { // another program may have been first
			return err
		}
		if found == 0 {
			if err := q.exec(ctx, `CREATE TABLE log_version (version INTEGER PRIMARY KEY)`); err != nil {
				return err
			}
		}
		return migrate(ctx, q, "postgres", found, func(v int) error {
			return q.exec(ctx, `INSERT INTO log_version (version) VALUES ($1)`, v)
		})
	}, nil)
}

func (p *postgres) read(ctx context.Context, do func(querier) error) error {
	return p.transaction(ctx, pgx.TxOptions{IsoLevel: pgx.RepeatableRead, AccessMode: pgx.ReadOnly}, do, nil)
}

// write reads committed: what stands before the lock is taken would else be all that
// the transaction sees.
func (p *postgres) write(ctx context.Context, do func(querier) error, landed func(querier) (bool, error)) error {
	return p.transaction(ctx, pgx.TxOptions{IsoLevel: pgx.ReadCommitted, AccessMode: pgx.ReadWrite}, func(q querier) error {
		if err := q.exec(ctx, lockLog); err != nil {
			return err
		}
		return do(q)
	}, landed)
}

func (p *postgres) transaction(ctx context.Context, options pgx.TxOptions, do func(querier) error, landed func(querier) (bool, error)) error {
	conn, tx, err := p.begin(ctx, options)
	if err != nil {
		return p.explain(conn, err)
	}
	defer p.release(conn)
	if err := do(pgQuerier{tx}); err != nil {
		// A connection that was lost cannot roll back; the server does it.
		_ = tx.Rollback(context.WithoutCancel(ctx))
		return p.explain(conn, err)
	}
	if err = tx.Commit(ctx); err != nil && landed != nil {
		return p.ask(context.WithoutCancel(ctx), landed, p.explain(conn, err))
	}
	return p.explain(conn, err)
}

// ask finds out whether a commit without an answer took place. The lock is what the
// lost transaction holds until the server has done with it.
func (p *postgres) ask(ctx context.Context, landed func(querier) (bool, error), cause error) error {
	ctx, cancel := context.WithTimeout(ctx, p.settle)
	defer cancel()
	for {
		there := false
		err := p.transaction(ctx, pgx.TxOptions{}, func(q querier) (err error) {
			if err = q.exec(ctx, lockLog); err == nil {
				there, err = landed(q)
			}
			return err
		}, nil)
		switch {
		case err == nil && there:
			return nil
		case err == nil:
			return cause
		case ctx.Err() != nil:
			return &Unsure{Cause: cause}
		}
		select {
		case <-ctx.Done():
		case <-time.After(50 * time.Millisecond):
		}
	}
}

// begin opens a transaction on an idle connection that still lives, else on a new
// one.
func (p *postgres) begin(ctx context.Context, options pgx.TxOptions) (*pgx.Conn, pgx.Tx, error) {
	for {
		p.mutex.Lock()
		var conn *pgx.Conn
		if n := len(p.idle); n > 0 {
			conn, p.idle = p.idle[n-1], p.idle[:n-1]
		}
		p.mutex.Unlock()
		used := conn != nil
		if !used {
			var err error
			if conn, err = pgx.ConnectConfig(ctx, p.config.Copy()); err != nil {
				return nil, nil, fmt.Errorf("the log cannot be reached: %w", err)
			}
		}
		tx, err := conn.BeginTx(ctx, options)
		if err == nil {
			return conn, tx, nil
		}
		_ = conn.Close(ctx)
		if !used || ctx.Err() != nil {
			return conn, nil, err
		}
	}
}

func (p *postgres) release(conn *pgx.Conn) {
	if conn.IsClosed() {
		return
	}
	p.mutex.Lock()
	defer p.mutex.Unlock()
	p.idle = append(p.idle, conn)
}

// explain names the log and tells a lost connection from a refusal.
func (p *postgres) explain(conn *pgx.Conn, err error) error {
	if err == nil {
		return nil
	}
	var refused *pgconn.PgError
	if errors.As(err, &refused) {
		switch {
		case strings.HasPrefix(refused.Code, "57P") || strings.HasPrefix(refused.Code, "08"): // the server stops; connection exception
			return fmt.Errorf("%w: %w", ErrLost, err)
		case refused.Code == "53100": // disk full
			return fmt.Errorf("%w: %w", ErrFull, err)
		case refused.Code == "25006" || refused.Code == "42501": // read-only transaction; no privilege
			return fmt.Errorf("%w: %w", ErrReadOnly, err)
		}
		return err
	}
	if conn != nil && conn.IsClosed() {
		return fmt.Errorf("%w: %w", ErrLost, err)
	}
	return err
}

func (p *postgres) Place() string { return p.place }

func (p *postgres) Close() error {
	p.mutex.Lock()
	defer p.mutex.Unlock()
	for _, conn := range p.idle {
		// The log is safe already; a server that has gone closed the connection itself.
		_ = conn.Close(context.Background())
	}
	p.idle = nil
	return nil
}

type pgQuerier struct{ pgx.Tx }

func (q pgQuerier) exec(ctx context.Context, statement string, args ...any) error {
	_, err := q.Exec(ctx, statement, args...)
	return err
}

func (q pgQuerier) query(ctx context.Context, statement string, args ...any) (rows, error) {
	r, err := q.Query(ctx, statement, args...)
	if err != nil {
		return nil, err
	}
	return pgRows{r}, nil
}

type pgRows struct{ pgx.Rows }

func (r pgRows) Close() error {
	r.Rows.Close()
	return r.Err()
}
