package ledger

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"testing"
	"time"
)

func BenchmarkPack(b *testing.B) {
	whole, err := os.ReadFile("testdata/arrival-result.json")
	must(b, err)
	compact, err := Compact(whole)
	must(b, err)
	plan, err := os.ReadFile("../testdata/cases/arrival.toml")
	must(b, err)
	for _, c := range []struct {
		name string
		b    []byte
	}{{"plan", plan}, {"result", whole}, {"compact", compact}} {
		packed := pack(c.b)
		b.Run("pack/"+c.name, func(b *testing.B) {
			b.SetBytes(int64(len(c.b)))
			for b.Loop() {
				pack(c.b)
			}
		})
		b.Run("unpack/"+c.name, func(b *testing.B) {
			b.SetBytes(int64(len(c.b)))
			for b.Loop() {
				if _, err := unpack(packed); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

var entries = flag.Int("entries", 1_000_000, "entries of the logs that benchmarks make")

// generate fills a log past Add, many entries a transaction and without packing
// anything twice.
func generate(b testing.TB, s Store, n int) {
	b.Helper()
	plan, readings, result := invented(0).Plan, invented(0).Readings, invented(0).Result
	packed := [3][]byte{pack(plan), pack(readings), pack(result)}
	began := time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)
	var last Digest
	for i := 1; i <= n; {
		must(b, s.(*store).write(background, func(q querier) error {
			for until := min(n, i+50_000); i <= until; i++ {
				e := Entry{ID: int64(i), Logged: began.Add(time.Duration(i) * time.Minute), Record: invented(i), Previous: last,
					PlanSHA256: hashOf(plan), ReadingsSHA256: hashOf(readings), ResultSHA256: hashOf(result)}
				e.Hash = e.Seal()
				last = e.Hash
				if err := insert(background, q, &e, packed[0], packed[1], packed[2]); err != nil {
					return err
				}
			}
			return nil
		}, nil))
	}
}

// BenchmarkLog times a log of a million entries: a hundred of each of ten thousand
// detectors.
func BenchmarkLog(b *testing.B) {
	for _, backend := range []backend{sqliteBackend, postgresBackend} {
		b.Run(backend.name, func(b *testing.B) {
			location := backend.location(b)
			s := open(b, location)
			began := time.Now()
			generate(b, s, *entries)
			b.Logf("%d entries generated in %v", *entries, time.Since(began).Round(time.Second))
			if backend.name == "postgres" {
				must(b, backend.raw(location, "ANALYZE log_entry; ANALYZE log_range; ANALYZE log_seal"))
			} else if info, err := os.Stat(location); err == nil {
				b.Logf("%d B an entry", info.Size()/int64(*entries))
			}
			b.Run("add", func(b *testing.B) {
				i := 0
				for b.Loop() {
					i++
					_, err := s.Add(background, invented(i))
					must(b, err)
				}
			})
			b.Run("list", func(b *testing.B) {
				i := 0
				for b.Loop() {
					i++
					found, err := s.List(background, Filter{Serial: fmt.Sprintf("D-%04d", 1+i*37%9999)})
					must(b, err)
					if len(found) < *entries/10_000 {
						b.Fatalf("%d entries of one detector", len(found))
					}
				}
			})
			b.Run("show", func(b *testing.B) {
				i := 0
				for b.Loop() {
					i++
					_, err := s.Show(background, int64(1+i*7919%*entries))
					must(b, err)
				}
			})
			b.Run("check", func(b *testing.B) { benchmarkCheck(b, s) })
		})
	}
}

func benchmarkCheck(b *testing.B, s Store) {
	var read, content int64
	for b.Loop() {
		r, err := s.Check(background)
		must(b, err)
		if !r.Sound() {
			b.Fatal(r.Findings)
		}
		read, content = read+r.Entries, content+r.Bytes
	}
	b.ReportMetric(float64(read)/b.Elapsed().Seconds(), "entries/s")
	b.ReportMetric(float64(content)/b.Elapsed().Seconds()/1e6, "MB/s")
}

// BenchmarkCheckWhole checks entries of 52 steps, whole.
func BenchmarkCheckWhole(b *testing.B) {
	for _, backend := range []backend{sqliteBackend, postgresBackend} {
		b.Run(backend.name, func(b *testing.B) {
			s := open(b, backend.location(b))
			r := arrival(b)
			b.Run("add", func(b *testing.B) {
				for b.Loop() {
					_, err := s.Add(background, r)
					must(b, err)
				}
			})
			for range 2000 {
				_, err := s.Add(background, r)
				must(b, err)
			}
			b.Run("check", func(b *testing.B) { benchmarkCheck(b, s) })
		})
	}
}

// arrival is the calibration of 52 steps that sizes are stated of.
func arrival(t testing.TB) Record {
	t.Helper()
	r := invented(1)
	for _, f := range []struct {
		name string
		into *[]byte
	}{{"../testdata/cases/arrival.toml", &r.Plan}, {"../testdata/cases/arrival.csv", &r.Readings}, {"testdata/arrival-result.json", &r.Result}} {
		b, err := os.ReadFile(f.name)
		must(t, err)
		*f.into = b
	}
	var err error
	r.Result, err = Compact(r.Result)
	must(t, err)
	return r
}

// BenchmarkFlush is the disk's own: a file grows by a page and is flushed.
func BenchmarkFlush(b *testing.B) {
	file, err := os.Create(filepath.Join(b.TempDir(), "flushed"))
	must(b, err)
	defer file.Close()
	page := make([]byte, 4096)
	for b.Loop() {
		_, err := file.Write(page)
		must(b, err)
		must(b, file.Sync())
	}
}
