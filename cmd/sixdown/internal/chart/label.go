package chart

import "math"

// labels puts names and remarks into a frame where they cover no curve and no other writing.
type labels struct {
	scene  *scene
	in     rect      // the frame
	curves [][]point // that are not to be covered
	taken  []rect    // where there is writing
}

// Distances in page units.
const (
	clear    = 3  // between writing and what is not its own
	apart    = 22 // from another curve, where a name is no longer mistaken for that curve's
	nearLine = 4  // from a name to its own curve
)

// name writes a curve's name beside it. near is where along the frame it is best, negative: anywhere. It reports
// false, and writes nothing, where every place is taken.
func (l *labels) name(own [][]point, c series, near float64) bool {
	// The paler lines of a second design are names' own, but writing as pale is hard to read.
	t := text{text: c.name, size: labelSize, bold: c.bold, anchor: start, ink: c.pen.ink.full()}
	w, h := l.scene.fonts.width(t.text, t.size, t.bold), labelSize*capHeight
	best, found := math.Inf(1), rect{}
	for x := l.in.x + clear + 1; x+w <= l.in.right()-clear; x += 4 {
		top, bottom, ok := span(own, x-1, x+w+1)
		if !ok {
			continue
		}
		for side, y := range []float64{top - nearLine - h, bottom + nearLine} {
			box := rect{x, y, w, h}
			cost, ok := l.cost(box)
			if !ok {
				continue
			}
			cost += float64(side) + 0.5*(bottom-top) // level pieces, and above rather than below
			if l.ambiguous(own, box) {
				cost += 30
			}
			if near >= 0 {
				cost += 0.04 * math.Abs(x+w/2-near)
			}
			if cost < best {
				best, found = cost, box
			}
		}
	}
	if math.IsInf(best, 1) {
		return false
	}
	l.write(t, found)
	return true
}

// remark writes a callout's text near its point; over a curve if there is no other place, and not at all if there
// is none. With led a thin line leads from the point to a text that is no longer plainly of it.
func (l *labels) remark(at point, c callout, led bool) {
	if c.text == "" {
		return
	}
	t := text{text: c.text, size: labelSize, anchor: start, ink: c.ink}
	w, h := l.scene.fonts.width(t.text, t.size, false), labelSize*capHeight
	best, found, far := math.Inf(1), rect{}, 0.0
	for _, r := range []float64{8, 14, 22, 32, 44, 60, 80} {
		for k := range 16 {
			sin, cos := math.Sincos(2 * math.Pi * float64(k) / 16)
			// The box touches the circle of radius r at that angle.
			x, y := at.x+r*cos+(cos-1)/2*w, at.y+r*sin+(sin-1)/2*h
			box := rect{x, y, w, h}
			cost, ok := l.cost(box)
			if !ok {
				cost = 1000
				if !l.free(box) {
					continue
				}
			}
			if cost += r; cost < best {
				best, found, far = cost, box, r
			}
		}
	}
	if math.IsInf(best, 1) {
		return
	}
	if l.write(t, found); led && far > 22 {
		to := point{min(max(at.x, found.x), found.right()), min(max(at.y, found.y-2), found.bottom()+2)}
		l.scene.stroke(at, to, pen{ink: c.ink, width: 0.8})
		l.curves = append(l.curves, []point{at, to})
	}
}

// write puts a text into its box.
func (l *labels) write(t text, box rect) {
	t.at = point{box.x, box.bottom()}
	l.scene.add(t)
	l.taken = append(l.taken, l.scene.box(t))
}

// free reports whether a box lies in the frame and clear of all writing.
func (l *labels) free(box rect) bool {
	roomy := box.grown(clear)
	roomy.h += descent * labelSize
	if !l.in.holds(roomy) {
		return false
	}
	for _, t := range l.taken {
		if t.overlaps(roomy) {
			return false
		}
	}
	return true
}

// cost says how bad a box is: the nearer other curves come, the worse. It is false where one runs through it.
func (l *labels) cost(box rect) (cost float64, ok bool) {
	if !l.free(box) || l.crossed(box.grown(clear-1)) {
		return 0, false
	}
	for _, d := range []float64{6, 10, 14, apart} {
		if n := l.crossings(box.grown(d)); n > 1 {
			cost += 6 * float64(n-1)
		}
	}
	return cost, true
}

// ambiguous reports whether another curve lies between a box and own, or so near to own that a name in the box could
// be either's.
func (l *labels) ambiguous(own [][]point, box rect) bool {
	x := box.x + box.w/2
	top, bottom, ok := span(own, x-0.5, x+0.5)
	if !ok {
		return false
	}
	top, bottom = min(top-5, box.y), max(bottom+5, box.bottom())
	return l.crossings(rect{x - 0.5, top, 1, bottom - top}) > 1
}

// crossed reports whether a curve runs through a box.
func (l *labels) crossed(box rect) bool {
	for _, c := range l.curves {
		if passes(c, box) {
			return true
		}
	}
	return false
}

// crossings counts the curves that run through a box.
func (l *labels) crossings(box rect) int {
	n := 0
	for _, c := range l.curves {
		if passes(c, box) {
			n++
		}
	}
	return n
}

// passes reports whether a polyline runs through a box.
func passes(points []point, box rect) bool {
	for i := 1; i < len(points); i++ {
		a, b := points[i-1], points[i]
		if max(a.x, b.x) < box.x || min(a.x, b.x) > box.right() {
			continue // most are, and this is soon seen
		}
		if _, _, ok := clipSegment(a, b, box); ok {
			return true
		}
	}
	return false
}

// span returns the highest and lowest place of polylines between two x; false if they are not there all along.
func span(parts [][]point, from, to float64) (top, bottom float64, ok bool) {
	top, bottom = math.Inf(1), math.Inf(-1)
	for _, p := range parts {
		for i := 1; i < len(p); i++ {
			if max(p[i-1].x, p[i].x) < from || min(p[i-1].x, p[i].x) > to {
				continue
			}
			if a, b, in := clipSegment(p[i-1], p[i], rect{from, -1e6, to - from, 2e6}); in {
				top, bottom = min(top, a.y, b.y), max(bottom, a.y, b.y)
			}
		}
	}
	for _, p := range parts {
		if len(p) > 0 && p[0].x <= from && p[len(p)-1].x >= to {
			return top, bottom, true
		}
	}
	return 0, 0, false
}
