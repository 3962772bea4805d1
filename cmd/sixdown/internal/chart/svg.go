package chart

import (
	"bytes"
	"fmt"
	"html"
	"io"
	"math"
	"strconv"
	"strings"
)

// WriteSVG writes the page as one SVG document of the given width in pixels; 0: as wide as what holds it. Texts
// are texts. In the Auto theme the colours follow what the reader prefers, and are light in print.
func (p *Page) WriteSVG(w io.Writer, theme Theme, width int) error {
	sheets, err := compose(p, math.Inf(1))
	if err != nil {
		return err
	}
	s := sheets[0]
	var b bytes.Buffer
	size := ""
	if width > 0 {
		size = fmt.Sprintf(` width="%d" height="%s"`, width, coordinate(s.h*float64(width)/s.w))
	}
	fmt.Fprintf(&b, `<svg xmlns="http://www.w3.org/2000/svg" class="chart"%s viewBox="0 0 %s %s" role="img">`+"\n", size, coordinate(s.w), coordinate(s.h))
	fmt.Fprintf(&b, "<title>%s</title>\n", html.EscapeString(s.title))
	b.WriteString("<style>\n" + styleSheet(s, theme) + "</style>\n")
	fmt.Fprintf(&b, `<rect class="f%d" width="%s" height="%s"/>`+"\n", paper, coordinate(s.w), coordinate(s.h))
	for _, m := range s.marks {
		s.writeMark(&b, m)
	}
	b.WriteString("</svg>\n")
	_, err = w.Write(b.Bytes())
	return err
}

// styleSheet gives the inks that a scene uses their colours: a class s for what is stroked, f for what is filled.
func styleSheet(s *scene, theme Theme) string {
	stroked, filled := map[ink]bool{}, map[ink]bool{paper: true}
	for _, m := range s.marks {
		switch m := m.(type) {
		case line:
			stroked[m.pen.ink] = true
		case shape:
			filled[m.ink] = true
		case disc:
			filled[m.ink] = true
		case text:
			filled[m.ink] = true
		}
	}
	var b strings.Builder
	b.WriteString(".chart text{font-family:'Liberation Sans',Arimo,Arial,Helvetica,sans-serif}\n")
	b.WriteString(".chart polyline{fill:none;stroke-linejoin:round}\n")
	colours := func(t Theme) {
		for i := range heat0 + heatSteps {
			c := t.colour(i)
			if stroked[i] {
				fmt.Fprintf(&b, ".chart .s%d{stroke:#%02x%02x%02x}\n", i, c.R, c.G, c.B)
			}
			if filled[i] {
				fmt.Fprintf(&b, ".chart .f%d{fill:#%02x%02x%02x}\n", i, c.R, c.G, c.B)
			}
		}
	}
	if theme == Dark {
		colours(Dark)
		return b.String()
	}
	colours(Light)
	if theme == Auto {
		b.WriteString("@media screen and (prefers-color-scheme:dark){\n")
		colours(Dark)
		b.WriteString("}\n")
	}
	return b.String()
}

func (s *scene) writeMark(b *bytes.Buffer, m mark) {
	switch m := m.(type) {
	case line:
		fmt.Fprintf(b, `<polyline class="s%d" stroke-width="%s"`, m.pen.ink, coordinate(m.pen.width))
		if m.pen.dash != nil {
			var d []string
			for _, v := range m.pen.dash {
				d = append(d, coordinate(v))
			}
			fmt.Fprintf(b, ` stroke-dasharray="%s"`, strings.Join(d, " "))
		}
		b.WriteString(` points="`)
		writePoints(b, m.points)
		b.WriteString("\"/>\n")
	case shape:
		fmt.Fprintf(b, `<path class="f%d" fill-rule="evenodd" d="`, m.ink)
		for _, loop := range m.loops {
			b.WriteByte('M')
			writePoints(b, loop)
			b.WriteByte('Z')
		}
		b.WriteString("\"/>\n")
	case disc:
		fmt.Fprintf(b, `<circle class="f%d" cx="%s" cy="%s" r="%s"/>`+"\n", m.ink, coordinate(m.at.x), coordinate(m.at.y), coordinate(m.r))
	case text:
		fmt.Fprintf(b, `<text class="f%d" x="%s" y="%s" font-size="%s"`, m.ink, coordinate(m.at.x), coordinate(m.at.y), coordinate(m.size))
		if m.bold {
			b.WriteString(` font-weight="bold"`)
		}
		if m.anchor != start {
			fmt.Fprintf(b, ` text-anchor="%s"`, [...]string{"start", "middle", "end"}[m.anchor])
		}
		// Where the viewer lacks the font, another takes no more room than this one.
		fmt.Fprintf(b, ` textLength="%s" lengthAdjust="spacingAndGlyphs">%s</text>`+"\n", coordinate(s.box(m).w), html.EscapeString(m.text))
	}
}

func writePoints(b *bytes.Buffer, points []point) {
	for i, p := range points {
		if i > 0 {
			b.WriteByte(' ')
		}
		b.WriteString(coordinate(p.x) + "," + coordinate(p.y))
	}
}

// coordinate writes a length with two decimals, without zeros at the end.
func coordinate(v float64) string {
	s := strings.TrimRight(strings.TrimRight(strconv.FormatFloat(v, 'f', 2, 64), "0"), ".")
	if s == "-0" {
		return "0"
	}
	return s
}
