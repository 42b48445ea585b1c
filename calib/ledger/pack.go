package ledger

import (
	"bytes"
	"compress/flate"
	_ "embed"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"sync"
)

// Plan, readings and result stand packed in the log. The first byte tells how.
const (
	plain   = 0 // as they are
	deflate = 1 // DEFLATE with the dictionary
	apart   = 2 // numbers set apart from the text around them, see numbers.go
)

// dictionary is text that plans, readings and results have in common. Packed
// content cannot be read without it: it is never to be changed. A better one gets a
// file and a first byte of its own.
//
//go:embed dictionary1.txt
var dictionary []byte

// pack gives the shortest of the forms. unpack gives content back to the byte.
func pack(content []byte) []byte {
	best := append([]byte{plain}, content...)
	if b := squeeze([]byte{deflate}, content, &words); len(b) < len(best) {
		best = b
	}
	if text, n, ok := splitNumbers(content); ok {
		b := section([]byte{apart}, text, &words)
		b = section(b, n.links, &words)
		b = section(b, n.lengths, &words)
		b = section(b, n.exponents, &words)
		b = squeeze(b, n.digits, &figures)
		if len(b) < len(best) {
			best = b
		}
	}
	return best
}

var errPacked = errors.New("packed content is damaged")

func unpack(packed []byte) ([]byte, error) {
	if len(packed) == 0 {
		return nil, errPacked
	}
	rest := packed[1:]
	switch packed[0] {
	case plain:
		return bytes.Clone(rest), nil
	case deflate:
		return expand(rest)
	case apart:
		var text []byte
		var n numbers
		for _, into := range []*[]byte{&text, &n.links, &n.lengths, &n.exponents} {
			size, w := binary.Uvarint(rest)
			if w <= 0 || size > uint64(len(rest)-w) {
				return nil, errPacked
			}
			var err error
			if *into, err = expand(rest[w : w+int(size)]); err != nil {
				return nil, err
			}
			rest = rest[w+int(size):]
		}
		var err error
		if n.digits, err = expand(rest); err != nil {
			return nil, err
		}
		return joinNumbers(text, n)
	}
	return nil, fmt.Errorf("%w: form %d is not known to this version", errPacked, packed[0])
}

// words packs text; figures packs digits, in which nothing repeats but by chance.
var (
	words   = sync.Pool{New: func() any { return writer(flate.BestCompression) }}
	figures = sync.Pool{New: func() any { return writer(flate.HuffmanOnly) }}
	readers = sync.Pool{New: func() any { return flate.NewReaderDict(bytes.NewReader(nil), dictionary) }}
)

func writer(level int) *flate.Writer {
	w, err := flate.NewWriterDict(io.Discard, level, dictionary)
	if err != nil {
		panic("ledger: " + err.Error())
	}
	return w
}

// squeeze appends the deflated content to b.
func squeeze(b, content []byte, writers *sync.Pool) []byte {
	buffer := bytes.NewBuffer(b)
	w := writers.Get().(*flate.Writer)
	defer writers.Put(w)
	w.Reset(buffer)
	if _, err := w.Write(content); err != nil {
		panic("ledger: " + err.Error())
	}
	if err := w.Close(); err != nil {
		panic("ledger: " + err.Error())
	}
	return buffer.Bytes()
}

// section appends the length of the deflated content and the deflated content.
func section(b, content []byte, writers *sync.Pool) []byte {
	s := squeeze(nil, content, writers)
	return append(binary.AppendUvarint(b, uint64(len(s))), s...)
}

// expand undoes squeeze; it takes no byte more than was written.
func expand(deflated []byte) ([]byte, error) {
	r := readers.Get().(io.ReadCloser)
	defer readers.Put(r)
	source := bytes.NewReader(deflated)
	if err := r.(flate.Resetter).Reset(source, dictionary); err != nil {
		return nil, err
	}
	out := bytes.NewBuffer(make([]byte, 0, 4*len(deflated)+512))
	if _, err := out.ReadFrom(r); err != nil {
		return nil, fmt.Errorf("%w: %v", errPacked, err)
	}
	if source.Len() > 0 {
		return nil, fmt.Errorf("%w: %d bytes too many", errPacked, source.Len())
	}
	return out.Bytes(), nil
}
