package report

import (
	"image/color"
	"math"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// figureSheet is a figure laid out: from the top its title, its key, a note where
// there is one, and its panels, above one another or side by side. The key stands
// outside the panels, so that it never covers a point.
type figureSheet struct {
	name, title, caption string
	height               vg.Length
	keys                 []figureKey
	note                 string
	panels               []*figurePanel
	beside               bool
}

// figurePanel is one plot with its share of the sheet. Its words are its own and
// not the plot's, which places those of a logarithmic axis as if it were linear.
type figurePanel struct {
	*plot.Plot
	share       float64
	title, x, y string
	head, foot  string // lines across the whole tile, from its left edge
}

// figureKey is an entry of the key: a mark, a line, a shaded patch, or a patch with a line.
type figureKey struct {
	words string
	mark  draw.GlyphStyle // Shape nil for none
	line  draw.LineStyle  // Width 0 for none
	shade color.Color     // nil for none
}

// newFigurePanel is a plot without anything in it, in the look of all figures.
func newFigurePanel(share float64, x, y string) *figurePanel {
	p := plot.New()
	p.X.Tick.Marker, p.Y.Tick.Marker = figureTicks(6), figureTicks(5)
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Padding, a.Width, a.Tick.Width = 0, 0, 0.7
		a.Color, a.Tick.Color = figureInk, figureInk
		a.Tick.Length = 5
	}
	return &figurePanel{Plot: p, share: share, x: x, y: y}
}

// letter sets the letters of a panel.
func (p *figurePanel) letter(handler text.Handler) {
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		x, y := a.Tick.Label.XAlign, a.Tick.Label.YAlign
		a.Tick.Label = figureText(figureTickSize, xfont.WeightNormal, handler)
		a.Tick.Label.XAlign, a.Tick.Label.YAlign = x, y
		if _, blank := a.Tick.Marker.(figureUnlabelled); blank {
			a.Tick.Label.Font.Size = 1
		}
	}
}

// figureMargin is the room for a line of words beside a panel.
const figureMargin = figureLabelSize + 9

// inside is what the words of a panel leave of its tile.
func (p *figurePanel) inside(c draw.Canvas) draw.Canvas {
	margin := func(words string) vg.Length {
		if words == "" {
			return 0
		}
		return figureMargin
	}
	return draw.Crop(c, margin(p.y), 0, margin(p.x)+margin(p.foot), -margin(p.title)-margin(p.head))
}

// words writes them: along the axes and above, in the middle of the data area,
// those of the vertical axis at the given left edge.
func (p *figurePanel) words(tile draw.Canvas, left vg.Length, handler text.Handler) {
	style := figureText(figureLabelSize, xfont.WeightNormal, handler)
	style.XAlign = text.XCenter
	data := p.DataCanvas(p.inside(tile))
	c := data.Center()
	if p.title != "" {
		tile.FillText(style, vg.Point{X: c.X, Y: data.Max.Y + 6}, p.title)
	}
	bottom := tile.Min.Y + 3
	if p.foot != "" {
		tile.FillText(figureText(figureTickSize, xfont.WeightNormal, handler), vg.Point{X: left, Y: bottom}, p.foot)
		bottom += figureMargin
	}
	if p.head != "" {
		tile.FillText(figureText(figureLabelSize, xfont.WeightBold, handler), vg.Point{X: left, Y: tile.Max.Y - figureLabelSize}, p.head)
	}
	if p.x != "" {
		tile.FillText(style, vg.Point{X: c.X, Y: bottom}, p.x)
	}
	if p.y != "" {
		style.Rotation = math.Pi / 2
		tile.FillText(style, vg.Point{X: left + figureLabelSize, Y: c.Y}, p.y)
	}
}

