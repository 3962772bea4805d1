package chart

import (
	"math"
	"slices"
	"testing"

	"sixdown/sim"
)

// pages are those that the layout is tested with.
func pages(t testing.TB) map[string]*Page {
	freqs := grid(200)
	a, b := twoWay(t, freqs, 0), twoWay(t, freqs, 35)
	other := twoWay(t, freqs, 80)
	other.Name = "B"
	named := *b
	named.Name = "A"
	return map[string]*Page{
		"two-way in phase":     pageOf(t, a),
		"two-way out of phase": pageOf(t, b),
		"two-way opposed":      pageOf(t, twoWay(t, freqs, 150)),
		"three-way":            pageOf(t, threeWay(t, freqs)),
		"two designs":          pageOf(t, &named, other),
		"spread":               spreadPage(freqs),
		"around":               {Title: "Around", Panels: Around(falling(freqs), "dB SPL at 2 m for 2.83 V")},
		"twice the same":       pageOf(t, &named, func() *Subject { c := named; c.Name = "B"; return &c }()),
	}
}

// falling are curves that fall the more, the more of the sphere they are of.
func falling(freqs []float64) *sim.Curves {
	c := &sim.Curves{Freqs: freqs, Basis: "model"}
	for _, f := range freqs {
		x := f / 5000
		c.OnAxis = append(c.OnAxis, 85)
		c.ListeningWindow = append(c.ListeningWindow, 85-x)
		c.EarlyReflections = append(c.EarlyReflections, 85-2*x)
		c.SoundPower = append(c.SoundPower, 85-3*x)
		c.InRoom = append(c.InRoom, 85-2.3*x)
		c.EarlyReflectionsDI = append(c.EarlyReflectionsDI, x)
		c.SoundPowerDI = append(c.SoundPowerDI, 2*x)
	}
	return c
}

// spreadPage is a page of the panels for tolerances and for designs compared, of curves made up for it.
func spreadPage(freqs []float64) *Page {
	fan := func(name string, at float64) Fan {
		f := Fan{Name: name, Freqs: freqs}
		for _, hz := range freqs {
			level, wide := 80-5*math.Abs(math.Log2(hz/at)), 0.1+1/(1+math.Abs(hz/2000-1))
			f.Nominal = append(f.Nominal, level)
			f.Low, f.InnerLow = append(f.Low, level-wide), append(f.InnerLow, level-wide/3)
			f.InnerTop, f.Top = append(f.InnerTop, level+wide/3), append(f.Top, level+wide)
		}
		return f
	}
	fans := []Fan{fan("sum", 1000), fan("low", 300), fan("high", 5000)}
	band := [2]float64{200, 20e3}
	bars := []Bar{{"C1", 0.1, "+0.100 dB at 2.1 kHz"}, {"L1", 0.08, "-0.080 dB at 1.4 kHz"}, {"R1", 0.001, "+0.001 dB at 12 kHz"}}
	marks := []Mark{{Across: 6, Up: 1.2}, {6, 0.8, "3"}, {7, 0.5, "2"}, {Across: 8, Up: 0.9}, {9, 0.3, "1"}}
	return &Page{Title: "Spread", Panels: []Panel{
		Fans(fans, true, 1, band, "half of them, and 90 %"), FanDeviation(&fans[0], 1, band),
		Bars("Sensitivity", "dB for 1 %", " dB", bars), Frontier("Error", "and parts", " parts", " dB", marks, true),
	}}
}

// TestWritingIsClear: on every page no two texts run into each other, and all lie on the sheet with a margin.
func TestWritingIsClear(t *testing.T) {
	for name, p := range pages(t) {
		for _, limit := range []float64{math.Inf(1), 1075} {
			sheets, err := compose(p, limit)
			if err != nil {
				t.Fatal(err)
			}
			for _, s := range sheets {
				sheet := rect{0, 0, s.w, s.h}.grown(-8)
				var texts []text
				for _, m := range s.marks {
					w, ok := m.(text)
					if !ok {
						continue
					}
					if !sheet.holds(s.box(w)) {
						t.Errorf("%s: %q at %v reaches the edge of the sheet", name, w.text, w.at)
					}
					for _, o := range texts {
						if s.box(w).overlaps(s.box(o)) {
							t.Errorf("%s: %q and %q run into each other at %v", name, w.text, o.text, w.at)
						}
					}
					texts = append(texts, w)
				}
				if len(texts) < 20 {
					t.Errorf("%s: a sheet has %d texts only", name, len(texts))
				}
			}
		}
	}
}

// TestCurvesStayInTheirFrames draws each plot alone and looks at every point of its curves.
func TestCurvesStayInTheirFrames(t *testing.T) {
	const slack = 1e-9 // rounding of the clipping
	for name, p := range pages(t) {
		for _, panel := range p.Panels {
			pp, ok := panel.(*plotPanel)
			if !ok {
				continue
			}
			room := rect{50, 60, 700, panel.height()}
			s := emptyScene(t)
			in := frameIn(room)
			for _, c := range pp.series {
				parts := pp.curve(in, c)
				if len(parts) == 0 {
					t.Errorf("%s, %s: the curve %q is not to be seen", name, pp.title, c.name)
				}
				for _, part := range parts {
					for _, v := range part {
						if !in.grown(slack).holds(rect{v.x, v.y, 0, 0}) {
							t.Fatalf("%s, %s: the curve %q leaves its frame at %v", name, pp.title, c.name, v)
						}
					}
				}
			}
			panel.draw(s, room)
			for _, m := range s.marks {
				if l, ok := m.(line); ok {
					for _, v := range l.points {
						if !room.grown(slack).holds(rect{v.x, v.y, 0, 0}) {
							t.Fatalf("%s, %s: a line is drawn at %v, outside the panel", name, pp.title, v)
						}
					}
				}
			}
		}
	}
}

