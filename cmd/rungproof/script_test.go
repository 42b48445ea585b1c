package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"rungproof": main})
}

// Each script has the worked examples in $WORK/examples and the cases with published
// readings in $WORK/cases.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir:                 "testdata/script",
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Setup: func(e *testscript.Env) error {
			for name, from := range map[string]string{"examples": "../../examples", "cases": "../../calib/testdata/cases"} {
				if err := os.CopyFS(e.Getenv("WORK")+"/"+name, os.DirFS(from)); err != nil {
					return err
				}
			}
			return nil
		},
		Condition: func(name string) (bool, error) { return name == "root" && os.Getuid() == 0, nil },
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"status": status, "fill": fill, "edit": edit, "narrow": narrow, "json": isJSON, "folder": folder, "same": same,
		},
	})
}

// status N command… runs a command that must exit with N.
func status(ts *testscript.TestScript, _ bool, args []string) {
	want := args[0]
	err := ts.Exec(args[1], args[2:]...)
	got := "0"
	if err != nil {
		got = strings.TrimPrefix(err.Error(), "exit status ")
	}
	if got != want {
		ts.Fatalf("exit status %s, want %s", got, want)
	}
}

// fill SHEET FILE factor fills in a bench sheet: the first reading column gets the expected
// reading times the factor, a second one (the quadrature) 0.
func fill(ts *testscript.TestScript, _ bool, args []string) {
	rows, err := csv.NewReader(strings.NewReader(ts.ReadFile(args[0]))).ReadAll()
	ts.Check(err)
	factor, err := strconv.ParseFloat(args[2], 64)
	ts.Check(err)
	expected := slices.IndexFunc(rows[0], func(cell string) bool { return strings.HasPrefix(cell, "expected") })
	for _, row := range rows[1:] {
		x, err := strconv.ParseFloat(row[expected], 64)
		ts.Check(err)
		for i := 1; i < expected; i++ {
			if row[i] != "" {
				ts.Fatalf("the sheet has %q in the reading column %s", row[i], rows[0][i])
			}
			row[i] = "0"
		}
		row[1] = strconv.FormatFloat(factor*x, 'g', -1, 64)
	}
	var b bytes.Buffer
	ts.Check(csv.NewWriter(&b).WriteAll(rows))
	ts.Check(os.WriteFile(ts.MkAbs(args[1]), b.Bytes(), 0o644))
}

// edit FILE OLD NEW… changes a file, each OLD being there; \n stands for a new line.
func edit(ts *testscript.TestScript, _ bool, args []string) {
	text := ts.ReadFile(args[0])
	for pair := range slices.Chunk(args[1:], 2) {
		old, new := strings.ReplaceAll(pair[0], `\n`, "\n"), strings.ReplaceAll(pair[1], `\n`, "\n")
		if !strings.Contains(text, old) {
			ts.Fatalf("%s has no %q", args[0], old)
		}
		text = strings.Replace(text, old, new, 1)
	}
	ts.Check(os.WriteFile(ts.MkAbs(args[0]), []byte(text), 0o644))
}

// narrow FILE LINES: at most so many lines of 80 columns, without codes for a terminal.
func narrow(ts *testscript.TestScript, _ bool, args []string) {
	most, err := strconv.Atoi(args[1])
	ts.Check(err)
	if fault := terminalFault(ts.ReadFile(args[0]), most); fault != "" {
		ts.Fatalf("%s: %s", args[0], fault)
	}
}

// terminalFault says what is wrong with text for a terminal of 80 columns; "" where nothing is.
func terminalFault(text string, lines int) string {
	all := strings.Split(strings.TrimSuffix(text, "\n"), "\n")
	if len(all) > lines {
		return strconv.Itoa(len(all)) + " lines"
	}
	for _, line := range all {
		switch {
		case utf8.RuneCountInString(line) > 80:
			return "over 80 columns: " + line
		case strings.ContainsFunc(line, func(r rune) bool { return r < ' ' || r == 0x7f }):
			return "a control character: " + strconv.Quote(line)
		case strings.TrimRight(line, " ") != line:
			return "space at the end: " + strconv.Quote(line)
		}
	}
	return ""
}

// json FILE KEY=LENGTH…: JSON in which KEY, a path with dots, is a list of so many.
func isJSON(ts *testscript.TestScript, _ bool, args []string) {
	var all any
	ts.Check(json.Unmarshal([]byte(ts.ReadFile(args[0])), &all))
	for _, arg := range args[1:] {
		path, want, _ := strings.Cut(arg, "=")
		at := all
		for _, key := range strings.Split(path, ".") {
			table, _ := at.(map[string]any)
			at = table[key]
		}
		if list, ok := at.([]any); !ok || strconv.Itoa(len(list)) != want {
			ts.Fatalf("%s: %s is %v, want a list of %s", args[0], path, at, want)
		}
	}
}

// folder DIR NAME…: DIR holds these files, none of them empty, and nothing else but figures.
func folder(ts *testscript.TestScript, _ bool, args []string) {
	entries, err := os.ReadDir(ts.MkAbs(args[0]))
	ts.Check(err)
	var names []string
	for _, e := range entries {
		info, err := e.Info()
		ts.Check(err)
		if info.Size() == 0 || !info.Mode().IsRegular() || info.Mode().Perm() != 0o644 {
			ts.Fatalf("%s: %d bytes, %v", e.Name(), info.Size(), info.Mode())
		}
		if filepath.Ext(e.Name()) != ".png" {
			names = append(names, e.Name())
		}
	}
	if want := slices.Sorted(slices.Values(args[1:])); !slices.Equal(names, want) {
		ts.Fatalf("%s holds %v beside figures, want %v", args[0], names, want)
	}
}

// same DIR DIR: the same files with the same bytes.
func same(ts *testscript.TestScript, _ bool, args []string) {
	content := func(dir string) map[string]string {
		files, err := filepath.Glob(filepath.Join(ts.MkAbs(dir), "*"))
		ts.Check(err)
		all := map[string]string{}
		for _, f := range files {
			all[filepath.Base(f)] = ts.ReadFile(f)
		}
		return all
	}
	a, b := content(args[0]), content(args[1])
	for name := range a {
		if a[name] != b[name] {
			ts.Fatalf("%s differs", name)
		}
	}
	if len(a) != len(b) || len(a) == 0 {
		ts.Fatalf("%d files and %d", len(a), len(b))
	}
}
