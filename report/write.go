package report

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"slices"

	"rungproof/calib"
)

// JSON is the content of result.json.
func JSON(e *calib.Evaluation) ([]byte, error) { return indented(e.Result) }

// indented is JSON for people and programs, with a newline at its end.
func indented(v any) ([]byte, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(v); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

// Write makes a report in a folder: result.json, report.html, report.txt and the
// figures. Everything is made in memory first, then written beside its place and
// renamed, so that a file appears whole or not at all.
func Write(dir string, e *calib.Evaluation) error {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return fmt.Errorf("the report cannot be written: %w", err)
	}
	figures, err := Figures(e)
	if err != nil {
		return err
	}
	result, err := JSON(e)
	if err != nil {
		return err
	}
	var page bytes.Buffer
	if err := HTML(&page, e, figures); err != nil {
		return err
	}
	files := []file{{"result.json", result}, {"report.html", page.Bytes()}, {"report.txt", []byte(Text(e, false))}}
	for _, f := range figures {
		files = append(files, file{f.Name, f.PNG})
	}
	if err := writeAll(dir, files); err != nil {
		return err
	}
	// A figure of an earlier report that this one does not make would mislead.
	for _, name := range reportFigures {
		if !slices.ContainsFunc(files, func(f file) bool { return f.name == name }) {
			os.Remove(filepath.Join(dir, name))
		}
	}
	return nil
}

// WriteFile writes one file, whole or not at all.
func WriteFile(name string, content []byte) error {
	return writeAll(filepath.Dir(name), []file{{filepath.Base(name), content}})
}

type file struct {
	name    string
	content []byte
}

// writeAll writes every file under a temporary name first and renames them when all are on the disk.
func writeAll(dir string, files []file) (err error) {
	for _, f := range files {
		if info, err := os.Lstat(filepath.Join(dir, f.name)); err == nil && info.IsDir() {
			return fmt.Errorf("%s cannot be written: a folder of that name is in the way", filepath.Join(dir, f.name))
		}
	}
	temporary := make([]string, 0, len(files))
	defer func() {
		for _, t := range temporary {
			os.Remove(t)
		}
	}()
	for _, f := range files {
		t, err := os.CreateTemp(dir, ".rungproof-*")
		if err != nil {
			return fmt.Errorf("the report cannot be written: %w", err)
		}
		temporary = append(temporary, t.Name())
		_, err = t.Write(f.content)
		if err == nil {
			err = t.Chmod(0o644)
		}
		if closed := t.Close(); err == nil {
			err = closed
		}
		if err != nil {
			return fmt.Errorf("%s cannot be written: %w", filepath.Join(dir, f.name), err)
		}
	}
	for i, f := range files {
		if err := os.Rename(temporary[i], filepath.Join(dir, f.name)); err != nil {
			return fmt.Errorf("%s cannot be written: %w", filepath.Join(dir, f.name), err)
		}
	}
	return nil
}

// reportFigures are the figures that a report can have.
var reportFigures = []string{"readings.png", "errors.png", "unexplained.png", "joint.png", "evidence.png", "residuals.png", "frequency.png", "budget.png"}
