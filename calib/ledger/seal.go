package ledger

import (
	"crypto/sha256"
	"encoding/binary"
	"math"
)

// sealHeader begins what is hashed, and names its version.
const sealHeader = "rungproof log entry 1\n"

// Seal computes the entry's hash: the SHA-256 of
//
//	the header "rungproof log entry 1\n",
//	then each field as its length in bytes (8 bytes, big-endian) and its bytes:
//	Previous (32 bytes), Logged (as "2006-01-02T15:04:05.000000Z"), Who, Software, Serial, Date,
//	Condition, Temperature, Verdict, Note,
//	Gain, Offset and SeriesResistance, each Value, U, K,
//	the number of Ranges, and of each Range, Value, U, K,
//	the number of Standards, and each,
//	Supersedes, Reason, PlanSHA256, ReadingsSHA256, ResultSHA256 (32 bytes each).
//
// Text is UTF-8; a number is 8 bytes, big-endian, that of IEEE 754 for a float64; what
// is absent has length 0. The ID is not hashed: the chain gives an entry its place.
// Plan, readings and result enter by their own SHA-256.
func (e *Entry) Seal() Digest {
	b := make(canon, 0, 1024)
	b = append(b, sealHeader...)
	b.bytes(e.Previous[:])
	b.text(e.Logged.UTC().Format(timeLayout))
	for _, s := range []string{e.Who, e.Software, e.Serial, e.Date, e.Condition} {
		b.text(s)
	}
	b.optional(e.Temperature)
	b.text(e.Verdict)
	b.text(e.Note)
	for _, p := range []*Parameter{e.Gain, e.Offset, e.SeriesResistance} {
		if p == nil {
			b.bytes(nil)
			b.bytes(nil)
			b.bytes(nil)
			continue
		}
		b.parameter(*p)
	}
	b.number(uint64(len(e.Ranges)))
	for _, r := range e.Ranges {
		b.number(math.Float64bits(r.Range))
		b.parameter(r.Parameter)
	}
	b.number(uint64(len(e.Standards)))
	for _, s := range e.Standards {
		b.text(s)
	}
	if e.Supersedes == 0 {
		b.bytes(nil)
	} else {
		b.number(uint64(e.Supersedes))
	}
	b.text(e.Reason)
	b.bytes(e.PlanSHA256[:])
	b.bytes(e.ReadingsSHA256[:])
	b.bytes(e.ResultSHA256[:])
	return sha256.Sum256(b)
}

// canon is the encoding that Seal describes, as it grows.
type canon []byte

func (b *canon) bytes(field []byte) {
	*b = binary.BigEndian.AppendUint64(*b, uint64(len(field)))
	*b = append(*b, field...)
}

func (b *canon) text(s string) {
	*b = binary.BigEndian.AppendUint64(*b, uint64(len(s)))
	*b = append(*b, s...)
}

func (b *canon) number(n uint64) {
	*b = binary.BigEndian.AppendUint64(*b, 8)
	*b = binary.BigEndian.AppendUint64(*b, n)
}

func (b *canon) optional(x *float64) {
	if x == nil {
		b.bytes(nil)
		return
	}
	b.number(math.Float64bits(*x))
}

func (b *canon) parameter(p Parameter) {
	b.number(math.Float64bits(p.Value))
	b.number(math.Float64bits(p.U))
	b.number(math.Float64bits(p.K))
}
