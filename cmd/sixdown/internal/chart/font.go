package chart

import (
	"fmt"

	"codeberg.org/go-fonts/liberation/liberationsansbold"
	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"golang.org/x/image/font"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

// Heights of Liberation Sans over its size.
const (
	capHeight = 0.729
	descent   = 0.212
)

// fonts are the two weights that texts are set in.
type fonts struct {
	regular, bold *sfnt.Font
	buf           sfnt.Buffer
}

func newFonts() (*fonts, error) {
	regular, err := opentype.Parse(liberationsansregular.TTF)
	if err != nil {
		return nil, fmt.Errorf("chart: the font: %w", err)
	}
	bold, err := opentype.Parse(liberationsansbold.TTF)
	if err != nil {
		return nil, fmt.Errorf("chart: the bold font: %w", err)
	}
	return &fonts{regular: regular, bold: bold}, nil
}

// face returns the font of a weight.
func (f *fonts) face(bold bool) *sfnt.Font {
	if bold {
		return f.bold
	}
	return f.regular
}

// width returns how wide a text of that size is. Kerning, which not every viewer applies, is left out.
func (f *fonts) width(s string, size float64, bold bool) float64 {
	const ppem = 2048 // font units, so that nothing is rounded
	face := f.face(bold)
	total := 0.0
	for _, r := range s {
		g, err := face.GlyphIndex(&f.buf, r)
		if err != nil {
			continue // a rune that the font cannot look up has no width
		}
		a, err := face.GlyphAdvance(&f.buf, g, fixed.I(ppem), font.HintingNone)
		if err == nil {
			total += float64(a) / 64
		}
	}
	return total / ppem * size
}
