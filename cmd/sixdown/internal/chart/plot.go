package chart

import (
	"math"
	"slices"
)

// A plot is a frame with two axes, curves in it and what is said about them.
type plot struct {
	title, note string // the heading, and what else must be said of it
	x, y        axis
	areas       []area // under the grid
	series      []series
	callouts    []callout
	bare        bool // the areas are not to be crossed by grid lines
}

// A series is a curve. Not-a-number is a gap in it.
type series struct {
	name string // written at the curve; "": not at all
	x, y []float64
	pen  pen
	bold bool
	near float64 // x around which the name is best put; 0: anywhere
}

// A callout is a point with a remark.
type callout struct {
	x, y float64
	text string
	ink  ink
}

// An area is a filled region, in the plot's values.
type area struct {
	loops [][]point
	ink   ink
}

// Sizes in page units.
const (
	headingSize  = 13
	noteSize     = 11
	tickSize     = 11
	labelSize    = 11.5
	headingSpace = 22 // above a frame
	tickSpace    = 19 // below a frame, for the numbers
	tickGap      = 6
	axisWidth    = 42 // left of a frame, for the numbers
)

// frameIn returns where the frame lies in the room that a plot gets.
func frameIn(room rect) rect {
	return rect{room.x + axisWidth, room.y + headingSpace, room.w - axisWidth, room.h - headingSpace - tickSpace}
}

// place returns where a pair of values lies in the frame.
func (p *plot) place(in rect, x, y float64) point {
	return point{in.x + p.x.part(x)*in.w, in.bottom() - p.y.part(y)*in.h}
}

// draw draws the plot in room.
func (p *plot) draw(s *scene, room rect) {
	in := frameIn(room)
	taken := p.heading(s, room)
	for _, a := range p.areas {
		sh := shape{ink: a.ink}
		for _, loop := range a.loops {
			placed := make([]point, len(loop), len(loop)+1)
			for i, v := range loop {
				placed[i] = p.place(in, v.x, v.y)
			}
			if placed = thinned(append(placed, placed[0])); len(placed) > 3 {
				sh.loops = append(sh.loops, placed[:len(placed)-1])
			}
		}
		s.add(sh)
	}
	p.grid(s, in)
	labels := &labels{scene: s, in: in, taken: taken}
	for _, c := range p.series {
		for _, part := range p.curve(in, c) {
			labels.curves = append(labels.curves, part)
			s.add(line{part, c.pen})
		}
	}
	var seen []callout
	for _, c := range p.callouts {
		at := p.place(in, c.x, c.y)
		if !in.grown(1e-6).holds(rect{at.x, at.y, 0, 0}) {
			continue // of a frequency beyond the span that is drawn, or of nothing at all
		}
		seen = append(seen, c)
		s.add(disc{at, 3.2, c.ink})
		labels.taken = append(labels.taken, rect{at.x - 4, at.y - 4, 8, 8})
	}
	for _, c := range seen {
		labels.remark(p.place(in, c.x, c.y), c, true)
	}
	var rest []series
	for _, c := range p.series {
		parts := p.curve(in, c)
		if c.name == "" || len(parts) == 0 || labels.name(parts, c, p.hint(in, c)) {
			continue
		}
		rest = append(rest, c)
	}
	legend(s, room, taken, rest)
}

// hint returns where along the frame a curve's name is best put, -1: anywhere.
func (p *plot) hint(in rect, c series) float64 {
	if c.near == 0 {
		return -1
	}
	return p.place(in, c.near, 1).x
}

// curve returns a series as polylines in the frame.
func (p *plot) curve(in rect, c series) [][]point {
	var parts [][]point
	var run []point
	for i := range c.x {
		v := p.place(in, c.x[i], c.y[i])
		if math.IsNaN(v.y) || math.IsInf(v.y, 0) {
			parts = append(parts, clipped(thinned(run), in)...)
			run = nil
			continue
		}
		run = append(run, v)
	}
	return append(parts, clipped(thinned(run), in)...)
}

// grid draws the lines, the frame and the numbers.
func (p *plot) grid(s *scene, in rect) {
	within := func(part float64) bool { return part > 1e-6 && part < 1-1e-6 } // the frame draws its own edges
	rule := func(a *axis, v float64, i ink, across bool) {
		part := a.part(v)
		if !within(part) {
			return
		}
		if w := (pen{ink: i, width: 0.7}); across {
			y := in.bottom() - part*in.h
			s.stroke(point{in.x, y}, point{in.right(), y}, w)
		} else {
			x := in.x + part*in.w
			s.stroke(point{x, in.y}, point{x, in.bottom()}, w)
		}
	}
	if p.bare {
		s.frame(in)
		p.numbers(s, in)
		return
	}
	for _, v := range p.x.minor {
		rule(&p.x, v, minor, false)
	}
	for _, v := range p.y.minor {
		rule(&p.y, v, minor, true)
	}
	for _, t := range p.x.ticks {
		rule(&p.x, t.at, major, false)
	}
	for _, t := range p.y.ticks {
		rule(&p.y, t.at, major, true)
	}
	s.frame(in)
	p.numbers(s, in)
}

