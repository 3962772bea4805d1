package chart

import "math"

// PolarCurves draws maps' levels round the loudspeaker, a curve for each of the few frequencies, 0° to the top and positive
// angles to the right. Of a map that ends at ±90° it draws the front half. All are on one scale, whose rim is above the
// loudest of all and 5 dB at the least.
func PolarCurves(maps ...*PolarMap) ([]Panel, error) {
	rim := max(polarRing, polarRing*math.Ceil(loudest(maps)/polarRing))
	var panels []Panel
	for _, m := range maps {
		if err := m.check(1); err != nil {
			return nil, err
		}
		panels = append(panels, &polarCurves{m, rim})
	}
	return panels, nil
}

type polarCurves struct {
	*PolarMap
	rim float64 // dB
}

// Levels in dB: how far the rim is above the middle, and the rings are apart.
const (
	polarRange = 30
	polarRing  = 5
)

func (p *polarCurves) half() bool {
	return p.AngleDeg[0] >= -90 && p.AngleDeg[len(p.AngleDeg)-1] <= 90
}

func (p *polarCurves) height() float64 {
	if p.half() {
		return 212
	}
	return 362
}

func (p *polarCurves) narrow() bool { return true }

func (p *polarCurves) draw(s *scene, room rect) {
	heading := plot{title: p.Title, note: p.Note}
	heading.heading(s, room)
	const top, foot, side = headingSpace + 16, 42, 30 // for the angles above, the levels and the key below, the angles beside
	r := (room.h - top - foot) / 2
	if p.half() {
		r = room.h - top - foot
	}
	r = min(r, room.w/2-side)
	centre := point{room.x + room.w/2, room.y + top + r}
	at := func(angleDeg, level float64) point {
		sin, cos := math.Sincos(angleDeg * math.Pi / 180)
		d := r * min(max((level-p.rim+polarRange)/polarRange, 0), 1)
		return point{centre.x + d*sin, centre.y - d*cos}
	}
	p.dial(s, centre, r, at)
	for k := range p.Freqs {
		var points []point
		for i, a := range p.AngleDeg {
			points = append(points, at(a, p.LevelDB[i][k]))
		}
		s.add(line{points, pen{wayInk(k), wayWidth, dashes(k)}})
	}
	// The key, in one row.
	const sample, gap = 22, 14
	width := -float64(gap)
	for _, f := range p.Freqs {
		width += sample + 5 + s.fonts.width(hertz(f), noteSize, false) + gap
	}
	x, y := room.x+(room.w-width)/2, room.bottom()-4
	for k, f := range p.Freqs {
		s.stroke(point{x, y - 4}, point{x + sample, y - 4}, pen{wayInk(k), wayWidth, dashes(k)})
		t := text{point{x + sample + 5, y}, hertz(f), noteSize, false, start, writing}
		s.add(t)
		x = s.box(t).right() + gap
	}
}

// dial draws the circles with their levels and the rays with their angles.
func (p *polarCurves) dial(s *scene, centre point, r float64, at func(angleDeg, level float64) point) {
	box := rect{centre.x - r, centre.y - r, 2 * r, 2 * r}.grown(1)
	if p.half() {
		box.h = r + 1
	}
	for level := p.rim - polarRange + polarRing; level <= p.rim; level += polarRing {
		w := pen{ink: minor, width: 0.7}
		switch level {
		case p.rim:
			w.ink = frame
		case 0:
			w.ink = major
		}
		for _, part := range clipped(circle(centre, r*(level-p.rim+polarRange)/polarRange), box) {
			s.add(line{part, w})
		}
	}
	for a := -150.0; a <= 180; a += 30 {
		if p.half() && math.Abs(a) > 90 {
			continue
		}
		s.stroke(centre, at(a, p.rim), pen{ink: minor, width: 0.7})
		e := at(a, p.rim)
		sin, cos := math.Sincos(a * math.Pi / 180)
		t := text{point{e.x + 5*sin, e.y - 5*cos + (1-cos)/2*tickSize*capHeight}, number(a, 3) + "°", tickSize, false, start, faint}
		switch {
		case math.Abs(sin) < 0.01:
			t.anchor = middle
		case sin < 0:
			t.anchor = end
		}
		s.add(t)
	}
	ray := 180.0
	if p.half() {
		ray = 90
	}
	// Every other ring has a number, 0 dB among them; the rim has the angles.
	unit := " dB"
	for level := 10 * (math.Ceil(p.rim/10) - 1); level > p.rim-polarRange; level -= 10 {
		e, text := at(ray, level), text{text: number(level, 3) + unit, size: tickSize - 1, ink: faint}
		unit = ""
		if text.at = (point{e.x + 3, e.y - 2}); p.half() {
			text.at, text.anchor = point{e.x, e.y + 11}, middle
		}
		s.add(text)
	}
}
