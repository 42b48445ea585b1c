package main

import (
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// broken input is a sound plan and its readings with one thing changed. What is said must
// match every pattern in turn, the faults in the order of their lines; @ is the line of the
// change, @+1 the next.
type brokenInput struct {
	name     string
	old, new string   // in the file; all of the file is new where old is empty
	want     []string // patterns
}

var brokenPlans = []brokenInput{
	{"misspelt key in the second arm", `tolerance = "0.1 %"`, `tolerence = "0.1 %"`, []string{`^plan\.toml:@: arm\[2\]\.tolerence: arm "box": unknown key "tolerence"; did you mean "tolerance"\?$`}},
	{"misspelt table", "[detector]\n", "[detecter]\n", []string{`unknown key "detecter"; did you mean "detector"\?`}},
	{"key of the plan under a table", "[decision]\n", "[decision]\noperator = \"me\"\n", []string{`^plan\.toml:@+1: decision\.operator: unknown key "operator"`, `hint: keys of the plan itself stand above`}},
	{"wrong unit", `"50 Ω"`, `"50 V"`, []string{`^plan\.toml:@: generator\.source_resistance: .*"50 V".*resistance`}},
	{"no unit", `"50 Ω"`, `"50"`, []string{`^plan\.toml:@: generator\.source_resistance: "50" has no unit; a resistance is written like "10 kΩ"$`}},
	{"bare number", `"50 Ω"`, `50`, []string{`^plan\.toml:@: generator\.source_resistance: 50 is a bare number; write it in quotes with its unit: "50 Ω"$`}},
	{"NaN", `"50 Ω"`, `"NaN Ω"`, []string{`^plan\.toml:@: .*NaN`}},
	{"NaN of TOML", `"50 Ω"`, `nan`, []string{`^plan\.toml:@: .*nan.*resistance`}},
	{"infinite", `"137 Hz"`, `"Inf Hz"`, []string{`^plan\.toml:@: frequency: .*Inf`}},
	{"huge number", `"137 Hz"`, `"1e999 Hz"`, []string{`^plan\.toml:@: frequency: .*1e999`}},
	{"vanishing number", `"300 ms"`, `"1e-999 ms"`, []string{`^plan\.toml:@: detector\.filter\.time_constant: .*1e-999`}},
	{"negative resistance", `"1.00021 MΩ"`, `"-1.00021 MΩ"`, []string{`^plan\.toml:@: arm\[1\]\.value\.value: arm "top": "-1\.00021 MΩ" is negative; a resistance is 0 or more here$`}},
	{"negative frequency", `"137 Hz"`, `"-137 Hz"`, []string{`^plan\.toml:@: frequency: "-137 Hz" is not above 0`}},
	{"thousands separator", `"10 MΩ"`, `"10,000,000 Ω"`, []string{`^plan\.toml:@: detector\.input\.resistance: .*10,000,000`}},
	{"decimal comma", `"0.3 pF"`, `"0,3 pF"`, []string{`^plan\.toml:@: arm\[1\]\.capacitance: .*0,3 pF`}},
	{"milli for mega", `"10 MΩ"`, `"10 XΩ"`, []string{`^plan\.toml:@: .*XΩ`}},
	{"arm twice", `name      = "box"`, `name      = "top"`, []string{`^plan\.toml:@: arm\[2\]\.name: .*taken already`}},
	{"no shunt", `place     = "shunt"`, `place     = "series"`, []string{`none of the arms is a shunt`}},
	{"place that is none", `place     = "shunt"`, `place     = "parallel"`, []string{`^plan\.toml:@: arm\[2\]\.place: .*"series", "shunt", "tap"`}},
	{"wire in no arm", `in     = "box"`, `in     = "bax"`, []string{`^plan\.toml:@: wire\[1\]\.in: .*did you mean "box"\?`}},
	{"unknown standard", `standard  = "bench ohmmeter"`, `standard  = "bench ohmeter"`, []string{`^plan\.toml:@: error\.ohmmeter\.standard: no \[\[standard\]\] is called "bench ohmeter"; .*did you mean "bench ohmmeter"\?`}},
	{"two uncertainties", `u = "60 Ω"`, `u = "60 Ω", U = "120 Ω"`, []string{`^plan\.toml:@: arm\[1\]\.value\.U: arm "top": u and U both state the uncertainty; keep one$`}},
	{"uncertainty of another kind", `u = "60 Ω"`, `u = "60 V"`, []string{`^plan\.toml:@: arm\[1\]\.value\.u: arm "top": .*60 V`}},
	{"setting that the box has no arm for", `{ box = [`, `{ bix = [`, []string{`the block does not set "box"`, `no arm is called "bix"; .*did you mean "box"\?`}},
	{"range that is none", `range     = "auto"`, `range     = "20 mV"`, []string{`^plan\.toml:@: steps\[1\]\.range: block "A": "20 mV" is no range of the detector; .*the nearest is`}},
	{"amplitude above the generator's", `["20 V", "1 V"]`, `["40 V", "1 V"]`, []string{`^plan\.toml:@: steps\[1\]\.amplitude\[1\]: .*max_amplitude`}},
	{"amplitude of unknown convention", `shown_as      = "peak-to-peak"` + "\n", ``, []string{`add shown_as to \[generator\]`, `hint: .*Vrms, Vpk or Vpp`}},
	{"repeats of none", `repeats   = 3`, `repeats   = 0`, []string{`^plan\.toml:@: steps\[1\]\.repeats: block "A": 0, want a whole number from 1`}},
	{"too many poles", `poles = 2`, `poles = 20`, []string{`^plan\.toml:@: detector\.filter\.poles: 20, want a whole number from 1 to 8`}},
	{"list of nothing", `phase     = ["0 deg", "180 deg"]`, `phase     = []`, []string{`^plan\.toml:@: steps\[1\]\.phase: .*empty list`}},
	{"date that is none", `date        = 2026-05-18`, `date        = "18 May 2026"`, []string{`^plan\.toml:@: date: "18 May 2026" is no date; a date is written 2026-03-12$`}},
	{"day that is none", `date        = 2026-05-18`, `date        = 2026-02-30`, []string{`^plan\.toml:@`}},
	{"rule that is none", `rule = "guarded"`, `rule = "strict"`, []string{`^plan\.toml:@: decision\.rule: "strict" is not one of "guarded", "simple"`}},
	{"table of another name", "[detector]\n", "[other]\n", []string{`^plan\.toml:@: other: unknown key "other"; known here: .*detector`, `detector\.reads: missing; write for instance reads = "in-phase"`}},
	{"cut short", "\n[detector.limits]", "\nresolution = [\"1 V\",", []string{`^plan\.toml:\d+:\d+: `}},
	{"quote left open", `"137 Hz"`, `"137 Hz`, []string{`^plan\.toml:@:22: the text has no closing quote$`, `hint: the line is: frequency   = "137 Hz`}},
	{"quotes forgotten", `"137 Hz"`, `137 Hz`, []string{`^plan\.toml:@`, `hint: .*in double quotes: frequency = "137 Hz"`}},
	{"key twice", `poles = 2`, `poles = 2, poles = 4`, []string{`^plan\.toml:@: detector\.filter\.poles: the key is given twice; keep one$`}},
	{"several at once", `"50 Ω"` + "\n", "50\nshow_for = \"rms\"\nper_setting = \"1 %\"\nmax_amplitud = \"1 V\"\n", []string{`^plan\.toml:@: `, `^plan\.toml:@+1: .*"shown_for"`, `^plan\.toml:@+2: `, `^plan\.toml:@+3: .*"max_amplitude"`}},
	{"empty", "", "", []string{`^plan\.toml: the plan is empty; it needs \[generator\]`}},
	{"comments alone", "", "# later\n", []string{`^plan\.toml: the plan is empty`}},
	{"readings for a plan", "", "step,x [µV]\nA1,69880\n", []string{`^plan\.toml:1`}},
	{"result for a plan", "", "{\n  \"format\": 1\n}\n", []string{`^plan\.toml:1`}},
	{"picture", "", "\x89PNG\r\n\x1a\n\x00\x00", []string{`^plan\.toml:\d: a NUL byte: this is no text file; a plan is TOML in UTF-8`}},
	{"program", "", "\x7fELF\x02\x01\x01\x00", []string{`^plan\.toml:1: a NUL byte: this is no text file`}},
	{"UTF-16", "", "\xff\xfet\x00i\x00t\x00l\x00e\x00", []string{`^plan\.toml:1: .*UTF-8`}},
	{"older code page", `"0.3 pF"`, "\"0.3 \xb5F\"", []string{`^plan\.toml:@: a byte that is no UTF-8`}},
}

var brokenReadings = []brokenInput{
	{"unknown step", "A1,69880", "A111,69880", []string{`^bench\.csv:2:1: step: the plan has no step "A111"$`, `hint: the nearest is A11$`}},
	{"text in a number cell", "A1,69880", "A1,about 70 mV", []string{`^bench\.csv:2:4: x: .*about 70 mV`}},
	{"NaN", "A1,69880", "A1,NaN", []string{`^bench\.csv:2:4: x: .*NaN`}},
	{"huge number", "A1,69880", "A1,1e999", []string{`^bench\.csv:2:4: x: "1e999" is too large$`}},
	{"wrong unit", "A1,69880", "A1,69880 µA", []string{`^bench\.csv:2:4: x: .*µA`}},
	{"wrong unit in the header", "x [µV]", "x [Ω]", []string{`^bench\.csv:1:6: "Ω" is no unit for the column x, a voltage; the column is written like x \[V\]$`}},
	{"unknown column", "x [µV]", "x [µV],flga", []string{`^bench\.csv:1:13: no such column as "flga"$`, `hint: the nearest known one is flag$`, `^bench\.csv:2: the row has 2 cells, the header 3`}},
	{"no header", "step,x [µV]\n", "", []string{`^bench\.csv:1: the header has no column step; the first line is a header such as step,x \[µV\]$`}},
	{"reading of another kind", "x [µV]", "r [µV]", []string{`^bench\.csv:1: the detector reads "in-phase": a reading is written as x`}},
	{"range not in the list", "", "step,x [µV],range\nA1,69880,100 mV\nA2,-69880,200 mV\n", []string{`^bench\.csv:3:11: range: the detector has no range "200 mV"$`, `hint: the nearest is 100 mV$`}},
	{"setting of another plan", "", "step,x [µV],box\nA1,69880,10 kΩ\nA2,-69880,5 kΩ\n", []string{`^bench\.csv:3:11: box: .*5 kΩ.*10 kΩ`}},
	{"flag that is none", "", "step,x [µV],flag\nA1,69880,overlod\n", []string{`^bench\.csv:2:10: flag: no such flag as "overlod"; a flag is overload, unlocked or empty$`}},
	{"time that is none", "", "step,x [µV],time\nA1,69880,yesterday\n", []string{`^bench\.csv:2:10: time: "yesterday" is no time; one is written like 2026`}},
	{"decimal comma", "A1,69880", "A1,69,880", []string{`^bench\.csv:2: the row has 3 cells, the header 2`, `hint: a decimal comma is taken only where semicolons part the cells$`}},
	{"cell cut off", "A1,69880\n", "A1\n", []string{`^bench\.csv:2: the row has 1 cell, the header 2`}},
	{"quote left open", "A1,69880", "A1,\"69880", []string{`^bench\.csv:2: .*quotation marks`}},
	{"several at once", "A1,69880\nA1,69890\nA1,69890\n", "A1,x\nB1,69890\nA1,69890 V V\n", []string{`^bench\.csv:2:4: `, `^bench\.csv:3:1: `, `^bench\.csv:4:4: `}},
	{"empty", "", "", []string{`^bench\.csv: the file is empty; its first line is a header such as step,x \[µV\]$`}},
	{"header alone", "", "step,x [µV]\n", []string{`^bench\.csv: the file has a header and no readings below it$`}},
	{"nothing filled in", "", "step,x [µV]\nA1,\nA2,\n", []string{`bench\.csv: no step has a reading`}},
	{"plan for readings", "", "title = \"Arrival check\"\n[generator]\n", []string{`^bench\.csv:2: the header has no column step`}},
	{"workbook", "", "PK\x03\x04\x14\x00\x06\x00", []string{`^bench\.csv: the file is a workbook or an archive`, `hint: save it as "CSV UTF-8"`}},
	{"program", "", "\x7fELF\x02\x01\x01\x00", []string{`^bench\.csv: .*NUL`}},
	{"UTF-16", "", "\xff\xfes\x00t\x00e\x00p\x00", []string{`^bench\.csv: the file is text in UTF-16; readings are in UTF-8$`, `hint: save it as`}},
	{"older code page", "x [µV]", "x [\xb5V]", []string{`^bench\.csv:1:9: .*UTF-8`}},
}

func TestBrokenPlans(t *testing.T)    { testBroken(t, brokenPlans, "plan.toml") }
func TestBrokenReadings(t *testing.T) { testBroken(t, brokenReadings, "bench.csv") }

// testBroken: each is exit status 2, words on standard error alone, and nothing written.
func testBroken(t *testing.T, all []brokenInput, file string) {
	sound := soundInput(t)
	for _, c := range all {
		t.Run(c.name, func(t *testing.T) {
			t.Chdir(t.TempDir())
			for name, text := range sound {
				if name == file {
					if !strings.Contains(text, c.old) {
						t.Fatalf("the sound file has no %q", c.old)
					}
					text = strings.Replace(text, c.old, c.new, 1)
					if c.old == "" {
						text = c.new
					}
				}
				write(t, name, text)
			}
			status, stdout, stderr := command("", "judge", "plan.toml", "bench.csv", "--out", "report")
			if status != exitFault || stdout != "" {
				t.Errorf("exit status %d, want 2; on standard output:\n%s", status, stdout)
			}
			checkFault(t, stderr, withLines(c.want, sound[file], c.old))
			if file == "plan.toml" {
				if again, out, said := command("", "expect", "plan.toml"); again != status || out != "" || said != stderr {
					t.Errorf("expect says otherwise: %d\n%s%s", again, out, said)
				}
				if again, out, said := command("", "sheet", "plan.toml"); again != status || out != "" || said != stderr {
					t.Errorf("sheet says otherwise: %d\n%s%s", again, out, said)
				}
			}
			if left, _ := filepath.Glob("*"); len(left) != 2 {
				t.Errorf("left behind: %v", left)
			}
		})
	}
}

func withLines(want []string, text, old string) []string {
	line := 1 + strings.Count(text[:strings.Index(text, old)], "\n")
	var pairs []string
	for i := 3; i > 0; i-- {
		pairs = append(pairs, fmt.Sprint("@+", i), strconv.Itoa(line+i))
	}
	return strings.Split(strings.NewReplacer(append(pairs, "@", strconv.Itoa(line))...).Replace(strings.Join(want, "\n")), "\n")
}

// checkFault looks for the patterns line by line, each below the one before.
func checkFault(t *testing.T, stderr string, want []string) {
	t.Helper()
	t.Log("\n" + stderr)
	lines := strings.Split(strings.TrimSuffix(stderr, "\n"), "\n")
	for _, line := range lines {
		if strings.Contains(line, "goroutine ") || strings.ContainsAny(line, "\x00\x1b") || strings.Contains(line, "%!") {
			t.Errorf("not for people: %q", line)
		}
	}
	rest := lines
	for _, pattern := range want {
		re := regexp.MustCompile(pattern)
		for len(rest) > 0 && !re.MatchString(rest[0]) {
			rest = rest[1:]
		}
		if len(rest) == 0 {
			t.Errorf("no line with %s in\n%s", pattern, stderr)
			return
		}
		rest = rest[1:]
	}
}

// soundInput is the arrival example.
func soundInput(t *testing.T) map[string]string {
	t.Helper()
	files := map[string]string{}
	for name, from := range map[string]string{"plan.toml": "plan.toml", "bench.csv": "readings.csv"} {
		b, err := os.ReadFile(filepath.Join("../../examples/arrival", from))
		if err != nil {
			t.Fatal(err)
		}
		files[name] = string(b)
	}
	return files
}

// Files that are not there, folders, and one given for the other.
func TestBrokenFiles(t *testing.T) {
	sound := soundInput(t)
	t.Chdir(t.TempDir())
	for name, text := range sound {
		write(t, name, text)
	}
	if err := os.Mkdir("folder", 0o755); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		args []string
		want string
	}{
		{[]string{"nowhere.toml", "bench.csv"}, `^rungproof: nowhere\.toml: no such file or directory$`},
		{[]string{"plan.toml", "nowhere.csv"}, `^rungproof: nowhere\.csv: no such file or directory$`},
		{[]string{"folder", "bench.csv"}, `^rungproof: folder: is a directory$`},
		{[]string{"plan.toml", "folder"}, `^rungproof: folder: is a directory$`},
		{[]string{"bench.csv", "plan.toml"}, `^bench\.csv:1`},
		{[]string{"plan.toml", "plan.toml"}, `^plan\.toml:\d+: the header has no column step`},
		{[]string{"", "bench.csv"}, `^rungproof: the name of a file is empty$`},
		{[]string{"plan.toml", "bench.csv", "--out="}, `^rungproof: --out names no folder$`},
	} {
		status, stdout, stderr := command("", append([]string{"judge", "--out", "report"}, c.args...)...)
		if status != exitFault || stdout != "" {
			t.Errorf("%v: exit status %d, want 2; on standard output:\n%s", c.args, status, stdout)
		}
		checkFault(t, stderr, []string{c.want})
		if left, _ := filepath.Glob("*"); len(left) != 3 {
			t.Errorf("left behind: %v", left)
		}
	}
}
