package correct

import (
	"bytes"
	"fmt"
	"io"
	"unicode/utf8"

	"rungproof/calib/fault"
)

const (
	chunk   = 64 << 10 // bytes that are read at once
	longest = 1 << 20  // bytes that one row may have
)

const asText = `save it as "CSV UTF-8" or as plain text in UTF-8`

// scanner parts a file into its rows and those into cells, and alters nothing. A row
// may go over several lines, within quotation marks. What encoding/csv would
// call bare quotes is taken as it stands.
type scanner struct {
	in       io.Reader
	file     string // for messages
	progress func(int64)
	read     int64 // bytes so far

	buffer     []byte
	start, end int // of what is not yet used in it
	eof        bool
	newline    byte // what ends a line
	separator  byte // of cells; 0 until the header has told

	// The row at hand.
	text    []byte // without the end of its line
	ending  []byte // "\n", "\r\n", "\r" or, at the end of the file, ""
	isRow   bool   // neither blank nor a comment
	cells   []span
	line, n int // its first line, from 1, and how many lines it has
}

// span is a cell's place in the text of its row.
type span struct{ from, to int }

// cell is one of the row at hand, as written.
func (s *scanner) cell(i int) []byte { return s.text[s.cells[i].from:s.cells[i].to] }

// begin reads the first lines and gives back the byte-order mark, where there is one.
func (s *scanner) begin() (mark []byte, err error) {
	s.buffer, s.line, s.newline = make([]byte, chunk), 1, '\n'
	for !s.eof && s.end < chunk && bytes.IndexByte(s.buffer[:s.end], '\n') < 0 {
		if err := s.fill(); err != nil {
			return nil, err
		}
	}
	head := s.buffer[:s.end]
	if bytes.IndexByte(head, '\n') < 0 && bytes.IndexByte(head, '\r') >= 0 {
		s.newline = '\r'
	}
	what := ""
	switch {
	case bytes.HasPrefix(head, []byte("PK\x03\x04")):
		what = "the file is a workbook or an archive; readings are a text file, CSV"
	case bytes.HasPrefix(head, []byte{0xff, 0xfe}), bytes.HasPrefix(head, []byte{0xfe, 0xff}):
		what = "the file is text in UTF-16; readings are in UTF-8"
	}
	if what != "" {
		return nil, fault.List{{File: s.file, What: what, Hints: []string{asText}}}
	}
	if bytes.HasPrefix(head, []byte("\ufeff")) {
		s.start = 3
	}
	return head[:s.start], nil
}

// next goes to the next row, blank line or comment, if need be by reading on: the
// buffer is then another. There is none at the end of the file.
func (s *scanner) next() (bool, error) {
	s.line += s.n
	for {
		if data := s.buffer[s.start:s.end]; len(data) > 0 {
			if length := s.row(data); length > 0 {
				s.start += length
				return true, nil
			}
			if s.eof {
				return false, fault.List{{File: s.file, Line: s.line, What: "a cell in quotation marks begins in this row and does not end"}}
			}
		} else if s.eof {
			s.n = 0
			return false, nil
		}
		// A row that goes on is not gone through again before its line can have ended.
		for ended := false; !ended; {
			from := s.end - s.start
			if err := s.fill(); err != nil {
				return false, err
			}
			ended = s.eof || bytes.IndexByte(s.buffer[from:s.end], s.newline) >= 0
		}
	}
}

// fill reads on, once.
func (s *scanner) fill() error {
	s.end = copy(s.buffer, s.buffer[s.start:s.end])
	s.start = 0
	if s.end == len(s.buffer) {
		if s.end >= longest {
			return fault.List{{File: s.file, Line: s.line, What: fmt.Sprintf(
				"a row begins here and is longer than %d bytes; a quotation mark may not be closed", longest)}}
		}
		s.buffer = append(s.buffer, make([]byte, len(s.buffer))...)
	}
	for range 100 {
		n, err := s.in.Read(s.buffer[s.end:])
		s.end += n
		s.read += int64(n)
		if s.eof = err == io.EOF; err != nil && !s.eof {
			return err
		}
		if n > 0 || s.eof {
			if s.progress != nil {
				s.progress(s.read)
			}
			return nil
		}
	}
	return io.ErrNoProgress
}

