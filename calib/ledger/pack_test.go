package ledger

import (
	"os"
	"testing"
)

func TestTrySizes(t *testing.T) {
	for _, f := range []string{"/tmp/try/r.json", "/tmp/try/r2.json", "../testdata/cases/arrival.json"} {
		b, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		c, err := Compact(b)
		if err != nil {
			t.Fatal(err)
		}
		for _, x := range [][]byte{b, c} {
			p := pack(x)
			u, err := unpack(p)
			if err != nil || string(u) != string(x) {
				t.Fatal(err)
			}
			text, n, _ := splitNumbers(x)
			t.Log(f, len(x), "deflate", len(squeeze(nil, x, &words)), "pack", len(p), p[0], len(squeeze(nil, text, &words)), len(squeeze(nil, n.links, &words)), len(squeeze(nil, n.lengths, &words)), len(squeeze(nil, n.exponents, &words)), len(squeeze(nil, n.digits, &figures)), len(n.digits))
		}
	}
	for _, f := range []string{"../testdata/cases/arrival.toml", "../testdata/cases/arrival.csv"} {
		b, _ := os.ReadFile(f)
		t.Log(f, len(b), len(pack(b)))
	}
}
