package chart

import (
	"fmt"
	"io"
	"time"

	"codeberg.org/go-fonts/liberation/liberationsansbold"
	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"codeberg.org/go-pdf/fpdf"
)

// A4 (ISO 216) in points.
const (
	a4Width  = 210 / 25.4 * 72
	a4Height = 297 / 25.4 * 72
)

// WritePDF writes the page as a PDF document on sheets of A4. It carries no date, so that the same page gives the
// same bytes.
func (p *Page) WritePDF(w io.Writer, theme Theme) error {
	const k = a4Width / pageWidth
	sheets, err := compose(p, a4Height/k)
	if err != nil {
		return err
	}
	doc := fpdf.NewCustom(&fpdf.InitType{UnitStr: "pt", Size: fpdf.SizeType{Wd: a4Width, Ht: a4Height}})
	doc.SetCreationDate(time.Unix(0, 0).UTC())
	doc.SetModificationDate(time.Unix(0, 0).UTC())
	doc.SetCatalogSort(true)
	doc.SetTitle(p.Title, true)
	doc.SetMargins(0, 0, 0)
	doc.SetAutoPageBreak(false, 0)
	doc.AddUTF8FontFromBytes("sans", "", liberationsansregular.TTF)
	doc.AddUTF8FontFromBytes("sans", "B", liberationsansbold.TTF)
	doc.SetLineJoinStyle("round")
	d := pdfDrawer{doc: doc, k: k, theme: theme}
	for _, s := range sheets {
		doc.AddPage()
		d.fonts = s.fonts
		if theme == Dark {
			d.draw(shape{[][]point{{{0, 0}, {s.w, 0}, {s.w, s.h}, {0, s.h}}}, paper})
		}
		for _, m := range s.marks {
			d.draw(m)
		}
	}
	if err := doc.Output(w); err != nil {
		return fmt.Errorf("chart: PDF: %w", err)
	}
	return nil
}

// A pdfDrawer draws marks in points, k of them to a page unit.
type pdfDrawer struct {
	doc   *fpdf.Fpdf
	k     float64
	theme Theme
	fonts *fonts
}

func (d *pdfDrawer) trace(points []point) {
	for i, p := range points {
		if i == 0 {
			d.doc.MoveTo(p.x*d.k, p.y*d.k)
		} else {
			d.doc.LineTo(p.x*d.k, p.y*d.k)
		}
	}
}

func (d *pdfDrawer) draw(m mark) {
	switch m := m.(type) {
	case line:
		c := d.theme.colour(m.pen.ink)
		d.doc.SetDrawColor(int(c.R), int(c.G), int(c.B))
		d.doc.SetLineWidth(m.pen.width * d.k)
		dash := make([]float64, len(m.pen.dash))
		for i, v := range m.pen.dash {
			dash[i] = v * d.k
		}
		d.doc.SetDashPattern(dash, 0)
		d.trace(m.points)
		d.doc.DrawPath("D")
	case shape:
		d.fill(m.ink)
		for _, loop := range m.loops {
			d.trace(loop)
			d.doc.ClosePath()
		}
		d.doc.DrawPath("F*")
	case disc:
		d.fill(m.ink)
		d.doc.Circle(m.at.x*d.k, m.at.y*d.k, m.r*d.k, "F")
	case text:
		d.write(m)
	}
}

func (d *pdfDrawer) fill(i ink) {
	c := d.theme.colour(i)
	d.doc.SetFillColor(int(c.R), int(c.G), int(c.B))
}

func (d *pdfDrawer) write(t text) {
	style := ""
	if t.bold {
		style = "B"
	}
	d.doc.SetFont("sans", style, t.size*d.k)
	c := d.theme.colour(t.ink)
	d.doc.SetTextColor(int(c.R), int(c.G), int(c.B))
	d.doc.Text(d.fonts.from(t)*d.k, t.at.y*d.k, t.text)
}
