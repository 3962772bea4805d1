package chart

import (
	"math"
	"math/cmplx"
	"strings"

	"sixdown/sim"
)

// Phasors draws, for each crossing, what each way gives there as an arrow, tip to tail; together they make the sum,
// which points to the right. It needs a sum.
func Phasors(s *Subject) []Panel {
	var all []Panel
	for _, c := range s.Crossing {
		all = append(all, &phasorPanel{subject: s, crossing: c})
	}
	return all
}

type phasorPanel struct {
	subject  *Subject
	crossing Crossing
}

func (p *phasorPanel) height() float64 { return 196 }
func (p *phasorPanel) narrow() bool    { return true }

func (p *phasorPanel) draw(s *scene, room rect) {
	c := p.crossing
	heading := plot{title: p.subject.named("Phasors"), note: c.Low + " to " + c.High + " at " + hertz(c.Frequency)}
	taken := heading.heading(s, room)
	in := frameIn(room)
	var sum complex128
	for _, v := range c.Parts {
		sum += v
	}
	turn := cmplx.Conj(sum)
	if sum == 0 {
		turn = 1
	}
	turn /= complex(cmplx.Abs(turn), 0)
	// Corners of the chain of arrows, the first at the origin.
	corners := []complex128{0}
	for _, v := range c.Parts {
		corners = append(corners, corners[len(corners)-1]+v*turn)
	}
	left, right, low, high := 0.0, 0.0, 0.0, 0.0
	for _, v := range corners {
		left, right = min(left, real(v)), max(right, real(v))
		low, high = min(low, imag(v)), max(high, imag(v))
	}
	const padX, padY = 36, 36
	scale := math.Inf(1)
	if right > left {
		scale = min(scale, (in.w-2*padX)/(right-left))
	}
	if high > low {
		scale = min(scale, (in.h-2*padY)/(high-low))
	}
	if math.IsInf(scale, 1) {
		return // nothing sounds
	}
	place := func(v complex128) point {
		return point{in.x + in.w/2 + (real(v)-(left+right)/2)*scale, in.y + in.h/2 - (imag(v)-(low+high)/2)*scale}
	}
	polarGrid(s, in, place(0), cmplx.Abs(sum)*scale)

	s.frame(in)
	said := "broad: the sum; circles 6 dB apart"
	if !c.OneTimeBase {
		said = "not on one time base: the angles mean nothing"
	}
	key := text{point{in.x + 7, in.bottom() - 7}, said, noteSize - 1, false, start, faint}
	s.add(key)
	l := &labels{scene: s, in: in, taken: append(taken, s.box(key))}
	end := corners[len(corners)-1]
	s.arrow(place(0), place(end), pen{totalPale, 8, nil}, 20)
	l.curves = append(l.curves, edges(place(0), place(end), 8)...)
	for i := range c.Parts {
		from, to := place(corners[i]), place(corners[i+1])
		s.arrow(from, to, pen{p.subject.wayInk(i), 2.6, nil}, 10)
		l.curves = append(l.curves, edges(from, to, 4)...)
	}
	for i, v := range c.Parts {
		name := p.subject.Response.Ways[i].Name
		said := strings.Join([]string{name, decimals(sim.DB(v)-sim.DB(sum), 1) + " dB,", decimals(sim.PhaseDeg(v*cmplx.Conj(sum)), 0) + "°"}, " ")
		if cmplx.Abs(v*turn)*scale < 6 {
			continue // too short an arrow to be named
		}
		l.remark(place((corners[i]+corners[i+1])/2), callout{text: said, ink: p.subject.wayInk(i)}, false)
	}
}

// edges returns an arrow's shaft and the lines beside it that its head reaches, which nothing written may touch.
func edges(from, to point, reach float64) [][]point {
	length := math.Hypot(to.x-from.x, to.y-from.y)
	if length == 0 {
		return nil
	}
	x, y := -reach*(to.y-from.y)/length, reach*(to.x-from.x)/length
	return [][]point{{from, to}, {{from.x + x, from.y + y}, {to.x + x, to.y + y}}, {{from.x - x, from.y - y}, {to.x - x, to.y - y}}}
}

// polarGrid draws rays each 30° from a centre, and circles about it: one of radius r, and others 6.02 dB apart.
func polarGrid(s *scene, in rect, centre point, r float64) {
	far := math.Hypot(in.w, in.h)
	for k := range 12 {
		sin, cos := math.Sincos(float64(k) * math.Pi / 6)
		if a, b, ok := clipSegment(centre, point{centre.x + far*cos, centre.y + far*sin}, in); ok {
			s.stroke(a, b, pen{ink: minor, width: 0.7})
		}
	}
	for _, k := range []float64{0.25, 0.5, 1, 2} {
		for _, part := range clipped(circle(centre, k*r), in) {
			w := pen{ink: minor, width: 0.7}
			if k == 1 {
				w.ink = major
			}
			s.add(line{part, w})
		}
	}
	if a, b, ok := clipSegment(centre, point{centre.x + far, centre.y}, in); ok {
		s.stroke(a, b, pen{ink: major, width: 0.7})
	}
}

// circle returns a circle as a polyline.
func circle(centre point, r float64) []point {
	const sides = 120
	points := make([]point, sides+1)
	for i := range points {
		sin, cos := math.Sincos(2 * math.Pi * float64(i%sides) / sides)
		points[i] = point{centre.x + r*cos, centre.y + r*sin}
	}
	return points
}

// arrow draws an arrow with a head of the given length; a short arrow has a shorter head.
func (s *scene) arrow(from, to point, p pen, head float64) {
	dx, dy := to.x-from.x, to.y-from.y
	length := math.Hypot(dx, dy)
	if length < 0.5 {
		return
	}
	dx, dy = dx/length, dy/length
	head = min(head, 0.6*length)
	wide := 0.42 * head
	neck := point{to.x - head*dx, to.y - head*dy}
	s.stroke(from, point{neck.x + 0.5*dx, neck.y + 0.5*dy}, p)
	s.add(shape{[][]point{{to, {neck.x - wide*dy, neck.y + wide*dx}, {neck.x + wide*dy, neck.y - wide*dx}}}, p.ink})
}
