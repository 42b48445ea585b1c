package plan

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"rungproof/calib/fault"
)

// brokenPlan is a case of testdata/faults.
type brokenPlan struct {
	name, old, new string
	deletes        bool // the lines go and nothing comes
	faults         []string
}

func readBroken(t testing.TB, file string) (cases []brokenPlan) {
	source, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	for _, part := range strings.Split(string(source), "\n== ")[1:] {
		c := brokenPlan{deletes: true}
		name, lines, _ := strings.Cut(part, "\n")
		c.name = name
		var old, new []string
		for _, line := range strings.Split(strings.TrimRight(lines, "\n"), "\n") {
			mark, text, _ := strings.Cut(line, " ")
			switch mark {
			case "-":
				old = append(old, text)
			case "+":
				new = append(new, text)
				c.deletes = false
			case "!":
				c.faults = append(c.faults, text)
			default:
				t.Fatalf("%s: %s: line %q has no mark", file, name, line)
			}
		}
		c.old, c.new = strings.Join(old, "\n"), strings.Join(new, "\n")
		if c.deletes {
			c.old += "\n"
		}
		cases = append(cases, c)
	}
	return cases
}

func (c brokenPlan) source(t testing.TB) string {
	if !strings.Contains(sound, c.old) {
		t.Fatalf("%s: the sound plan has no %q", c.name, c.old)
	}
	return strings.Replace(sound, c.old, c.new, 1)
}

func TestBrokenPlans(t *testing.T) {
	files, err := filepath.Glob("testdata/faults/*.txt")
	if err != nil || len(files) != 5 {
		t.Fatal(files, err)
	}
	for _, file := range files {
		for _, c := range readBroken(t, file) {
			t.Run(c.name, func(t *testing.T) {
				_, err := Parse("plan.toml", []byte(c.source(t)))
				list, ok := err.(fault.List)
				if !ok {
					t.Fatalf("%v, want a fault.List", err)
				}
				got := strings.Split(strings.ReplaceAll(list.Error(), "plan.toml: ", "plan.toml:"), "\n")
				for i, line := range got {
					got[i] = strings.TrimPrefix(line, "plan.toml:")
					if i < len(c.faults) {
						start, open := strings.CutSuffix(c.faults[i], "…")
						if open && strings.HasPrefix(got[i], start) {
							got[i] = c.faults[i]
						}
					}
				}
				if diff := cmp.Diff(c.faults, got); diff != "" {
					t.Errorf("(-want +got)\n%s", diff)
				}
			})
		}
	}
}

// Everything wrong is reported at once, in the order of the lines, each at its own.
func TestAllFaultsAtOnce(t *testing.T) {
	source := strings.NewReplacer(`"0 Ω"`, `50`, `poles = 2`, `poles = 9`, `"top"`, `""`, `"10 V"`, `[]`, `value = `, `valeu = `).Replace(sound)
	_, err := Parse("plan.toml", []byte(source))
	list, _ := err.(fault.List)
	var lines []int
	for _, f := range list {
		lines = append(lines, f.Line)
		if f.File != "plan.toml" || f.What == "" {
			t.Errorf("%+v: file or words are missing", f)
		}
	}
	check(t, "lines", lines, []int{4, 9, 11, 13, 17, 19}) // 17: the block does not set the arm that lost its value
}

func TestFilesThatAreNoPlan(t *testing.T) {
	for source, want := range map[string]string{
		"":                          "x.toml: the plan is empty; it needs [generator], [detector], [[arm]] and [[steps]]",
		"# later\n\n":               "x.toml: the plan is empty; it needs [generator], [detector], [[arm]] and [[steps]]",
		"title = \"a\"\nb\x00c = 1": "x.toml:2: a NUL byte: this is no text file; a plan is TOML in UTF-8",
		"title = \"a\"\n\n\"\xe9\"": "x.toml:3: a byte that is no UTF-8: a plan is TOML in UTF-8; save it with that encoding",
		"\xff\xfet\x00":             "x.toml:1: a NUL byte: this is no text file; a plan is TOML in UTF-8",
		"\x89PNG\r\n":               "x.toml:1: a byte that is no UTF-8: a plan is TOML in UTF-8; save it with that encoding",
	} {
		_, err := Parse("x.toml", []byte(source))
		if err == nil || err.Error() != want {
			t.Errorf("%q: %v, want %s", source, err, want)
		}
	}
}

// Whatever stands in a file, it is a plan or a list of faults.
func FuzzParse(f *testing.F) {
	f.Add([]byte(sound))
	plans, _ := filepath.Glob("testdata/plans/*.toml")
	for _, name := range plans {
		source, err := os.ReadFile(name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(source)
	}
	broken, _ := filepath.Glob("testdata/faults/*.txt")
	for _, name := range broken {
		for _, c := range readBroken(f, name) {
			f.Add([]byte(c.source(f)))
		}
	}
	f.Fuzz(func(t *testing.T, source []byte) {
		p, err := Parse("plan.toml", source)
		if list, ok := err.(fault.List); err != nil && (!ok || len(list) == 0) {
			t.Errorf("%v, want a fault.List", err)
		}
		if err == nil && len(p.Steps) == 0 {
			t.Error("a plan without steps")
		}
	})
}
