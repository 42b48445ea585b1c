package reading

import (
	"bytes"
	"strings"
	"unicode/utf8"

	"rungproof/calib/fault"
)

// clean is the source without a byte-order mark and with lines that end in a
// newline, or what keeps it from being read as text.
func clean(source []byte) ([]byte, *fault.Fault) {
	text := bytes.TrimPrefix(source, []byte("\ufeff"))
	hint := []string{`save it as "CSV UTF-8" or as plain text in UTF-8`}
	switch {
	case bytes.HasPrefix(text, []byte("PK\x03\x04")):
		return nil, &fault.Fault{What: "the file is a workbook or an archive; readings are a text file, CSV", Hints: hint}
	case bytes.HasPrefix(text, []byte{0xff, 0xfe}), bytes.HasPrefix(text, []byte{0xfe, 0xff}):
		return nil, &fault.Fault{What: "the file is text in UTF-16; readings are in UTF-8", Hints: hint}
	case bytes.IndexByte(text, 0) >= 0:
		return nil, &fault.Fault{What: "the file holds NUL bytes, as binary files and UTF-16 do; readings are text in UTF-8", Hints: hint}
	case !utf8.Valid(text):
		line, column := firstInvalid(text)
		return nil, &fault.Fault{Line: line, Column: column, What: "the file is not text in UTF-8; a µ or an Ω may be in an older code page", Hints: hint}
	}
	if bytes.IndexByte(text, '\n') < 0 { // lines that end in a bare carriage return
		text = bytes.ReplaceAll(text, []byte("\r"), []byte("\n"))
	}
	return text, nil
}

func firstInvalid(text []byte) (line, column int) {
	line, column = 1, 1
	for len(text) > 0 {
		r, n := utf8.DecodeRune(text)
		if r == utf8.RuneError && n == 1 {
			break
		}
		column++
		if r == '\n' {
			line, column = line+1, 1
		}
		text = text[n:]
	}
	return line, column
}

// separator is what parts the cells of the header: the tab if it has one, else
// the semicolon, else the comma. What stands in quotation marks does not count.
func separator(text []byte) rune {
	for line := range bytes.Lines(text) {
		s := strings.TrimSpace(string(line))
		if s == "" || s[0] == '#' || strings.HasPrefix(s, `"#`) {
			continue
		}
		found, quoted := ',', false
		for _, r := range s {
			switch {
			case r == '"':
				quoted = !quoted
			case quoted:
			case r == '\t', r == ';' && found == ',':
				found = r
			}
		}
		return found
	}
	return ','
}
