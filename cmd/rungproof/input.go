package main

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"strings"

	"rungproof/calib/fault"
	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

// source reads a whole file, or standard input where the name is "-". The name
// that messages use comes back with it.
func (s *streams) source(name string) (string, []byte, error) {
	if name == "-" {
		b, err := io.ReadAll(s.in)
		return "standard input", b, err
	}
	if name == "" {
		return name, nil, hinted{"the name of a file is empty", "is a variable of the shell not set?"}
	}
	b, err := os.ReadFile(name)
	if err != nil {
		err = fileError(name, err)
	}
	return name, b, err
}

// fileError names the file first and once.
func fileError(name string, err error) error {
	var path *fs.PathError
	if errors.As(err, &path) {
		err = path.Err
	}
	return fmt.Errorf("%s: %w", name, err)
}

var bothFromInput = hinted{"standard input can be the plan or the readings, not both", "name a file for one of them"}

func (s *streams) plan(name string) (*plan.Plan, error) {
	called, b, err := s.source(name)
	if err != nil {
		return nil, err
	}
	if looksLikeReadings(b) {
		return nil, fault.List{{File: called, Line: 1, What: "these look like readings, where the PLAN is due",
			Hints: []string{"the plan comes first: rungproof judge plan.toml bench.csv"}}}
	}
	return plan.Parse(called, b)
}

// looksLikeReadings tells whether a file begins with the header of readings.
func looksLikeReadings(b []byte) bool {
	first, _, _ := bytes.Cut(bytes.TrimPrefix(b, []byte("\ufeff")), []byte("\n"))
	line := strings.ToLower(string(first))
	return strings.HasPrefix(line, "step,") || strings.HasPrefix(line, "step;") || strings.HasPrefix(line, "step\t")
}

func (s *streams) readings(name string, p *plan.Plan) (*reading.Set, error) {
	called, b, err := s.source(name)
	if err != nil {
		return nil, err
	}
	return reading.Parse(called, b, p)
}
