package chart

import (
	"fmt"
	"io"
	"math"

	"git.sr.ht/~sbinet/gg"
	"golang.org/x/image/font/opentype"
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

func (d *pngDrawer) write(t text) error {
	face, err := opentype.NewFace(d.fonts.face(t.bold), &opentype.FaceOptions{Size: t.size * d.k, DPI: 72})
	if err != nil {
		return fmt.Errorf("chart: the font: %w", err)
	}
	defer face.Close() // it holds nothing
	d.c.SetFontFace(face)
	d.c.SetColor(d.theme.colour(t.ink))
	x := t.at.x
	switch w := d.fonts.width(t.text, t.size, t.bold); t.anchor {
	case middle:
		x -= w / 2
	case end:
		x -= w
	}
	d.c.DrawString(t.text, x*d.k, t.at.y*d.k)
	return nil
}
