package chart

import (
	"math"
	"strings"
)

// A Page is what is put on one or more sheets.
type Page struct {
	Title   string
	Caption []string // the numbers to take away; lines too long are broken after a semicolon
	Panels  []Panel  // below each other; two narrow ones side by side
}

// A Panel is one picture of a Page. The constructors of this package make them.
type Panel interface {
	height() float64 // in page units, as high as it is best
	narrow() bool    // it does with half the width
	draw(s *scene, room rect)
}

// Sizes in page units.
const (
	pageWidth   = 760.0
	margin      = 22.0
	panelGap    = 12.0
	columnGap   = 20.0
	titleSize   = 18.0
	titleSpace  = 30.0
	captionSize = 11.5
	captionLine = 16.0
)

// compose lays the page out as scenes no higher than limit, unless a panel alone is.
func compose(p *Page, limit float64) ([]*scene, error) {
	f, err := newFonts()
	if err != nil {
		return nil, err
	}
	c := &composer{page: p, fonts: f, limit: limit}
	c.sheet()
	if p.Title != "" {
		c.now.add(text{point{margin, c.y + titleSize*capHeight}, p.Title, titleSize, true, start, writing})
		c.y += titleSpace
	}
	for _, l := range f.folded(p.Caption, captionSize, pageWidth-2*margin) {
		c.now.add(text{point{margin, c.y + captionSize*capHeight}, l, captionSize, false, start, faint})
		c.y += captionLine
	}
	if len(p.Caption) > 0 {
		c.y += 8
	}
	for i := 0; i < len(p.Panels); {
		i += c.row(p.Panels[i:])
	}
	c.finish()
	return c.sheets, nil
}

// A composer fills sheets from the top down.
type composer struct {
	page   *Page
	fonts  *fonts
	limit  float64
	sheets []*scene
	now    *scene
	y      float64
}

// sheet begins a new sheet.
func (c *composer) sheet() {
	c.now = &scene{w: pageWidth, title: c.page.Title, fonts: c.fonts}
	c.sheets = append(c.sheets, c.now)
	c.y = margin
}

// finish ends the present sheet.
func (c *composer) finish() {
	c.now.h = math.Ceil(c.y - panelGap + margin - 4)
	if !math.IsInf(c.limit, 1) {
		c.now.h = c.limit
	}
}

// row sets the first panel, or the first two if both are narrow, and returns how many it has set.
func (c *composer) row(panels []Panel) int {
	n, h := 1, panels[0].height()
	if len(panels) > 1 && panels[0].narrow() && panels[1].narrow() {
		n, h = 2, max(h, panels[1].height())
	}
	if c.y+h > c.limit-margin && c.y > margin {
		c.finish()
		c.sheet()
	}
	w := (pageWidth - 2*margin - float64(n-1)*columnGap) / float64(n)
	for k := range n {
		panels[k].draw(c.now, rect{margin + float64(k)*(w+columnGap), c.y, w, h})
	}
	c.y += h + panelGap
	return n
}

// folded breaks lines that are wider than width, after a semicolon where there is one.
func (f *fonts) folded(lines []string, size, width float64) []string {
	var out []string
	for _, l := range lines {
		now := ""
		for _, piece := range strings.SplitAfter(l, "; ") {
			if now != "" && f.width(strings.TrimSpace(now+piece), size, false) > width {
				out = append(out, strings.TrimSpace(now))
				now = ""
			}
			now += piece
		}
		out = append(out, strings.TrimSpace(now))
	}
	return out
}
