package report

import (
	"image"
	"image/color"
)

// figurePalette makes a picture one of at most 256 colours, which takes a third
// of the bytes and of the time to write. Lines and letters with soft edges have
// some hundred shades; where they are more, shades that differ by a last bit or
// two are made one, until they are few enough.
func figurePalette(m *image.RGBA) *image.Paletted {
	out := image.NewPaletted(m.Bounds(), nil)
	for mask := uint32(0xffffff); ; mask = mask << 1 & 0xfefefe & mask {
		if out.Palette = figureIndices(m, out.Pix, mask); out.Palette != nil {
			return out
		}
	}
}

// figureIndices fills pix with indices of the colours under a mask, in the order in which
// they come, and gives the colours; nil where they are more than 256.
func figureIndices(m *image.RGBA, pix []uint8, mask uint32) color.Palette {
	var palette color.Palette
	index := map[uint32]uint8{}
	last, lastIndex := uint32(0xff000000), uint8(0)
	for i := range pix {
		p := m.Pix[4*i : 4*i+3 : 4*i+3]
		c := (uint32(p[0])<<16 | uint32(p[1])<<8 | uint32(p[2])) & mask
		if c != last {
			k, known := index[c]
			if !known {
				if len(palette) == 256 {
					return nil
				}
				k = uint8(len(palette))
				index[c] = k
				palette = append(palette, color.RGBA{p[0], p[1], p[2], 255})
			}
			last, lastIndex = c, k
		}
		pix[i] = lastIndex
	}
	return palette
}
