package plan

import (
	"bytes"
	"errors"
	"strings"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2"

	"rungproof/calib/fault"
)

// Parse reads a plan. The error is a [fault.List] with everything that is wrong, in the order of the lines.
func Parse(file string, source []byte) (*Plan, error) {
	root, wrong := readTOML(source)
	if wrong != nil {
		wrong.File = file
		return nil, fault.List{*wrong}
	}
	d := &decoder{file: file, plan: &Plan{File: file, Source: source}}
	top := d.table(root)
	d.standards(top)
	d.sharedErrors(top)
	d.head(top)
	d.generator(top)
	d.detector(top)
	d.arms(top)
	d.wires(top)
	d.blocks(top)
	d.fit(top)
	d.decision(top)
	d.freedoms(top)
	top.done()
	if len(d.faults) == 0 {
		d.chooseRanges()
	}
	if err := d.faults.Err(); err != nil {
		return nil, err
	}
	return d.plan, nil
}

// readTOML is the tree of a file, or the one fault that keeps it from being read.
func readTOML(source []byte) (*node, *fault.Fault) {
	lineOf := func(offset int) int { return 1 + bytes.Count(source[:offset], []byte("\n")) }
	if i := bytes.IndexByte(source, 0); i >= 0 {
		return nil, &fault.Fault{Line: lineOf(i), What: "a NUL byte: this is no text file; a plan is TOML in UTF-8"}
	}
	if i := firstInvalid(source); i >= 0 {
		return nil, &fault.Fault{Line: lineOf(i), What: "a byte that is no UTF-8: a plan is TOML in UTF-8; save it with that encoding"}
	}
	source = bytes.TrimPrefix(source, []byte("\ufeff"))
	tree := buildTree(source)
	var sound map[string]any
	if err := toml.Unmarshal(source, &sound); err != nil {
		return nil, syntaxFault(source, err, tree.repeated)
	}
	if len(tree.root.keys) == 0 {
		return nil, &fault.Fault{What: "the plan is empty; it needs [generator], [detector], [[arm]] and [[steps]]"}
	}
	return tree.root, nil
}

func firstInvalid(source []byte) int {
	for i := 0; i < len(source); {
		r, size := utf8.DecodeRune(source[i:])
		if r == utf8.RuneError && size == 1 {
			return i
		}
		i += size
	}
	return -1
}

// syntaxFault puts what the TOML decoder says into a fault, with the line as it stands in the file.
func syntaxFault(source []byte, err error, repeated *node) *fault.Fault {
	f := &fault.Fault{What: strings.TrimPrefix(err.Error(), "toml: ")}
	var at *toml.DecodeError
	if !errors.As(err, &at) {
		return f
	}
	f.Line, f.Column = at.Position()
	if repeated != nil && strings.Contains(f.What, "already defined") {
		// the decoder places a key repeated in an inline table at the table
		return &fault.Fault{Line: repeated.line, Where: repeated.where(), What: "the key is given twice; keep one"}
	}
	lines := strings.Split(string(source), "\n")
	if f.Line > 0 && f.Line <= len(lines) {
		if line := strings.TrimSpace(lines[f.Line-1]); line != "" {
			f.Hints = append(f.Hints, "the line is: "+line)
		}
	}
	if strings.Contains(f.What, "basic strings cannot have new lines") {
		f.What = "the text has no closing quote"
	}
	if strings.Contains(f.What, "expected newline") || strings.Contains(f.What, "at start of value") || strings.Contains(f.What, "expected ',' or") {
		f.Hints = append(f.Hints, `a text or a quantity stands in double quotes: frequency = "137 Hz"`)
	}
	return f
}
