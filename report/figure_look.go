package report

import (
	"image/color"
	"math"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"rungproof/calib/decision"
)

// The look of all figures: colours, marks, lines and letters.

// Colours that people with any of the common colour deficiencies can tell apart:
// M. Okabe and K. Ito, Color Universal Design (2008), figure 16. The yellow of
// that set is too pale for marks on white and is left out.
var (
	figureBlack  = color.NRGBA{0, 0, 0, 255}
	figureOrange = color.NRGBA{230, 159, 0, 255}
	figureSky    = color.NRGBA{86, 180, 233, 255}
	figureGreen  = color.NRGBA{0, 158, 115, 255}
	figureBlue   = color.NRGBA{0, 114, 178, 255}
	figureRed    = color.NRGBA{213, 94, 0, 255} // vermilion
	figurePurple = color.NRGBA{204, 121, 167, 255}

	figureInk   = color.NRGBA{40, 40, 40, 255}    // frames and letters
	figureSoft  = color.NRGBA{110, 110, 110, 255} // lines that go with the data
	figureGrid  = color.NRGBA{226, 226, 226, 255}
	figureShade = color.NRGBA{215, 215, 215, 255} // bands
)

// Sizes that stay legible where a picture is shown at half its size.
const (
	figureTitleSize = 15
	figureLabelSize = 12.5
	figureTickSize  = 11.5
)

func figureText(size vg.Length, weight xfont.Weight, handler text.Handler) text.Style {
	return text.Style{
		Color: figureInk, Handler: handler, XAlign: text.XLeft, YAlign: text.YBottom,
		Font: font.Font{Typeface: "Liberation", Variant: "Sans", Weight: weight, Size: size},
	}
}

func figureLine(c color.Color, width vg.Length, dashes ...vg.Length) draw.LineStyle {
	return draw.LineStyle{Color: c, Width: width, Dashes: dashes}
}

var (
	figureFit    = figureLine(figureSoft, 1.4)
	figureOther  = figureLine(figureSoft, 1.4, 6, 3)
	figureZero   = figureLine(figureInk, 0.7)
	figureLimit  = figureLine(figureInk, 1.2)
	figureBarred = vg.Length(0.9) // width of an error bar
)

// figurePolygon is a filled regular polygon, its first corner turned by so many degrees from the right.
type figurePolygon struct {
	corners int
	turn    float64
	inner   float64 // of a star: the radius of the inner corners; else 0
}

// DrawGlyph draws it with the area of the circle of the style's radius.
func (g figurePolygon) DrawGlyph(c *draw.Canvas, s draw.GlyphStyle, at vg.Point) {
	n := g.corners
	if g.inner > 0 {
		n *= 2
	}
	size := math.Sqrt(2 * math.Pi / (float64(g.corners) * math.Sin(2*math.Pi/float64(g.corners))))
	if g.inner > 0 {
		size = 1.35
	}
	var path vg.Path
	for i := range n {
		r := size
		if g.inner > 0 && i%2 == 1 {
			r *= g.inner
		}
		angle := g.turn*math.Pi/180 + 2*math.Pi*float64(i)/float64(n)
		p := vg.Point{X: at.X + s.Radius*vg.Length(r*math.Cos(angle)), Y: at.Y + s.Radius*vg.Length(r*math.Sin(angle))}
		if i == 0 {
			path.Move(p)
		} else {
			path.Line(p)
		}
	}
	path.Close()
	c.Fill(path)
}

// figureArrow points out of the picture, up or down.
type figureArrow struct{ down bool }

// DrawGlyph draws a filled arrow whose tip is at the point.
func (g figureArrow) DrawGlyph(c *draw.Canvas, s draw.GlyphStyle, at vg.Point) {
	r := s.Radius
	sign := vg.Length(-1)
	if g.down {
		sign = 1
	}
	var path vg.Path
	for i, p := range []vg.Point{{X: 0, Y: 0}, {X: 1.1, Y: 1.6}, {X: 0.4, Y: 1.6}, {X: 0.4, Y: 3.2}, {X: -0.4, Y: 3.2}, {X: -0.4, Y: 1.6}, {X: -1.1, Y: 1.6}} {
		q := vg.Point{X: at.X + r*p.X, Y: at.Y + sign*r*p.Y}
		if i == 0 {
			path.Move(q)
		} else {
			path.Line(q)
		}
	}
	path.Close()
	c.Fill(path)
}

var (
	figureSquare  = figurePolygon{corners: 4, turn: 45}
	figureDiamond = figurePolygon{corners: 4}
	figureUp      = figurePolygon{corners: 3, turn: 90}
	figureDown    = figurePolygon{corners: 3, turn: -90}
	figureStar    = figurePolygon{corners: 5, turn: 90, inner: 0.45}
	figureCross   = figurePolygon{corners: 4, turn: 45, inner: 0.33}
)

// figureMarks tell the generator's amplitudes apart. There are fewer colours than
// shapes, so that further ones differ too.
var (
	figureMarks  = []draw.GlyphDrawer{draw.CircleGlyph{}, figureSquare, figureUp, figureDiamond, figureDown, figureStar, figureCross}
	figureColors = []color.NRGBA{figureBlue, figureRed, figureGreen, figurePurple, figureOrange, figureBlack}
)

// figureMark is the mark of the i-th amplitude.
func figureMark(i int) draw.GlyphStyle {
	return draw.GlyphStyle{Color: figureColors[i%len(figureColors)], Shape: figureMarks[i%len(figureMarks)], Radius: 3.4}
}

// figureOutcome is the mark of an outcome.
func figureOutcome(o decision.Outcome) draw.GlyphStyle {
	switch o {
	case decision.Pass:
		return draw.GlyphStyle{Color: figureGreen, Shape: draw.CircleGlyph{}, Radius: 3.4}
	case decision.ConditionalPass:
		return draw.GlyphStyle{Color: figureSky, Shape: figureDiamond, Radius: 3.6}
	case decision.ConditionalFail:
		return draw.GlyphStyle{Color: figureOrange, Shape: figureUp, Radius: 3.6}
	}
	return draw.GlyphStyle{Color: figureRed, Shape: figureSquare, Radius: 3.6}
}

// figureCrowd is the number of points above which marks are small and let others
// shine through, and error bars are left out.
const figureCrowd = 500

// figureCrowded makes a mark fit for so many points.
func figureCrowded(s draw.GlyphStyle, points int) draw.GlyphStyle {
	if points > figureCrowd {
		s.Radius *= 0.5
		s.Color = figureAlpha(s.Color, 110)
	}
	return s
}

func figureAlpha(c color.Color, alpha uint8) color.NRGBA {
	n := color.NRGBAModel.Convert(c).(color.NRGBA)
	n.A = alpha
	return n
}
