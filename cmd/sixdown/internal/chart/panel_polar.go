package chart

import (
	"fmt"
	"math"
	"slices"
)

// A PolarMap is what is radiated into the angles of one plane.
type PolarMap struct {
	Title    string      // "Horizontal"
	Freqs    []float64   // Hz, rising
	AngleDeg []float64   // rising, from -180° to 180°
	LevelDB  [][]float64 // by angle, then by frequency; dB re the axis or whatever Note says
	Note     string      // "dB re on axis, from the model"
}

// check judges a map's shape.
func (m *PolarMap) check() error {
	if len(m.Freqs) < 2 || len(m.AngleDeg) < 2 || len(m.LevelDB) != len(m.AngleDeg) ||
		slices.ContainsFunc(m.LevelDB, func(l []float64) bool { return len(l) != len(m.Freqs) }) {
		return fmt.Errorf("polar map %q: there are %d angles, %d frequencies and %d rows of levels; give two or more of the first two and a row of levels over all frequencies for each angle", m.Title, len(m.AngleDeg), len(m.Freqs), len(m.LevelDB))
	}
	if !slices.IsSorted(m.Freqs) || !slices.IsSorted(m.AngleDeg) || !(m.Freqs[0] > 0) {
		return fmt.Errorf("polar map %q: the angles or the frequencies do not rise; sort them", m.Title)
	}
	return nil
}

// heatStep is how many dB each colour of a map stands for, half to either side of its level; the topmost stands for
// 0 dB and all above.
const heatStep = 3

// heatLevel is the level in dB that a colour stands for.
func heatLevel(k int) float64 { return float64(k-heatSteps+1) * heatStep }

// Polar draws a map's level over frequency and angle as areas of 3 dB, with a key. The map is not changed.
func Polar(m *PolarMap) (Panel, error) {
	if err := m.check(); err != nil {
		return nil, err
	}
	return &polarPanel{m}, nil
}

type polarPanel struct{ *PolarMap }

func (p *polarPanel) height() float64 { return 196 }
func (p *polarPanel) narrow() bool    { return false }

func (p *polarPanel) draw(s *scene, room rect) {
	const keyRoom = 58
	in := plot{title: p.Title, note: p.Note, x: frequencyAxis(p.Freqs[0], p.Freqs[len(p.Freqs)-1]), y: angleAxis(p.AngleDeg[0], p.AngleDeg[len(p.AngleDeg)-1])}
	logs := make([]float64, len(p.Freqs))
	for i, f := range p.Freqs {
		logs[i] = math.Log(f)
	}
	// The map is painted from the highest level down, each colour over what is lower, so that no dark ground shines
	// through at the edges of the light areas. What is far below the lowest colour would pull the contours of a null into
	// beads between the grid's points.
	below := make([][]float64, len(p.LevelDB))
	for i, row := range p.LevelDB {
		for _, l := range row {
			below[i] = append(below[i], -max(l, heatLevel(-1)))
		}
	}
	f := &field{logs, p.AngleDeg, below}
	whole := [][]point{{{in.x.lo, in.y.lo}, {in.x.hi, in.y.lo}, {in.x.hi, in.y.hi}, {in.x.lo, in.y.hi}}}
	in.areas = append(in.areas, area{whole, heat0 + heatSteps - 1})
	for k := heatSteps - 2; k >= 0; k-- {
		loops := f.above(-(heatLevel(k) + heatStep/2.0))
		for _, l := range loops {
			for i := range l {
				l[i].x = math.Exp(l[i].x)
			}
		}
		in.areas = append(in.areas, area{loops, heat0 + ink(k)})
	}
	in.bare = true
	plotted := rect{room.x, room.y, room.w - keyRoom, room.h}
	in.draw(s, plotted)
	heatKey(s, rect{plotted.right() + 14, frameIn(plotted).y, 12, frameIn(plotted).h})
}

// heatKey draws the colours with their levels.
func heatKey(s *scene, r rect) {
	step := r.h / heatSteps
	for k := range heatSteps {
		s.fill(rect{r.x, r.bottom() - float64(k+1)*step, r.w, step}, heat0+ink(k))
	}
	s.frame(r)
	for k := 1; k < heatSteps; k += 2 {
		level := number(heatLevel(k), 3)
		if k == heatSteps-1 {
			level += " dB"
		}
		s.add(text{point{r.right() + 5, r.bottom() - (float64(k)+0.5)*step + tickSize*capHeight/2}, level, tickSize, false, start, faint})
	}
}

// angleAxis goes from one angle to another in degrees.
func angleAxis(lo, hi float64) axis {
	step := 30.0
	for (hi-lo)/step > 8 {
		step += 15
	}
	a := axis{lo: lo, hi: hi}
	for v := math.Ceil(lo/step) * step; v <= hi; v += step {
		a.ticks = append(a.ticks, tick{v, number(v, 3) + "°"})
	}
	return a
}

// PolarCurves draws the levels round the loudspeaker at a few frequencies, 0° to the top and positive angles to
// the right. Of a map that ends at ±90° it draws the front half.
func PolarCurves(m *PolarMap, freqs []float64) (Panel, error) {
	if err := m.check(); err != nil {
		return nil, err
	}
	return &polarCurves{m, freqs}, nil
}

type polarCurves struct {
	*PolarMap
	at []float64
}

// polarRange is how many dB the rim is above the middle; the rim is at polarTop.
const (
	polarRange = 30
	polarTop   = 5
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
		d := r * min(max((level-polarTop+polarRange)/polarRange, 0), 1)
		return point{centre.x + d*sin, centre.y - d*cos}
	}
	p.dial(s, centre, r, at)
	for k, f := range p.at {
		var points []point
		for i, a := range p.AngleDeg {
			points = append(points, at(a, interpolated(p.Freqs, p.LevelDB[i], f)))
		}
		s.add(line{points, pen{wayInk(k), wayWidth, dashes(k)}})
	}
	// The key, in one row.
	const sample, gap = 22, 14
	width := -float64(gap)
	for _, f := range p.at {
		width += sample + 5 + s.fonts.width(hertz(f), noteSize, false) + gap
	}
	x, y := room.x+(room.w-width)/2, room.bottom()-4
	for k, f := range p.at {
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
	for level := float64(polarTop - polarRange + 5); level <= polarTop; level += 5 {
		w := pen{ink: minor, width: 0.7}
		switch level {
		case polarTop:
			w.ink = frame
		case 0:
			w.ink = major
		}
		for _, part := range clipped(circle(centre, r*(level-polarTop+polarRange)/polarRange), box) {
			s.add(line{part, w})
		}
	}
	for a := -150.0; a <= 180; a += 30 {
		if p.half() && math.Abs(a) > 90 {
			continue
		}
		s.stroke(centre, at(a, polarTop), pen{ink: minor, width: 0.7})
		e := at(a, polarTop)
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
	for level := -20.0; level <= 0; level += 10 {
		e, text := at(ray, level), text{text: number(level, 3), size: tickSize - 1, ink: faint}
		if level == 0 {
			text.text += " dB"
		}
		if text.at = (point{e.x + 3, e.y - 2}); p.half() {
			text.at, text.anchor = point{e.x, e.y + 11}, middle
		}
		s.add(text)
	}
}
