package report

import (
	"bytes"
	"flag"
	"image"
	"image/png"
	"os"
	"path/filepath"
	"testing"

	"gonum.org/v1/plot"

	"rungproof/calib"
	"rungproof/calib/diagnose"
	"rungproof/calib/plan"
	"rungproof/calib/reading"
)

var figuresUpdate = flag.Bool("figures.update", false, "draw the golden figures in testdata/figures anew; look at each of them")

// figureEvaluation evaluates a plan and its readings.
func figureEvaluation(t testing.TB, planText, rows string) *calib.Evaluation {
	t.Helper()
	p, err := plan.Parse("figure.toml", []byte(planText))
	if err != nil {
		t.Fatal(err)
	}
	set, err := reading.Parse("figure.csv", []byte(rows), p)
	if err != nil {
		t.Fatal(err)
	}
	e, err := calib.Evaluate(p, set)
	if err != nil {
		t.Fatal(err)
	}
	e.Result.Findings = diagnose.Findings(e)
	return e
}

// figureCase evaluates one of the cases of package calib.
func figureCase(t testing.TB, name string) *calib.Evaluation {
	t.Helper()
	text := func(extension string) string {
		b, err := os.ReadFile("../calib/testdata/cases/" + name + extension)
		if err != nil {
			t.Fatal(err)
		}
		return string(b)
	}
	return figureEvaluation(t, text(".toml"), text(".csv"))
}

var figureCases = []string{"arrival", "one-amplitude", "quadrature", "string"}

func figuresOf(t testing.TB, e *calib.Evaluation) []Figure {
	t.Helper()
	figures, err := Figures(e)
	if err != nil {
		t.Fatal(err)
	}
	return figures
}

// figureCoarse is a resolution that is drawn fast.
const figureCoarse = 40

func coarseFigures(t testing.TB, e *calib.Evaluation) []Figure {
	t.Helper()
	figures, err := drawFigures(figureSheets(e), plot.DefaultTextHandler, figureCoarse)
	if err != nil {
		t.Fatal(err)
	}
	return figures
}

func figurePixels(t testing.TB, b []byte) image.Image {
	t.Helper()
	m, err := png.Decode(bytes.NewReader(b))
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// The golden pictures were looked at by a person; every pixel must stay.
func TestFiguresOfArrivalAreAsLookedAt(t *testing.T) {
	for _, f := range figuresOf(t, withBudgets(t, figureCase(t, "arrival"))) {
		file := filepath.Join("testdata", "figures", "arrival-"+f.Name)
		if *figuresUpdate {
			if err := os.MkdirAll(filepath.Dir(file), 0o777); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(file, f.PNG, 0o666); err != nil {
				t.Fatal(err)
			}
		}
		golden, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		got, want := figurePixels(t, f.PNG), figurePixels(t, golden)
		if got.Bounds() != want.Bounds() {
			t.Errorf("%s is %v, want %v", f.Name, got.Bounds(), want.Bounds())
			continue
		}
		different := 0
		for y := range want.Bounds().Max.Y {
			for x := range want.Bounds().Max.X {
				if got.At(x, y) != want.At(x, y) {
					different++
				}
			}
		}
		if different > 0 {
			t.Errorf("%s differs from the golden picture in %d pixels", f.Name, different)
		}
	}
}

// The same evaluation has the same figures to the byte.
func TestFiguresOfEachCase(t *testing.T) {
	for name, want := range map[string][]string{
		"arrival":       {"readings.png", "errors.png", "unexplained.png", "joint.png", "evidence.png", "residuals.png"},
		"one-amplitude": {"readings.png", "errors.png", "unexplained.png", "joint.png", "residuals.png"}, // what it shows cannot be told apart
		"quadrature":    {"readings.png", "errors.png", "unexplained.png", "joint.png", "evidence.png", "residuals.png", "frequency.png"},
		"string":        {"readings.png", "errors.png", "unexplained.png", "joint.png", "evidence.png", "residuals.png"},
	} {
		figures, again := figuresOf(t, figureCase(t, name)), figuresOf(t, figureCase(t, name))
		if len(figures) != len(want) || len(again) != len(want) {
			t.Errorf("%s has %d figures, want %v", name, len(figures), want)
			continue
		}
		for i, f := range figures {
			if f.Name != want[i] || f.Title == "" || f.Caption == "" {
				t.Errorf("%s: figure %d is %q %q %q, want %s with title and caption", name, i, f.Name, f.Title, f.Caption, want[i])
			}
			if f.Caption != again[i].Caption || !bytes.Equal(f.PNG, again[i].PNG) {
				t.Errorf("%s: %s differs from one time to the next", name, f.Name)
			}
			if b := figurePixels(t, f.PNG).Bounds(); b.Dx() != 1400 || b.Dy() < 400 {
				t.Errorf("%s: %s is %v", name, f.Name, b)
			}
		}
	}
}

func BenchmarkFigures(b *testing.B) {
	e := figureCase(b, "arrival")
	for b.Loop() {
		figuresOf(b, e)
	}
}
