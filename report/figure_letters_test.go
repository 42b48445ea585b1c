package report

import (
	"fmt"
	"math"
	"sync"
	"testing"

	"codeberg.org/go-fonts/liberation/liberationsansbold"
	"codeberg.org/go-fonts/liberation/liberationsansregular"
	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"rungproof/calib"
)

// figureListener keeps the words that figures write.
type figureListener struct {
	text.Handler
	lock  sync.Mutex
	words map[xfont.Weight]map[string]bool
}

func (l *figureListener) Draw(c vg.Canvas, words string, s text.Style, at vg.Point) {
	l.lock.Lock()
	if l.words[s.Font.Weight] == nil {
		l.words[s.Font.Weight] = map[string]bool{}
	}
	l.words[s.Font.Weight][words] = true
	l.lock.Unlock()
	l.Handler.Draw(c, words, s, at)
}

// A rune that a font lacks is drawn as a box or not at all: every one that a
// figure can write must be in the font that writes it.
func TestFiguresWriteOnlyWhatTheirFontsHave(t *testing.T) {
	listener := &figureListener{Handler: plot.DefaultTextHandler, words: map[xfont.Weight]map[string]bool{}}
	var evaluations []*calib.Evaluation
	for _, name := range figureCases {
		evaluations = append(evaluations, withBudgets(t, figureCase(t, name)))
	}
	perRange := figureSource(t, "arrival", "[decision]", "[fit]\noffset = \"share of range\"\n[decision]")
	evaluations = append(evaluations, figureEvaluation(t, perRange, figureRead(t, "arrival")), figureMany(t, 12))
	for _, e := range evaluations {
		if _, err := drawFigures(figureSheets(e), listener, figureCoarse); err != nil {
			t.Fatal(err)
		}
	}
	for _, name := range []string{"compression", "swapped", "not-settled", "asymmetry", "offset-of-range", "outlier"} {
		if _, err := drawFigures(figureSheets(figureFaulty(t, name)), listener, figureCoarse); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := drawFigures([]*figureSheet{rehearsalFigure(someRehearsal())}, listener, figureCoarse); err != nil {
		t.Fatal(err)
	}
	// Every prefix and unit of an axis, and what a plan may write as an amplitude.
	regular := listener.words[xfont.WeightNormal]
	for exponent := -15.0; exponent <= 12; exponent += 3 {
		for _, unit := range []string{"V", "A", "ohm", "1", "Hz"} {
			scale, written := figureUnit(math.Pow(10, exponent), unit)
			regular[fmt.Sprint(written, figureNumber(-scale, 3))] = true
		}
	}
	regular["20 mVpp 20 \u00b5Vrms 20 \u03bcVpk 2\u00a0V 1.0(2) ≈ ° ²"] = true
	for weight, ttf := range map[xfont.Weight][]byte{xfont.WeightNormal: liberationsansregular.TTF, xfont.WeightBold: liberationsansbold.TTF} {
		font, err := sfnt.Parse(ttf)
		if err != nil {
			t.Fatal(err)
		}
		if len(listener.words[weight]) < 4 {
			t.Errorf("only %d words of weight %v were heard", len(listener.words[weight]), weight)
		}
		var buffer sfnt.Buffer
		for words := range listener.words[weight] {
			for _, r := range words {
				if glyph, err := font.GlyphIndex(&buffer, r); err != nil || glyph == 0 {
					t.Errorf("%q: the font has no %q (%v)", words, r, err)
				}
			}
		}
	}
}
