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

func (p *phasorPanel) height() float64 { return 255 }
func (p *phasorPanel) narrow() bool    { return true }

func (p *phasorPanel) draw(s *scene, room rect) {
	c := p.crossing
	heading := plot{title: "Phasors", note: c.Low + " to " + c.High + " at " + hertz(c.Frequency)}
	taken := heading.heading(s, room)
	in := frameIn(room)
	s.add(line{[]point{{in.x, in.y}, {in.right(), in.y}, {in.right(), in.bottom()}, {in.x, in.bottom()}, {in.x, in.y}}, pen{ink: frame, width: 0.8}})

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
	const padX, padY = 36, 44
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
	y := place(0).y
	s.stroke(point{in.x, y}, point{in.right(), y}, pen{ink: major, width: 0.7})

	l := &labels{scene: s, in: in, taken: taken}
	end := corners[len(corners)-1]
	s.arrow(place(0), place(end), pen{totalPale, 8, nil}, 20)
	l.curves = append(l.curves, []point{place(0), place(end)})
	for i := range c.Parts {
		from, to := place(corners[i]), place(corners[i+1])
		s.arrow(from, to, pen{p.subject.wayInk(i), 2.6, nil}, 10)
		l.curves = append(l.curves, []point{from, to})
	}
	for i, v := range c.Parts {
		name := p.subject.Response.Ways[i].Name
		said := strings.Join([]string{name, decimals(sim.DB(v)-sim.DB(sum), 1) + " dB,", decimals(sim.PhaseDeg(v*cmplx.Conj(sum)), 0) + "°"}, " ")
		if cmplx.Abs(v*turn)*scale < 6 {
			continue // too short an arrow to be named
		}
		l.remark(place((corners[i]+corners[i+1])/2), callout{text: said, ink: p.subject.wayInk(i)})
	}
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
