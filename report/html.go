package report

import (
	"bytes"
	"embed"
	"encoding/base64"
	"fmt"
	"html/template"
	"image/png"
	"io"
	"math"
	"regexp"
	"strings"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
)

//go:embed page.tmpl style.tmpl
var templates embed.FS

var pageTemplate = template.Must(template.ParseFS(templates, "*.tmpl"))

// page is what the template is filled with, in the order of the page.
type page struct {
	Title      string
	Plan       *plan.Plan
	Result     *calib.Result
	Verdict    mark
	Decided    string
	Identity   []pair
	Voltages   string
	Summary    grid
	Findings   []calib.Finding
	Evidence   grid
	Figures    []picture
	Gains      []grid
	Steps      grid
	Decisions  grid
	Inputs     grid
	Budgets    []grid
	BudgetNote string
	MonteCarlo grid
	Trials     string
	Standards  grid
	Method     []pair
	References []string
	Cautions   []calib.Finding
	Source     string
}

// pair is a term and what is said of it.
type pair struct{ Term, Text string }

// picture is a figure within the page.
type picture struct {
	Title, Caption string
	Width, Height  int // pixels
	Data           template.URL
}

// HTML writes an evaluation as one page that needs nothing beside itself: no
// network, no script. It is for the screen and for A4 or Letter paper.
func HTML(w io.Writer, e *calib.Evaluation, figures []Figure) error {
	p := &page{
		Title: e.Plan.Title, Plan: e.Plan, Result: e.Result, Source: string(e.Plan.Source),
		Verdict: markOf(e.Result.Verdict), Decided: decided(e),
		Identity: identity(e.Plan), Voltages: voltages(e.Plan),
		Summary: summary(e), Gains: gainTables(e), Steps: stepTable(e), Decisions: decisionTable(e),
		Evidence: evidenceTable(e), Inputs: inputTable(e), Standards: standardTable(e), Budgets: budgetTables(e), MonteCarlo: monteCarloTable(e),
		Method: method(e), References: references(e),
	}
	if p.Title == "" {
		p.Title = "Calibration of a synchronous detector"
	}
	if !e.Result.Separable() {
		p.BudgetNote = "Offset and series resistance cannot be told apart: each budget is of what it would be if the other were zero."
	}
	if mc := e.Result.MonteCarlo; mc != nil {
		p.Trials = monteCarloSays(mc)
	}
	for _, f := range e.Result.Findings {
		f.Text, f.Do = typeset(f.Text), typeset(f.Do)
		if f.Kind == "touch voltage" || f.Kind == "rating exceeded" {
			p.Cautions = append(p.Cautions, f)
		} else {
			p.Findings = append(p.Findings, f)
		}
	}
	for _, f := range figures {
		size, err := png.DecodeConfig(bytes.NewReader(f.PNG))
		if err != nil {
			return fmt.Errorf("the figure %s is no PNG: %w", f.Name, err)
		}
		p.Figures = append(p.Figures, picture{f.Title, f.Caption, size.Width, size.Height,
			template.URL("data:image/png;base64," + base64.StdEncoding.EncodeToString(f.PNG))})
	}
	var b bytes.Buffer
	if err := pageTemplate.ExecuteTemplate(&b, "page.tmpl", p); err != nil {
		return fmt.Errorf("the report's page: %w", err)
	}
	_, err := w.Write(b.Bytes())
	return err
}

// mark is an outcome as it is shown: a word, a symbol and a class of the style,
// so that colour is never the only sign.
type mark struct{ Word, Symbol, Class string }

func markOf(o decision.Outcome) mark {
	symbols := map[decision.Outcome]string{decision.NotJudged: "–", decision.Pass: "✓",
		decision.ConditionalPass: "(✓)", decision.ConditionalFail: "(✗)", decision.Fail: "✗"}
	return mark{o.String(), symbols[o], strings.ReplaceAll(o.String(), " ", "-")}
}

// identity is what the plan states of the detector and of the circumstances.
func identity(p *plan.Plan) []pair {
	date := ""
	if !p.Date.IsZero() {
		date = p.Date.Format("2006-01-02")
	}
	frequencies := make([]string, len(p.Frequencies))
	for i, f := range p.Frequencies {
		frequencies[i] = quantity.Plain(f, "Hz")
	}
	temperature := fmt.Sprintf("%.4g °C", p.Temperature.X)
	switch {
	case p.Temperature.Stated():
		temperature = quantity.Concise(p.Temperature.X, p.Temperature.U(), "°C") + ", standard uncertainty in parentheses"
	case p.Temperature.X == 23:
		temperature += " (taken where a plan states none)"
	}
	var out []pair
	for _, item := range []pair{
		{"Detector", p.Detector.Description}, {"Serial", p.Detector.Serial}, {"Reads", p.Detector.Reads},
		{"Frequency", calib.List(frequencies)}, {"Date", date}, {"Condition", p.Condition},
		{"Operator", p.Operator}, {"Customer", p.Customer}, {"Procedure", p.Procedure},
		{"Room temperature", typeset(temperature)}, {"Humidity", p.Humidity}, {"Warm-up", p.WarmUp}, {"Notes", p.Notes},
	} {
		if item.Text != "" {
			out = append(out, item)
		}
	}
	return out
}

// voltages says what the voltages of the page are.
func voltages(p *plan.Plan) string {
	if p.Detector.Displays == "rms" {
		return "All voltages are rms; only the amplitudes of steps are written as the generator shows them."
	}
	return fmt.Sprintf("All voltages in this report are rms, although this detector displays %s values; "+
		"only its ranges have the names that it gives them, and the amplitudes of steps are written as the generator shows them.", p.Detector.Displays)
}

var (
	negative = regexp.MustCompile(`(^|[ (±])-(\d)`)
	united   = regexp.MustCompile(`([\d)]) ((?:ppm|%|°C|[fpnµmkMGT]?(?:V|Ω|A|F|Hz|H|s|W|rad))(?:$|[^\pL]))`)
)

// typeset puts the minus sign in place of the hyphen before numbers, and spaces
// that no line breaks at within quantities.
func typeset(s string) string {
	s = negative.ReplaceAllString(s, "${1}−${2}")
	s = united.ReplaceAllString(s, "${1}\u00a0${2}")
	return strings.ReplaceAll(s, " ± ", "\u00a0±\u00a0")
}

// shown writes a voltage, or nothing for what is not known.
func shown(x float64, digits int) string {
	if math.IsNaN(x) {
		return ""
	}
	return typeset(quantity.Format(x, digits, "V"))
}