// TestNamesAreReadable: no name crosses a curve, and each curve's name is there once.
func TestNamesAreReadable(t *testing.T) {
	for name, p := range pages(t) {
		for _, panel := range p.Panels {
			pp, ok := panel.(*plotPanel)
			if !ok {
				continue
			}
			room := rect{50, 60, 700, panel.height()}
			s := emptyScene(t)
			panel.draw(s, room)
			in := frameIn(room)
			for _, c := range pp.series {
				if c.name == "" {
					continue
				}
				n := 0
				for _, m := range s.marks {
					w, ok := m.(text)
					if !ok || w.text != c.name {
						continue
					}
					n++
					for _, o := range pp.series {
						for _, part := range pp.curve(in, o) {
							if box := s.box(w); in.holds(box) && passes(part, rect{box.x, box.y, box.w, capHeight * w.size}) {
								t.Errorf("%s, %s: the name %q crosses the curve %q", name, pp.title, c.name, o.name)
							}
						}
					}
				}
				if n != 1 {
					t.Errorf("%s, %s: the name %q is written %d times", name, pp.title, c.name, n)
				}
			}
		}
	}
}

// TestPagesBreakBetweenPanels: the sheets of a page in print hold all that the one sheet on a screen holds, and each
// no more than its height.
func TestPagesBreakBetweenPanels(t *testing.T) {
	p := pageOf(t, threeWay(t, grid(200)))
	count := func(limit float64) (sheets, marks int) {
		all, err := compose(p, limit)
		if err != nil {
			t.Fatal(err)
		}
		for _, s := range all {
			marks += len(s.marks)
			for _, m := range s.marks {
				if l, ok := m.(line); ok && slices.ContainsFunc(l.points, func(v point) bool { return v.y > s.h-margin/2 }) {
					t.Errorf("limit %g: a line reaches the foot of a sheet of height %g", limit, s.h)
				}
			}
		}
		return len(all), marks
	}
	one, whole := count(math.Inf(1))
	some, parts := count(1075)
	if one != 1 || some < 2 || parts != whole {
		t.Errorf("%d sheet with %d marks on a screen, %d with %d in print", one, whole, some, parts)
	}
}

func emptyScene(t testing.TB) *scene {
	t.Helper()
	f, err := newFonts()
	if err != nil {
		t.Fatal(err)
	}
	return &scene{w: 800, h: 800, fonts: f}
}

// TestWidths: advances of Liberation Sans are those of Helvetica and Arial, whose digits are 1139/2048 wide (1139 in
// the font's hmtx table; Adobe's font metrics of Helvetica give 556/1000), and whose M is 1706/2048.
func TestWidths(t *testing.T) {
	f := emptyScene(t).fonts
	for _, c := range []struct {
		text string
		bold bool
		want float64
	}{
		{"0123456789", false, 10 * 0.556},
		{"0123456789", true, 10 * 0.556},
		{"M", false, 0.833},
		{"", false, 0},
	} {
		// Half a unit of the last figure of Adobe's table for each letter.
		if got := f.width(c.text, 100, c.bold); math.Abs(got-100*c.want) > 0.06*float64(len(c.text)) {
			t.Errorf("%q is %g wide, want %g", c.text, got, 100*c.want)
		}
	}
	for _, r := range "°Ωµ−–|" {
		if g, err := f.regular.GlyphIndex(&f.buf, r); g == 0 || err != nil {
			t.Errorf("the font lacks %q", r)
		}
	}
}

// TestRemarkFarFromItsPoint: where curves leave a remark no place near its point, a line leads to it.
func TestRemarkFarFromItsPoint(t *testing.T) {
	for _, c := range []struct {
		walls []float64 // heights of curves from edge to edge, in page units; the point is at 100
		lines int
	}{{nil, 0}, {[]float64{85, 92, 108, 115, 122, 129}, 1}} {
		s := emptyScene(t)
		l := &labels{scene: s, in: rect{0, 0, 400, 200}}
		for _, y := range c.walls {
			l.curves = append(l.curves, []point{{0, y}, {400, y}})
		}
		l.remark(point{200, 100}, callout{text: "here"}, true)
		texts, lines := 0, 0
		for _, m := range s.marks {
			switch m := m.(type) {
			case text:
				texts++
			case line:
				lines++
				if m.points[0] != (point{200, 100}) || !s.box(s.marks[0].(text)).grown(2).holds(rect{m.points[1].x, m.points[1].y, 0, 0}) {
					t.Errorf("%v: the line is from the point to its text, and goes %v", c.walls, m.points)
				}
			}
		}
		if texts != 1 || lines != c.lines {
			t.Errorf("%v: %d texts and %d lines, want 1 and %d", c.walls, texts, lines, c.lines)
		}
	}
}
