package ledger

import (
	"bufio"
	"flag"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"
)

var kills = flag.Int("kills", 10, "how often the program is killed while it adds to a log")

// The test binary run with this variable is a program that adds n entries to the log at
// a location, "n location", and prints the id and the hash of each once it is added.
const adderVariable = "RUNGPROOF_TEST_ADDER"

func TestMain(m *testing.M) {
	if n, location, ok := strings.Cut(os.Getenv(adderVariable), " "); ok {
		if err := adder(n, location); err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(1)
		}
		os.Exit(0)
	}
	flag.Parse()
	os.Exit(m.Run())
}

func adder(count, location string) error {
	n, err := strconv.Atoi(count)
	if err != nil {
		return err
	}
	s, err := Open(background, location)
	if err != nil {
		return err
	}
	for i := range n {
		e, err := s.Add(background, invented(i))
		if err != nil {
			return err
		}
		fmt.Println(e.ID, e.Hash)
	}
	return s.Close()
}

func startAdder(t *testing.T, n int, location string) (*exec.Cmd, *bufio.Scanner) {
	t.Helper()
	c := exec.Command(os.Args[0])
	c.Env = append(os.Environ(), fmt.Sprintf("%s=%d %s", adderVariable, n, location))
	c.Stderr = os.Stderr
	out, err := c.StdoutPipe()
	must(t, err)
	must(t, c.Start())
	return c, bufio.NewScanner(out)
}

// readAdded reads what an adder reports into added, by id. The last line may be cut off
// where it was killed.
func readAdded(lines *bufio.Scanner, report func(id int64, hash string)) {
	for lines.Scan() {
		var id int64
		var hash string
		if n, err := fmt.Sscan(lines.Text(), &id, &hash); err == nil && n == 2 && len(hash) == 64 {
			report(id, hash)
		}
	}
}

// Four programs at once lose nothing, and begin with the log's creation.
func TestFourProcesses(t *testing.T) {
	each := 500
	if testing.Short() {
		each = 50
	}
	onBoth(t, func(t *testing.T, b backend) {
		location := b.location(t)
		var mutex sync.Mutex
		added := map[int64]string{}
		var all sync.WaitGroup
		for range 4 {
			c, lines := startAdder(t, each, location)
			all.Go(func() {
				readAdded(lines, func(id int64, hash string) {
					mutex.Lock()
					defer mutex.Unlock()
					if added[id] != "" {
						t.Errorf("entry %d was reported twice", id)
					}
					added[id] = hash
				})
				if err := c.Wait(); err != nil {
					t.Error(err)
				}
			})
		}
		all.Wait()
		if len(added) != 4*each {
			t.Errorf("%d entries reported as added, want %d", len(added), 4*each)
		}
		s := open(t, location)
		if r, text := checked(t, s); !r.Sound() || r.Entries != int64(4*each) {
			t.Errorf("the log has %d entries; %s", r.Entries, text)
		}
		holdsReported(t, s, added)
	})
}

// A program killed at any moment leaves a log that opens, checks, and has every entry
// that was reported.
func TestKilled(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		location := b.location(t)
		added := map[int64]string{}
		for range *kills {
			c, lines := startAdder(t, 1<<30, location)
			first := make(chan bool)
			done := make(chan bool)
			go func() {
				defer close(done)
				once := sync.OnceFunc(func() { close(first) })
				defer once()
				readAdded(lines, func(id int64, hash string) {
					added[id] = hash
					once()
				})
			}()
			if rand.IntN(4) > 0 { // else perhaps while the log is being opened
				<-first
			}
			time.Sleep(time.Duration(rand.IntN(40_000)) * time.Microsecond)
			must(t, c.Process.Kill())
			<-done
			if err := c.Wait(); err == nil || !strings.Contains(err.Error(), "killed") {
				t.Fatalf("the program was to be killed: %v", err)
			}
			s := open(t, location)
			if r, text := checked(t, s); !r.Sound() || r.Entries < int64(len(added)) {
				t.Fatalf("the log has %d entries, %d were reported; %s", r.Entries, len(added), text)
			}
			holdsReported(t, s, added)
			must(t, s.Close())
		}
		t.Logf("%d kills, %d entries reported", *kills, len(added))
	})
}

func holdsReported(t *testing.T, s Store, added map[int64]string) {
	t.Helper()
	found, err := s.List(background, Filter{})
	must(t, err)
	at := map[int64]string{}
	for _, e := range found {
		at[e.ID] = e.Hash.String()
	}
	for id, hash := range added {
		if at[id] != hash {
			t.Fatalf("entry %d was reported as added with hash %s; the log has %q", id, hash, at[id])
		}
	}
}
