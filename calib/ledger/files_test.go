package ledger

import (
	"errors"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
)

// protect takes the permission to write from a file.
func protect(t testing.TB, location string) string {
	must(t, os.Chmod(location, 0o444))
	return location
}

func TestFolderIsMade(t *testing.T) {
	location := filepath.Join(t.TempDir(), "a folder", "näxt ? 100 %", "calibrations #1.log")
	s := open(t, location)
	_, err := s.Add(background, invented(1))
	must(t, err)
	must(t, s.Close())
	if _, err := os.Stat(location); err != nil {
		t.Error(err)
	}
	left, err := os.ReadDir(filepath.Dir(location))
	must(t, err)
	if len(left) != 1 {
		t.Errorf("a closed log is one file, and there are %d", len(left))
	}
}

func TestReadOnlyFile(t *testing.T) {
	s, location := filled(t, sqliteBackend, 3)
	must(t, s.Close())
	stillReads(t, open(t, protect(t, location)))
}

func stillReads(t *testing.T, s Store) {
	t.Helper()
	if _, err := s.Add(background, invented(9)); !errors.Is(err, ErrReadOnly) || !strings.Contains(err.Error(), "read-only") {
		t.Errorf("add: %v", err)
	}
	if found, err := s.List(background, Filter{}); err != nil || len(found) != 3 {
		t.Errorf("list: %d entries, %v", len(found), err)
	}
	if r, text := checked(t, s); !r.Sound() || r.Entries != 3 {
		t.Errorf("check: %d entries, %s", r.Entries, text)
	}
}

func TestReadOnlyDisk(t *testing.T) {
	dir := t.TempDir()
	mount(t, dir, "size=4m", false)
	location := filepath.Join(dir, "log")
	s := open(t, location)
	for i := range 3 {
		_, err := s.Add(background, invented(i))
		must(t, err)
	}
	must(t, s.Close())
	mount(t, dir, "size=4m", true)
	stillReads(t, open(t, location))
}

func TestFullDisk(t *testing.T) {
	dir := t.TempDir()
	mount(t, dir, "size=600k", false)
	ballast := filepath.Join(dir, "ballast")
	must(t, os.WriteFile(ballast, make([]byte, 200<<10), 0o600))
	location := filepath.Join(dir, "log")
	s := open(t, location)
	var added []Entry
	for full := 0; full < 5; { // again and again: a failure leaves nothing half done
		e, err := s.Add(background, invented(len(added)))
		if err == nil {
			added = append(added, e)
			continue
		}
		full++
		if !errors.Is(err, ErrFull) || !strings.Contains(err.Error(), "not added") {
			t.Fatalf("after %d entries: %v", len(added), err)
		}
	}
	if len(added) < 20 {
		t.Fatalf("the disk held %d entries", len(added))
	}
	holds(t, s, added)
	must(t, os.Remove(ballast))
	e, err := s.Add(background, invented(1))
	must(t, err)
	holds(t, s, append(added, e))
	must(t, s.Close())
	holds(t, open(t, location), append(added, e))
}

// holds tells whether a log is sound and has these entries and no others.
func holds(t *testing.T, s Store, entries []Entry) {
	t.Helper()
	r, text := checked(t, s)
	if !r.Sound() || r.Entries != int64(len(entries)) {
		t.Fatalf("%d entries of %d; %s", r.Entries, len(entries), text)
	}
	if n := len(entries); n > 0 && r.Head != entries[n-1].Hash { // the chain vouches for the others
		t.Fatalf("the last entry's hash is %s, want %s", r.Head, entries[n-1].Hash)
	}
}

func TestNotALog(t *testing.T) {
	dir := t.TempDir()
	text := filepath.Join(dir, "notes.txt")
	must(t, os.WriteFile(text, []byte("a calibration a year\n"), 0o600))
	other := filepath.Join(dir, "stock.sqlite")
	must(t, sqliteBackend.raw(other, "CREATE TABLE stock (part TEXT)"))
	for _, location := range []string{text, other} {
		before, err := os.ReadFile(location)
		must(t, err)
		_, err = Open(background, location)
		if !errors.Is(err, ErrNotALog) || !strings.Contains(err.Error(), location) {
			t.Errorf("%s: %v", location, err)
		}
		after, err := os.ReadFile(location)
		must(t, err)
		if string(before) != string(after) {
			t.Errorf("%s was changed", location)
		}
	}
	if _, err := Open(background, dir); err == nil {
		t.Error("a folder was opened")
	}
	if _, err := Open(background, filepath.Join(text, "log")); err == nil {
		t.Error("a file was taken for a folder")
	}
}

// A log that lost its second half says so, whatever is asked of it.
func TestTruncatedFile(t *testing.T) {
	s, location := filled(t, sqliteBackend, 60)
	must(t, s.Close())
	info, err := os.Stat(location)
	must(t, err)
	must(t, os.Truncate(location, info.Size()/2/1024*1024))
	s, err = Open(background, location)
	if err == nil {
		defer s.Close()
		_, err = s.Check(background)
	}
	if err == nil || !strings.Contains(err.Error(), "damaged") {
		t.Errorf("half a log: %v", err)
	}
}

// mount puts a small disk in memory at dir, or makes it read-only.
func mount(t *testing.T, dir, options string, readOnly bool) {
	t.Helper()
	if runtime.GOOS != "linux" || os.Geteuid() != 0 {
		t.Skip("no small disk: mounting a tmpfs needs Linux and the administrator")
	}
	if err := mountTmpfs(dir, options, readOnly); err != nil {
		t.Skipf("no small disk: %v", err)
	}
	if !readOnly {
		t.Cleanup(func() {
			if err := unmount(dir); err != nil {
				t.Error(err)
			}
		})
	}
}
