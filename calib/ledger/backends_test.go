package ledger

import (
	"context"
	"crypto/sha256"
	"database/sql"
	"fmt"
	"math/rand/v2"
	"net/url"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/jackc/pgx/v5"
)

var background = context.Background()

// backend is a place for logs of one kind, for one test.
type backend struct {
	name string
	// location of a new, empty log
	location func(testing.TB) string
	// raw runs a statement on the log past the package, as a person with a database tool
	// would.
	raw func(location, statement string) error
}

var sqliteBackend = backend{"sqlite",
	func(t testing.TB) string { return filepath.Join(t.TempDir(), "calibrations.log") },
	func(location, statement string) error {
		db, err := sql.Open("sqlite", location)
		if err != nil {
			return err
		}
		defer db.Close()
		_, err = db.Exec(statement)
		return err
	}}

var postgresBackend = backend{"postgres",
	func(t testing.TB) string {
		server := postgresServer(t)
		schema := fmt.Sprintf("log_%x", rand.Uint64())
		must(t, rawPostgres(server, "CREATE SCHEMA "+schema))
		t.Cleanup(func() { must(t, rawPostgres(server, "DROP SCHEMA "+schema+" CASCADE")) })
		u, err := url.Parse(server)
		must(t, err)
		query := u.Query()
		query.Set("search_path", schema)
		u.RawQuery = query.Encode()
		return u.String()
	}, rawPostgres}

// postgresServer is the server that PostgreSQL's tests use.
func postgresServer(t testing.TB) string {
	server := os.Getenv("RUNGPROOF_TEST_POSTGRES")
	if server == "" {
		t.Skip("no PostgreSQL: set RUNGPROOF_TEST_POSTGRES")
	}
	return server
}

func rawPostgres(location, statement string) error {
	conn, err := pgx.Connect(background, location)
	if err != nil {
		return err
	}
	defer conn.Close(background)
	_, err = conn.Exec(background, statement)
	return err
}

// onBoth runs a test on either kind of log.
func onBoth(t *testing.T, test func(*testing.T, backend)) {
	for _, b := range []backend{sqliteBackend, postgresBackend} {
		t.Run(b.name, func(t *testing.T) { test(t, b) })
	}
}

func must(t testing.TB, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

func open(t testing.TB, location string) Store {
	t.Helper()
	s, err := Open(background, location)
	must(t, err)
	t.Cleanup(func() { s.Close() })
	return s
}

// invented is calibration i of a log, small, with every field filled.
func invented(i int) Record {
	temperature := 22.5 + float64(i%7)/10
	u := 1e-4 * (1 + float64(i%5))
	return Record{
		Who: "Bench 2", Software: "rungproof 0.1.0", Serial: fmt.Sprintf("D-%04d", i%10000), Date: fmt.Sprintf("20%02d-%02d-15", 20+i/12%40, 1+i%12),
		Condition: AsFound, Temperature: &temperature, Verdict: "pass", Note: fmt.Sprintf("visit %d, lead of 0.3 Ω", i),
		Gain:   &Parameter{1.0027613126403792 + float64(i)*1e-9, u, 1.9599639845400536},
		Offset: &Parameter{1.197861793096473e-07, 7.7e-10, 2.1}, SeriesResistance: &Parameter{0.31, 0.02, 2},
		Ranges:    []RangeGain{{0.1, Parameter{1.0026, 4e-4, 2}}, {0.01, Parameter{1.0028, 5e-4, 2}}},
		Standards: []string{"bench multimeter", "10 kΩ, no. 3"},
		Plan:      []byte("title = \"visit\"\n[detector]\nserial = \"D\"\n"), Readings: []byte(fmt.Sprintf("step,x\nA1,%d\n", 70000+i)),
		Result: []byte(fmt.Sprintf(`{"verdict":"pass","visit":%d}`, i)),
	}
}

// filled is a log of n entries; the fourth supersedes the second.
func filled(t testing.TB, b backend, n int) (Store, string) {
	t.Helper()
	location := b.location(t)
	s := open(t, location)
	for i := 1; i <= n; i++ {
		r := invented(i)
		r.Serial = "B3-0042"
		if i == 4 {
			r.Supersedes, r.Reason = 2, "the wrong plan"
		}
		_, err := s.Add(background, r)
		must(t, err)
	}
	return s, location
}

// checked is the report of a check, as text.
func checked(t testing.TB, s Store) (Report, string) {
	t.Helper()
	r, err := s.Check(background)
	must(t, err)
	var lines []string
	for _, f := range r.Findings {
		lines = append(lines, fmt.Sprintf("%s %d-%d: %s", f.Kind, f.First, f.Last, f.Text))
	}
	return r, strings.Join(lines, "\n")
}

func hashOf(b []byte) Digest { return sha256.Sum256(b) }