// numbers writes the axes' numbers; one that would run into its neighbour is left out.
func (p *plot) numbers(s *scene, in rect) {
	// The last number, which has the unit, and the first go before those between.
	order := make([]int, 0, len(p.y.ticks))
	for i := range p.y.ticks {
		order = append(order, (i+len(p.y.ticks)-1)%len(p.y.ticks))
	}
	var written []float64
	for _, i := range order {
		t := p.y.ticks[i]
		y := in.bottom() - p.y.part(t.at)*in.h
		// A number at an end is moved in, so that it stays clear of the heading and of the other axis.
		base := min(max(y+tickSize*capHeight/2, in.y+tickSize*capHeight), in.bottom()+0.5)
		if slices.ContainsFunc(written, func(w float64) bool { return math.Abs(w-base) < tickSize+1 }) {
			continue
		}
		written = append(written, base)
		s.add(text{point{in.x - tickGap, base}, t.text, tickSize, false, end, faint})
	}
	var before rect
	for i, t := range p.x.ticks {
		w := text{point{in.x + p.x.part(t.at)*in.w, in.bottom() + tickSpace - 5}, t.text, tickSize, false, middle, faint}
		if half := s.fonts.width(t.text, tickSize, false) / 2; w.at.x+half > in.right()+4 {
			w.at.x, w.anchor = in.right(), end
		} else if w.at.x-half < in.x-4 {
			w.at.x, w.anchor = in.x, start
		}
		box := s.box(w)
		if i > 0 && before.grown(7).overlaps(box) {
			continue
		}
		// The last one has the unit, so what comes before makes room for it.
		if n := len(p.x.ticks) - 1; i < n {
			l := text{point{in.right(), w.at.y}, p.x.ticks[n].text, tickSize, false, end, faint}
			if p.x.part(p.x.ticks[n].at) > 0.95 && s.box(l).grown(3).overlaps(box) {
				continue
			}
		}
		before = box
		s.add(w)
	}
}

// heading writes the title and the note above the frame, and returns where they stand.
func (p *plot) heading(s *scene, room rect) []rect {
	t := text{point{room.x + axisWidth, room.y + headingSpace - 8}, p.title, headingSize, true, start, writing}
	s.add(t)
	box := s.box(t)
	n := text{point{box.right() + 8, t.at.y}, p.note, noteSize, false, start, faint}
	s.add(n)
	return []rect{box, s.box(n)}
}

// legend writes the names that found no place at their curves at the right of the heading, each after a piece of
// its line.
func legend(s *scene, room rect, taken []rect, rest []series) {
	x, y := room.right(), room.y+headingSpace-8
	for i := len(rest) - 1; i >= 0; i-- {
		t := text{point{x, y}, rest[i].name, noteSize, false, end, faint}
		from := s.box(t).x
		s.add(t)
		s.stroke(point{from - 28, y - 4}, point{from - 5, y - 4}, rest[i].pen)
		x = from - 40
	}
}

// thinned leaves out of a polyline what is within a fortieth of a unit of the straight line between what stays.
//
// D. H. Douglas and T. K. Peucker, "Algorithms for the reduction of the number of points required to represent a
// digitized line or its caricature", Cartographica 10(2), 1973.
func thinned(points []point) []point {
	const slack = 0.025
	if len(points) < 3 {
		return points
	}
	keep := make([]bool, len(points))
	keep[0], keep[len(points)-1] = true, true
	todo := [][2]int{{0, len(points) - 1}}
	for len(todo) > 0 {
		a, b := todo[len(todo)-1][0], todo[len(todo)-1][1]
		todo = todo[:len(todo)-1]
		dx, dy := points[b].x-points[a].x, points[b].y-points[a].y
		length := math.Hypot(dx, dy)
		far, at := slack, -1
		for i := a + 1; i < b; i++ {
			ex, ey := points[i].x-points[a].x, points[i].y-points[a].y
			d := math.Hypot(ex, ey)
			if length > 0 {
				d = math.Abs(ex*dy-ey*dx) / length
			}
			if d > far {
				far, at = d, i
			}
		}
		if at >= 0 {
			keep[at] = true
			todo = append(todo, [2]int{a, at}, [2]int{at, b})
		}
	}
	var kept []point
	for i, k := range keep {
		if k {
			kept = append(kept, points[i])
		}
	}
	return kept
}
