package report

import (
	"bytes"
	"fmt"
	"image"
	"image/png"
	"sync"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"

	"rungproof/calib"
)

// Figure is one picture of an evaluation.
type Figure struct {
	Name    string // of the file: "readings.png"
	Title   string // stands in the picture too
	Caption string // what to see in it and how to read it, a few sentences
	PNG     []byte // 200 dots per inch, the same bytes for the same evaluation
}

// figureDPI is the resolution of the pictures.
const figureDPI = 200

// Figures draws an evaluation. A figure that would have nothing to show is left out.
func Figures(e *calib.Evaluation) ([]Figure, error) {
	return drawFigures(figureSheets(e), plot.DefaultTextHandler, figureDPI)
}

// figureSheets lays the figures out, undrawn.
func figureSheets(e *calib.Evaluation) []*figureSheet {
	var sheets []*figureSheet
	for _, lay := range []func(*calib.Evaluation) *figureSheet{
		readingsFigure, errorsFigure, unexplainedFigure, jointFigure, evidenceFigure, residualsFigure, budgetFigure, frequencyFigure,
	} {
		if s := lay(e); s != nil {
			sheets = append(sheets, s)
		}
	}
	return sheets
}

// drawFigures draws them at the same time, each on a canvas of its own.
func drawFigures(sheets []*figureSheet, handler text.Handler, dpi int) ([]Figure, error) {
	figures, failed := make([]Figure, len(sheets)), make([]error, len(sheets))
	var group sync.WaitGroup
	for i, s := range sheets {
		group.Go(func() {
			figures[i] = Figure{Name: s.name, Title: s.title, Caption: s.caption}
			figures[i].PNG, failed[i] = s.png(handler, dpi)
		})
	}
	group.Wait()
	for i, err := range failed {
		if err != nil {
			return nil, fmt.Errorf("figure %s: %w", sheets[i].name, err)
		}
	}
	return figures, nil
}

// png draws a sheet into memory.
func (s *figureSheet) png(handler text.Handler, dpi int) ([]byte, error) {
	canvas := vgimg.NewWith(vgimg.UseWH(figureWidth, s.height), vgimg.UseDPI(dpi))
	s.draw(draw.New(canvas), handler)
	var out bytes.Buffer
	encoder := png.Encoder{CompressionLevel: png.DefaultCompression}
	if err := encoder.Encode(&out, figurePalette(canvas.Image().(*image.RGBA))); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}

// figureWidth is common to all figures, so that they line up in a report.
const figureWidth = 7 * vg.Inch