// draw draws the sheet.
func (s *figureSheet) draw(c draw.Canvas, handler text.Handler) {
	c = draw.Crop(c, 10, -12, 8, -8)
	title := figureText(figureTitleSize, xfont.WeightBold, handler)
	down := func(by vg.Length) { c.Max.Y -= by }
	c.FillText(title, vg.Point{X: c.Min.X, Y: c.Max.Y - figureTitleSize}, s.title)
	down(figureTitleSize + 8)
	if len(s.keys) > 0 {
		down(s.drawKeys(c, handler))
	}
	if s.note != "" {
		c.FillText(figureText(figureLabelSize, xfont.WeightNormal, handler), vg.Point{X: c.Min.X, Y: c.Max.Y - figureLabelSize}, s.note)
		down(figureLabelSize + 8)
	}
	for _, p := range s.panels {
		p.letter(handler)
	}
	for i, tile := range s.tiles(c) {
		s.panels[i].Draw(s.panels[i].inside(tile))
		left := c.Min.X // the same for panels above one another
		if s.beside {
			left = tile.Min.X
		}
		s.panels[i].words(tile, left, handler)
	}
}

// drawKeys fills rows from the left and gives their height.
func (s *figureSheet) drawKeys(c draw.Canvas, handler text.Handler) vg.Length {
	const gap, between, row = 5, 16, figureLabelSize + 5
	style := figureText(figureLabelSize, xfont.WeightNormal, handler)
	x, y := c.Min.X, c.Max.Y-figureLabelSize
	for _, k := range s.keys {
		width, swatch := style.Width(k.words), vg.Length(24)
		if k.line.Width == 0 && k.shade == nil {
			swatch = 8 // a mark alone
			if k.mark.Shape == nil {
				swatch = -gap // words alone
			}
		}
		if x > c.Min.X && x+swatch+gap+width > c.Max.X {
			x, y = c.Min.X, y-row
		}
		middle := y + figureLabelSize*0.33
		if k.shade != nil {
			c.FillPolygon(k.shade, []vg.Point{{X: x, Y: middle - 5}, {X: x + swatch, Y: middle - 5}, {X: x + swatch, Y: middle + 5}, {X: x, Y: middle + 5}})
		}
		c.StrokeLine2(k.line, x, middle, x+swatch, middle)
		if k.mark.Shape != nil {
			c.DrawGlyphNoClip(k.mark, vg.Point{X: x + swatch/2, Y: middle})
		}
		c.FillText(style, vg.Point{X: x + swatch + gap, Y: y}, k.words)
		x += swatch + gap + width + between
	}
	return c.Max.Y - y + 8
}

// figurePanelGap is the room between two panels.
const figurePanelGap = 10

// tiles divides the canvas among the panels so that their data areas line up.
func (s *figureSheet) tiles(c draw.Canvas) []draw.Canvas {
	const gap = figurePanelGap
	total := 0.0
	for _, p := range s.panels {
		total += p.share
	}
	size := c.Size()
	room := vg.Length(len(s.panels)-1) * gap
	tiles := make([]draw.Canvas, len(s.panels))
	type margins struct{ left, right, bottom, top vg.Length }
	need := make([]margins, len(s.panels))
	var most margins
	at := vg.Length(0)
	for i, p := range s.panels {
		t := c
		share := vg.Length(p.share / total)
		if s.beside {
			width := share * (size.X - room)
			t.Min.X, t.Max.X = c.Min.X+at, c.Min.X+at+width
			at += width + gap
		} else {
			height := share * (size.Y - room)
			t.Min.Y, t.Max.Y = c.Max.Y-at-height, c.Max.Y-at
			at += height + gap
		}
		d := p.DataCanvas(p.inside(t))
		m := margins{d.Min.X - t.Min.X, t.Max.X - d.Max.X, d.Min.Y - t.Min.Y, t.Max.Y - d.Max.Y}
		most = margins{max(most.left, m.left), max(most.right, m.right), max(most.bottom, m.bottom), max(most.top, m.top)}
		tiles[i], need[i] = t, m
	}
	for i, m := range need {
		if s.beside {
			tiles[i] = draw.Crop(tiles[i], 0, 0, most.bottom-m.bottom, m.top-most.top)
		} else {
			tiles[i] = draw.Crop(tiles[i], most.left-m.left, m.right-most.right, 0, 0)
		}
	}
	return tiles
}
