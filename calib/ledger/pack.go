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

// pack gives content in its short form. unpack gives it back to the byte.
func pack(content []byte) []byte {
	packed := []byte{deflate}
	if text, table, digits, ok := splitNumbers(content); ok {
		packed = section([]byte{apart}, text)
		packed = section(packed, table)
		packed = append(packed, packDigits(digits)...)
	} else {
		packed = squeeze(packed, content)
	}
	if len(packed) > len(content) {
		return append([]byte{plain}, content...)
	}
	return packed
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
		var parts [2][]byte // text and table
		for i := range parts {
			size, w := binary.Uvarint(rest)
			if w <= 0 || size > uint64(len(rest)-w) {
				return nil, errPacked
			}
			var err error
			if parts[i], err = expand(rest[w : w+int(size)]); err != nil {
				return nil, err
			}
			rest = rest[w+int(size):]
		}
		return joinNumbers(parts[0], parts[1], rest)
	}
	return nil, fmt.Errorf("%w: form %d is not known to this version", errPacked, packed[0])
}

var (
	writers = sync.Pool{New: func() any {
		w, err := flate.NewWriterDict(io.Discard, flate.BestCompression, dictionary)
		if err != nil {
			panic("ledger: " + err.Error())
		}
		return w
	}}
	readers = sync.Pool{New: func() any { return flate.NewReaderDict(bytes.NewReader(nil), dictionary) }}
)

// squeeze appends the deflated content to b.
func squeeze(b, content []byte) []byte {
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
func section(b, content []byte) []byte {
	s := squeeze(nil, content)
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
