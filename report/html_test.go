package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"os"
	"regexp"
	"strings"
	"testing"

	"rungproof/calib"
	"rungproof/calib/diagnose"
	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

func htmlOf(t testing.TB, e *calib.Evaluation, figures []Figure) string {
	t.Helper()
	e.Result.Findings = diagnose.Findings(e)
	e.Result.Software = "rungproof of a test"
	var b bytes.Buffer
	if err := HTML(&b, e, figures); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

var htmlCases = []string{"arrival", "one-amplitude", "quadrature", "string"}

func htmlEvaluate(t testing.TB, planText, rows string) *calib.Evaluation {
	t.Helper()
	p, err := plan.Parse("plan.toml", []byte(planText))
	if err != nil {
		t.Fatal(err)
	}
	set, err := reading.Parse("readings.csv", []byte(rows), p)
	if err != nil {
		t.Fatal(err)
	}
	e, err := calib.Evaluate(p, set)
	if err != nil {
		t.Fatal(err)
	}
	return e
}

func htmlCase(t testing.TB, name string) *calib.Evaluation {
	t.Helper()
	return htmlEvaluate(t, htmlRead(t, name+".toml"), htmlRead(t, name+".csv"))
}

var htmlPages = map[string]string{} // with their figures, which take a while to draw

// htmlPage is the page of one of the cases of package calib.
func htmlPage(t testing.TB, name string) string {
	t.Helper()
	if htmlPages[name] == "" {
		e := htmlCase(t, name)
		figures, err := Figures(e)
		if err != nil {
			t.Fatal(err)
		}
		htmlPages[name] = htmlOf(t, e, figures)
	}
	return htmlPages[name]
}

// perfectRows are readings that show a detector without fault.
func perfectRows(t testing.TB, planText string) string {
	t.Helper()
	p, err := plan.Parse("perfect.toml", []byte(planText))
	if err != nil {
		t.Fatal(err)
	}
	x, err := calib.Expect(p)
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	rows := csv.NewWriter(&b)
	rows.Write([]string{"step", "x [Vrms]"})
	for _, s := range x.Steps {
		rows.Write([]string{s.ID, fmt.Sprintf("%.12g", s.Expected)})
	}
	rows.Flush()
	return b.String()
}

func htmlRead(t testing.TB, name string) string {
	t.Helper()
	b, err := os.ReadFile("../calib/testdata/cases/" + name)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

// replaced puts pairs of texts in place of others, each of which must be there.
func replaced(t testing.TB, s string, pairs ...string) string {
	t.Helper()
	for i := 0; i < len(pairs); i += 2 {
		if !strings.Contains(s, pairs[i]) {
			t.Fatalf("%q is not there to be replaced", pairs[i])
		}
		s = strings.ReplaceAll(s, pairs[i], pairs[i+1])
	}
	return s
}

func TestHTMLHasEverySectionInOrder(t *testing.T) {
	for _, name := range htmlCases {
		page, e := htmlPage(t, name), htmlCase(t, name)
		at := 0
		for _, id := range []string{"identity", "summary", "findings", "figures", "gains", "steps", "decisions", "inputs", "standards", "method", "cautions", "plan", "origin"} {
			i := strings.Index(page[at:], `<section id="`+id+`"`)
			if i < 0 {
				t.Fatalf("%s: section %s is missing or out of order", name, id)
			}
			at += i
		}
		for _, s := range e.Result.Steps {
			if !strings.Contains(page, ">"+s.ID+"</th>") {
				t.Errorf("%s: step %s has no row", name, s.ID)
			}
		}
		for _, text := range []string{e.Plan.Title, e.Plan.Detector.Serial, e.Result.PlanSHA256, e.Result.ReadingsSHA256,
			"rungproof of a test", "Never lift a protective earth", "local codes", "<th scope=\"col\" class=\"number\">k</th>", "JCGM 100:2008", "ISO/IEC 17025:2017", "ILAC-G8:09/2019"} {
			if !strings.Contains(page, text) {
				t.Errorf("%s: %q is not on the page", name, text)
			}
		}
	}
}

func TestHTMLVerdictIsWordAndSymbol(t *testing.T) {
	page := htmlPage(t, "arrival")
	if want := `<p class="word"><span class="symbol" aria-hidden="true">✗</span>fail</p>`; !strings.Contains(page, want) {
		t.Errorf("the page has no %s", want)
	}
	if !strings.Contains(page, `<span aria-hidden="true">✓</span> pass`) {
		t.Error("no step passes with a word and a symbol")
	}
}

// Elements that HTML closes by themselves (HTML Living Standard, 13.1.2, void elements).
var voidElements = map[string]bool{"meta": true, "img": true, "br": true, "hr": true, "link": true, "input": true}

var tags = regexp.MustCompile(`<(/?)([a-zA-Z][a-zA-Z0-9]*)((?:\s+[a-zA-Z-]+(?:="[^"]*")?)*)\s*>`)

// skeleton is the sequence of a page's tags with the names of their attributes.
// It fails where tags are not nested or a < stands outside of any.
func skeleton(t testing.TB, page string) []string {
	t.Helper()
	page = strings.TrimPrefix(page, "<!DOCTYPE html>")
	if i := strings.Index(page, "<style>"); i >= 0 {
		page = page[:i+len("<style>")] + page[strings.Index(page, "</style>"):]
	}
	var open, out []string
	at := 0
	for _, m := range tags.FindAllStringSubmatchIndex(page, -1) {
		if between := page[at:m[0]]; strings.ContainsAny(between, "<>") {
			t.Fatalf("a stray angle bracket in %q", between)
		}
		at = m[1]
		name := page[m[4]:m[5]]
		attributes := regexp.MustCompile(`="[^"]*"`).ReplaceAllString(page[m[6]:m[7]], "")
		out = append(out, page[m[2]:m[3]]+name+attributes)
		switch {
		case voidElements[name]:
		case m[2] == m[3]:
			open = append(open, name)
		case len(open) == 0 || open[len(open)-1] != name:
			t.Fatalf("</%s> closes %v", name, open)
		default:
			open = open[:len(open)-1]
		}
	}
	if len(open) > 0 || strings.TrimSpace(page[at:]) != "" {
		t.Fatalf("the page ends with %v open and %q after its last tag", open, page[at:])
	}
	return out
}

func TestHTMLIsWellFormedAndStandsAlone(t *testing.T) {
	for _, name := range htmlCases {
		page := htmlPage(t, name)
		for _, tag := range skeleton(t, page) {
			if regexp.MustCompile(`(?i)^(script|iframe|object|embed|link|form|base)\b|\son[a-z]+`).MatchString(tag) {
				t.Errorf("%s: the page has <%s>", name, tag)
			}
		}
		for _, m := range regexp.MustCompile(`(?i)\s(src|href|srcset|action|data|poster)="([^"]{0,40})`).FindAllStringSubmatch(page, -1) {
			if !strings.HasPrefix(m[2], "data:image/png;base64,") && !strings.HasPrefix(m[2], "#") {
				t.Errorf("%s: %s leads out of the page, to %q", name, m[1], m[2])
			}
		}
		if out := regexp.MustCompile(`(?i)https?:|url\(|@import|//[a-z]+\.`).FindString(page); out != "" {
			t.Errorf("%s: %q leads out of the page", name, out)
		}
		if n, images := strings.Count(page, "<img "), strings.Count(page, ` alt="`); n == 0 || n != images {
			t.Errorf("%s: %d images, %d of them with a text in their place", name, n, images)
		}
	}
}

// A plan's text is text wherever it comes out: the page of a hostile plan has the same tags as that of a harmless one.
func TestHTMLEscapesThePlan(t *testing.T) {
	text := replaced(t, htmlRead(t, "arrival.toml"), `standard  = "bench multimeter"`, "standard  = 'bench'",
		`name        = "bench multimeter"`, "name        = 'bench'\ndescription = \"bench multimeter\"")
	pageOf := func(s string) string {
		full := replaced(t, text, `"Arrival check, detector B3"`, s,
			`"Bench 2"`, s+"\ncustomer = "+s+"\nprocedure = "+s+"\nhumidity = "+s+"\nwarm_up = "+s+"\nnotes = "+s,
			`"two-phase detector, second-hand"`, s, `"B3-0042"`, s, `"bench multimeter"`, s, `"M7-118"`, s, `"24-0317"`, s, `'bench'`, s,
			`"ohmmeter"`, s, `error.ohmmeter`, `error.`+s, `"box"`, s, `{ box =`, `{ `+s+` =`,
			`"A"`, `"A`+strings.NewReplacer(`\"`, ``, `'`, ``, ` x=`, ``).Replace(s[1:]),
			`"top"`, `"1`+s[1:], `"box to detector lead"`, `"2`+s[1:], `"detector cable"`, `"3`+s[1:])
		return htmlOf(t, htmlEvaluate(t, full, perfectRows(t, full)), nil)
	}
	harmless := skeleton(t, pageOf(`"x"`))
	for _, hostile := range []string{
		`"<script>alert(1)</script>"`,
		`"</title></style></pre></dd><img src=x onerror=alert(1)>"`,
		`"\" onload=\"alert(1)\" x='"`,
		`"javascript:alert(1) {{.Title}} <!-- ]]> --"`,
	} {
		got := skeleton(t, pageOf(hostile))
		if strings.Join(got, "\n") != strings.Join(harmless, "\n") {
			t.Errorf("%s changes the page's tags", hostile)
		}
	}
}

func TestHTMLIsDeterministic(t *testing.T) {
	for _, name := range htmlCases {
		a := htmlOf(t, htmlCase(t, name), nil)
		if b := htmlOf(t, htmlCase(t, name), nil); a != b {
			t.Errorf("%s: two pages of one evaluation differ", name)
		}
	}
}

// The worths are those of the independent evaluation in testdata/cases, another program's.
func TestHTMLSaysWhatCannotBeToldApart(t *testing.T) {
	page := htmlPage(t, "one-amplitude")
	type worth struct{ Value, U float64 }
	var reference struct {
		Fit struct {
			Intercept worth
			AsSeries  worth `json:"as_series_resistance"`
		}
	}
	if err := json.Unmarshal([]byte(htmlRead(t, "one-amplitude.json")), &reference); err != nil {
		t.Fatal(err)
	}
	const k = 1.959964 // 95 % of a normal distribution: GUM, Table G.1
	o, r := reference.Fit.Intercept, reference.Fit.AsSeries
	summary := page[strings.Index(page, `id="summary"`):strings.Index(page, `id="findings"`)]
	for _, want := range []string{
		typeset(sizeOf(calib.Estimate{Value: o.Value, U: o.U, K: k, Unit: "V", Known: true})),
		typeset(sizeOf(calib.Estimate{Value: r.Value, U: r.U, K: k, Unit: "ohm", Known: true})),
		"cannot be told apart", "All steps pass if the series resistance is between", "the detector&#39;s", "the bench&#39;s",
	} {
		if !strings.Contains(summary, want) {
			t.Errorf("the summary lacks %q", want)
		}
	}
}

func TestHTMLSaysThatVoltagesAreRMS(t *testing.T) {
	text := replaced(t, htmlRead(t, "arrival.toml"), `reads       = "in-phase"`, "reads = \"in-phase\"\ndisplays = \"peak-to-peak\"", `"100 mV", `, `"300 mV", "100 mV", `)
	page := htmlOf(t, htmlEvaluate(t, text, perfectRows(t, text)), nil)
	if !strings.Contains(page, "All voltages in this report are rms, although this detector displays peak-to-peak values") {
		t.Error("the page does not say that its voltages are rms")
	}
	if !strings.Contains(page, ">300 mV</td>") {
		t.Error("the page does not call the range what the detector calls it")
	}
}

func TestHTMLShortensManySteps(t *testing.T) {
	var list []string
	for i := 1; i <= 110; i++ {
		list = append(list, fmt.Sprintf("%q", fmt.Sprintf("%d Ω", 10*i)))
	}
	text := regexp.MustCompile(`box = \["10 kΩ".*\]`).ReplaceAllString(htmlRead(t, "arrival.toml"), "box = ["+strings.Join(list, ", ")+"]")
	text = replaced(t, text, `shares    = "ohmmeter"`, "", `tolerance = "0.1 %"`, "")
	page := htmlOf(t, htmlEvaluate(t, text, perfectRows(t, text)), nil)
	if !strings.Contains(page, "Shown are 400 of 440 steps") {
		t.Error("the page does not say that it leaves steps out")
	}
	steps := page[strings.Index(page, `id="steps"`):strings.Index(page, `id="decisions"`)]
	if n := strings.Count(steps, `<th scope="row"`); n != 400 {
		t.Errorf("%d steps listed, not 400", n)
	}
}

func TestHTMLTakesNoFigureButPNG(t *testing.T) {
	e := htmlCase(t, "string")
	if err := HTML(&bytes.Buffer{}, e, []Figure{{Name: "broken.png", PNG: []byte("GIF89a")}}); err == nil || !strings.Contains(err.Error(), "broken.png") {
		t.Errorf("a broken figure gives %v", err)
	}
}
