package ledger

import (
	"bytes"
	"compress/flate"
	"encoding/json"
	"math"
	"os"
	"testing"

	"pgregory.net/rapid"
)

func TestPackGivesBackEveryByte(t *testing.T) {
	for _, s := range []string{"", "\x00", "1.50000", "0012345.678", "1e-06 123456e5 0.0000123456 12345.6E7 1.23456e+21", "12345678901234567890.5", "{\"a\":-0.000123456}"} {
		same(t, []byte(s))
		same(t, bytes.Repeat([]byte(s), 40))
	}
	rapid.Check(t, func(t *rapid.T) { same(t, rapid.SliceOf(rapid.Byte()).Draw(t, "bytes")) })
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.SliceOf(rapid.OneOf(rapid.StringMatching(`[-+.eE0-9]{1,30}`), rapid.StringMatching(`[0-9]{1,3}\.[0-9]{5,25}(e-[0-9]{1,3})?`))).Draw(t, "digits")
		b, err := json.Marshal(text)
		if err != nil {
			t.Fatal(err)
		}
		same(t, b)
	})
	rapid.Check(t, func(t *rapid.T) {
		numbers := rapid.SliceOf(rapid.Float64Range(-math.MaxFloat64, math.MaxFloat64)).Draw(t, "numbers")
		b, err := json.MarshalIndent(append(numbers, numbers...), "", "  ")
		if err != nil {
			t.Fatal(err)
		}
		same(t, b)
	})
}

type fatal interface{ Fatalf(string, ...any) }

func same(t fatal, b []byte) {
	back, err := unpack(pack(b))
	if err != nil || !bytes.Equal(back, b) {
		t.Fatalf("%q comes back as %q, %v", b, back, err)
	}
}

// Bytes that pack did not write are an error or other content, never a panic.
func TestUnpackOfDamage(t *testing.T) {
	result, err := os.ReadFile("testdata/arrival-result.json")
	must(t, err)
	packed := pack(result)
	if packed[0] != apart {
		t.Fatalf("a result is packed in form %d", packed[0])
	}
	rapid.Check(t, func(t *rapid.T) {
		b := bytes.Clone(packed)
		for range rapid.IntRange(1, 3).Draw(t, "how many") {
			b[rapid.IntRange(0, len(b)-1).Draw(t, "where")] ^= byte(rapid.IntRange(1, 255).Draw(t, "change"))
		}
		if back, err := unpack(b); err == nil && bytes.Equal(back, result) && b[0] == packed[0] {
			// Unused bits at the end of a DEFLATE stream carry nothing.
			if again := pack(back); !bytes.Equal(again, packed) {
				t.Fatalf("not deterministic")
			}
		}
	})
	for _, b := range [][]byte{nil, {9}, {deflate}, {apart}, {apart, 200}, packed[:len(packed)-3], append(bytes.Clone(packed), 0)} {
		if _, err := unpack(b); err == nil {
			t.Errorf("%d bytes beginning %v were taken", len(b), b[:min(3, len(b))])
		}
	}
}

func TestCompact(t *testing.T) {
	got, err := Compact([]byte("{ \"U\" : 1.23456789012e-5,\n\"n\": [70040, 9999999999.5, 0.1, -1.2345678949],\"text\": \"1.23456789012 \\\" [A]\" }"))
	must(t, err)
	if want := `{"U":0.0000123456789,"n":[70040,10000000000,0.1,-1.23456789],"text":"1.23456789012 \" [A]"}`; string(got) != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
	if _, err := Compact([]byte("{")); err == nil {
		t.Error("half a result was taken")
	}
}

// A calibration of 52 steps, three readings each, is to take at most 6000 bytes of
// the file, all told.
func TestSizeOfAnEntry(t *testing.T) {
	r := arrival(t)
	compact := r.Result
	whole, err := os.ReadFile("testdata/arrival-result.json")
	must(t, err)
	t.Logf("plan %d B packed in %d, readings %d in %d", len(r.Plan), len(pack(r.Plan)), len(r.Readings), len(pack(r.Readings)))
	for _, c := range []struct {
		name   string
		result []byte
		most   int64
	}{{"result as it is", whole, 9000}, {"result made compact", compact, 6000}} {
		var plain bytes.Buffer
		w, err := flate.NewWriter(&plain, flate.BestCompression)
		must(t, err)
		_, err = w.Write(c.result)
		must(t, err)
		must(t, w.Close())
		r.Result = c.result
		took := fileSize(t, r, 101) - fileSize(t, r, 1)
		t.Logf("%s: %d B, %d by DEFLATE alone, %d packed; an entry takes %d B of the file", c.name, len(c.result), plain.Len(), len(pack(c.result)), took/100)
		if took/100 > c.most {
			t.Errorf("%s: an entry takes %d B, more than %d", c.name, took/100, c.most)
		}
	}
}

// fileSize is the size of a closed log of n equal entries.
func fileSize(t *testing.T, r Record, n int) int64 {
	location := sqliteBackend.location(t)
	s := open(t, location)
	for range n {
		_, err := s.Add(background, r)
		must(t, err)
	}
	must(t, s.Close())
	info, err := os.Stat(location)
	must(t, err)
	return info.Size()
}
