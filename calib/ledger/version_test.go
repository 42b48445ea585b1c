package ledger

import (
	"database/sql"
	"errors"
	"fmt"
	"os"
	"strings"
	"testing"

	"github.com/jackc/pgx/v5"
)

// testdata/version1.sqlite was written with version 1 of the schema: five entries, of
// which the fourth supersedes the second.
const version1 = "testdata/version1.sqlite"

// Hash of its first entry, computed from Seal's description with Python 3.11's struct
// and hashlib.
const firstHash = "bde59eaf6135eaa72ce78d2415c67933ec37b6982fae7148353412494e322ba0"

// version1Log gives a log of version 1 in a place of its own.
func version1Log(t *testing.T, b backend) string {
	t.Helper()
	location := b.location(t)
	if b.name == "sqlite" {
		content, err := os.ReadFile(version1)
		must(t, err)
		must(t, os.WriteFile(location, content, 0o600))
		return location
	}
	script, err := migrations.ReadFile("schema/postgres1.sql")
	must(t, err)
	must(t, rawPostgres(location, string(script)+"; CREATE TABLE log_version (version INTEGER PRIMARY KEY); INSERT INTO log_version VALUES (1)"))
	db, err := sql.Open("sqlite", "file:"+version1+"?mode=ro&immutable=1")
	must(t, err)
	defer db.Close()
	conn, err := pgx.Connect(background, location)
	must(t, err)
	defer conn.Close(background)
	for _, table := range []string{"log_entry", "log_range"} {
		copyTable(t, db, conn, table)
	}
	return location
}

func copyTable(t *testing.T, from *sql.DB, to *pgx.Conn, table string) {
	t.Helper()
	r, err := from.Query("SELECT * FROM " + table)
	must(t, err)
	defer r.Close()
	names, err := r.Columns()
	must(t, err)
	for r.Next() {
		values, into, marks := make([]any, len(names)), make([]any, len(names)), make([]string, len(names))
		for i := range values {
			into[i], marks[i] = &values[i], fmt.Sprintf("$%d", i+1)
		}
		must(t, r.Scan(into...))
		_, err := to.Exec(background, fmt.Sprintf("INSERT INTO %s (%s) VALUES (%s)", table, strings.Join(names, ", "), strings.Join(marks, ", ")), values...)
		must(t, err)
	}
	must(t, r.Err())
}

func TestLogOfVersion1(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		location := version1Log(t, b)
		s := open(t, location)
		if r, text := checked(t, s); !r.Sound() || r.Entries != 5 {
			t.Errorf("%d entries, %s", r.Entries, text)
		}
		first, err := s.Show(background, 1)
		must(t, err)
		if first.Hash.String() != firstHash || first.Seal().String() != firstHash || first.Note != "visit 1, lead of 0.3 Ω" {
			t.Errorf("entry 1 is %+v", first)
		}
		r := invented(6)
		r.Serial, r.Supersedes, r.Reason = first.Serial, 4, "the plan was right after all"
		_, err = s.Add(background, r)
		must(t, err)
		must(t, s.Close())
		again := open(t, location)
		if r, text := checked(t, again); !r.Sound() || r.Entries != 6 {
			t.Errorf("opened again: %d entries, %s", r.Entries, text)
		}
		inForce, err := again.List(background, Filter{Serial: first.Serial, InForce: true})
		must(t, err)
		if len(inForce) != 4 {
			t.Errorf("%d entries in force, want 1, 3, 5 and 6", len(inForce))
		}
	})
}

// What version 1 kept is found altered by the present one, if it was before the log was
// brought up.
func TestAlteredBeforeMigration(t *testing.T) {
	location := version1Log(t, sqliteBackend)
	forge(t, sqliteBackend, location, "UPDATE log_entry SET note = 'x' WHERE id = 3")
	if _, text := checked(t, open(t, location)); text != "altered 3-3: entry 3 was altered: its content does not give its hash" {
		t.Error(text)
	}
}

func TestReadOnlyLogOfVersion1(t *testing.T) {
	if _, err := Open(background, protect(t, version1Log(t, sqliteBackend))); !errors.Is(err, ErrReadOnly) || !strings.Contains(err.Error(), "version 1") {
		t.Error(err)
	}
}

func TestNewerLog(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		s, location := filled(t, b, 1)
		must(t, s.Close())
		must(t, b.raw(location, map[string]string{"sqlite": "PRAGMA user_version = 9", "postgres": "INSERT INTO log_version VALUES (9)"}[b.name]))
		_, err := Open(background, location)
		if !errors.Is(err, ErrNewer) || !strings.Contains(err.Error(), "version 9") || !strings.Contains(err.Error(), "up to 2") {
			t.Error(err)
		}
	})
}

// The dictionary is part of the format: another one could not read the logs there are.
func TestDictionaryIsKept(t *testing.T) {
	if got := hashOf(dictionary).String(); got != dictionary1 {
		t.Errorf("dictionary1.txt has become %s; restore it, and give a new dictionary a file and a form of its own", got)
	}
}

// as released
const dictionary1 = "d89f3b1e878dec7395792387cb126346b82cca4d184bceb44bd277e0ebec9be4"
