package chart

import (
	"fmt"
	"io"
	"math"

	"git.sr.ht/~sbinet/gg"
	"golang.org/x/image/font/sfnt"
)

// WritePNG writes the page as a PNG picture of the given width in pixels.
func (p *Page) WritePNG(w io.Writer, theme Theme, width int) error {
	if width < 1 {
		return fmt.Errorf("chart: a width of %d pixels cannot be drawn; give 1 or more", width)
	}
	sheets, err := compose(p, math.Inf(1))
	if err != nil {
		return err
	}
	s := sheets[0]
	k := float64(width) / s.w
	c := gg.NewContext(width, int(math.Ceil(s.h*k)))
	c.SetColor(theme.colour(paper))
	c.Clear()
	c.SetFillRuleEvenOdd()
	c.SetLineJoinRound()
	d := pngDrawer{c: c, k: k, theme: theme, fonts: s.fonts}
	for _, m := range s.marks {
		if err := d.draw(m); err != nil {
			return err
		}
	}
	return c.EncodePNG(w)
}

// A pngDrawer draws marks in pixels, k of them to a page unit.
type pngDrawer struct {
	c     *gg.Context
	k     float64
	theme Theme
	fonts *fonts
}

func (d *pngDrawer) trace(points []point) {
	for i, p := range points {
		if i == 0 {
			d.c.MoveTo(p.x*d.k, p.y*d.k)
		} else {
			d.c.LineTo(p.x*d.k, p.y*d.k)
		}
	}
}

func (d *pngDrawer) draw(m mark) error {
	switch m := m.(type) {
	case line:
		d.c.SetColor(d.theme.colour(m.pen.ink))
		d.c.SetLineWidth(m.pen.width * d.k)
		dash := make([]float64, len(m.pen.dash))
		for i, v := range m.pen.dash {
			dash[i] = v * d.k
		}
		d.c.SetDash(dash...)
		d.c.SetLineCapButt()
		d.trace(m.points)
		d.c.Stroke()
	case shape:
		d.c.SetColor(d.theme.colour(m.ink))
		for _, loop := range m.loops {
			d.trace(loop)
			d.c.ClosePath()
		}
		d.c.Fill()
	case disc:
		d.c.SetColor(d.theme.colour(m.ink))
		d.c.DrawCircle(m.at.x*d.k, m.at.y*d.k, m.r*d.k)
		d.c.Fill()
	case text:
		return d.write(m)
	}
	return nil
}

// write fills the outlines of a text's glyphs, each set where the layout has it.
func (d *pngDrawer) write(t text) error {
	d.c.SetColor(d.theme.colour(t.ink))
	at := point{d.fonts.from(t), t.at.y}
	for _, r := range t.text {
		outline, advance, err := d.fonts.glyph(r, t.size, t.bold)
		if err != nil {
			return fmt.Errorf("chart: the glyph %q: %w", r, err)
		}
		for _, part := range outline {
			p := func(i int) (x, y float64) {
				a := part.Args[i]
				return (at.x + float64(a.X)/64/fontUnits*t.size) * d.k, (at.y + float64(a.Y)/64/fontUnits*t.size) * d.k
			}
			x0, y0 := p(0)
			x1, y1 := p(1)
			switch part.Op {
			case sfnt.SegmentOpMoveTo:
				d.c.ClosePath()
				d.c.MoveTo(x0, y0)
			case sfnt.SegmentOpLineTo:
				d.c.LineTo(x0, y0)
			case sfnt.SegmentOpQuadTo:
				d.c.QuadraticTo(x0, y0, x1, y1)
			case sfnt.SegmentOpCubeTo:
				x2, y2 := p(2)
				d.c.CubicTo(x0, y0, x1, y1, x2, y2)
			}
		}
		at.x += advance
	}
	d.c.ClosePath()
	// Strokes of a glyph may overlap.
	d.c.SetFillRuleWinding()
	d.c.Fill()
	d.c.SetFillRuleEvenOdd()
	return nil
}