// row takes the first row of data apart, and gives back its length with the end of
// its line: 0 where there is not yet all of it.
func (s *scanner) row(data []byte) int {
	i := 0
	for i < len(data) && (data[i] == ' ' || data[i] == '\t' && s.separator != '\t' || data[i] == '\r' && s.newline == '\n') {
		i++
	}
	if i == len(data) && !s.eof {
		return 0
	}
	if i == len(data) || data[i] == s.newline || data[i] == '#' {
		s.isRow = false
		return s.upTo(data, i+s.toLineEnd(data[i:]))
	}
	if s.separator == 0 {
		end := s.toLineEnd(data)
		if end == len(data) && !s.eof {
			return 0
		}
		s.separator = separator(data[:end])
	}
	s.isRow, s.cells = true, s.cells[:0]
	for i = 0; ; i++ { // a cell begins at i
		from := i
		for i < len(data) && (data[i] == ' ' || data[i] == '\t' && s.separator != '\t') {
			i++
		}
		if i < len(data) && data[i] == '"' {
			if i = closing(data, i); i < 0 {
				return 0
			}
		}
		for i < len(data) && data[i] != s.separator && data[i] != s.newline {
			i++
		}
		s.cells = append(s.cells, span{from, i})
		if i == len(data) || data[i] == s.newline {
			return s.upTo(data, i)
		}
	}
}

// upTo ends the row before data[end].
func (s *scanner) upTo(data []byte, end int) int {
	length := end
	if end < len(data) {
		length++
	} else if !s.eof {
		return 0
	}
	if s.newline == '\n' && end > 0 && data[end-1] == '\r' {
		end--
	}
	s.text, s.ending, s.n = data[:end], data[end:length], 1
	if s.isRow {
		if last := &s.cells[len(s.cells)-1]; last.to > end {
			last.to = end
		}
		// A spreadsheet puts a comment in quotes, and separators behind it.
		if first := trim(s.cell(0)); len(first) > 0 && first[0] == '"' {
			s.isRow = !bytes.HasPrefix(bytes.TrimLeft(first, `" `), []byte("#"))
		}
		if bytes.IndexByte(s.text, s.newline) >= 0 {
			s.n += bytes.Count(s.text, []byte{s.newline})
		}
	}
	return length
}

func (s *scanner) toLineEnd(data []byte) int {
	if end := bytes.IndexByte(data, s.newline); end >= 0 {
		return end
	}
	return len(data)
}

// closing is the place behind the quotation mark that closes the one at open; -1
// where there is none.
func closing(data []byte, open int) int {
	for i := open + 1; ; i += 2 { // a mark written twice is one within the cell
		k := bytes.IndexByte(data[i:], '"')
		if k < 0 {
			return -1
		}
		if i += k; i+1 == len(data) || data[i+1] != '"' {
			return i + 1
		}
	}
}

// separator is what parts the cells of the header: the tab if it has one, else
// the semicolon, else the comma. What stands in quotation marks does not count.
func separator(header []byte) byte {
	found, quoted := byte(','), false
	for _, c := range header {
		switch {
		case c == '"':
			quoted = !quoted
		case quoted:
		case c == '\t', c == ';' && found == ',':
			found = c
		}
	}
	return found
}

// position is the line and the column, in characters, of a cell of the row at
// hand; of the row for a cell of -1.
func (s *scanner) position(cell int) (line, column int) {
	if cell < 0 {
		return s.line, 0
	}
	before := s.text[:s.cells[cell].from]
	last := bytes.LastIndexByte(before, s.newline)
	return s.line + bytes.Count(before, []byte{s.newline}), utf8.RuneCount(before[last+1:]) + 1
}

// trim takes spaces and tabs off the ends.
func trim(b []byte) []byte {
	for len(b) > 0 && (b[0] == ' ' || b[0] == '\t') {
		b = b[1:]
	}
	for len(b) > 0 && (b[len(b)-1] == ' ' || b[len(b)-1] == '\t') {
		b = b[:len(b)-1]
	}
	return b
}
