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

// fontUnits is how many units of the font's own its size has; at that size nothing is rounded.
const fontUnits = 2048

// width returns how wide a text of that size is. Kerning, which not every viewer applies, is left out.
func (f *fonts) width(s string, size float64, bold bool) float64 {
	total := 0.0
	for _, r := range s {
		total += f.advance(r, size, bold)
	}
	return total
}

// advance returns how wide a rune is; one that the font cannot look up has no width.
func (f *fonts) advance(r rune, size float64, bold bool) float64 {
	face := f.face(bold)
	g, err := face.GlyphIndex(&f.buf, r)
	if err != nil {
		return 0
	}
	a, err := face.GlyphAdvance(&f.buf, g, fixed.I(fontUnits), font.HintingNone)
	if err != nil {
		return 0
	}
	return float64(a) / 64 / fontUnits * size
}

// glyph returns a rune's outline in font units, good until the next call, and its width.
func (f *fonts) glyph(r rune, size float64, bold bool) (outline sfnt.Segments, advance float64, err error) {
	face := f.face(bold)
	g, err := face.GlyphIndex(&f.buf, r)
	if err != nil {
		return nil, 0, err
	}
	advance = f.advance(r, size, bold)
	outline, err = face.LoadGlyph(&f.buf, g, fixed.I(fontUnits), nil)
	return outline, advance, err
}

// from returns where a text begins.
func (f *fonts) from(t text) float64 {
	switch w := f.width(t.text, t.size, t.bold); t.anchor {
	case middle:
		return t.at.x - w/2
	case end:
		return t.at.x - w
	}
	return t.at.x
}
