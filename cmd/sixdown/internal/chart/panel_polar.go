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
	LevelDB  [][]float64 // by angle, then by frequency; dB re straight ahead or whatever Note says
	Note     string      // "dB re straight ahead; positive: up"
}

// check judges a map's shape. It must have as many frequencies as least.
func (m *PolarMap) check(least int) error {
	if len(m.Freqs) < least || len(m.AngleDeg) < 2 || len(m.LevelDB) != len(m.AngleDeg) ||
		slices.ContainsFunc(m.LevelDB, func(l []float64) bool { return len(l) != len(m.Freqs) }) {
		return fmt.Errorf("polar map %q: there are %d angles, %d frequencies and %d rows of levels; give two or more angles, %d or more frequencies and a row of levels over all frequencies for each angle", m.Title, len(m.AngleDeg), len(m.Freqs), len(m.LevelDB), least)
	}
	if !slices.IsSorted(m.Freqs) || !slices.IsSorted(m.AngleDeg) || !(m.Freqs[0] > 0) {
		return fmt.Errorf("polar map %q: the angles or the frequencies do not rise; sort them", m.Title)
	}
	return nil
}

// heatStep is how many dB each colour of a map stands for, half to either side of its level; the lowest stands for all below too.
const heatStep = 3

// Polar draws maps' levels over frequency and angle as areas of 3 dB, with a key. All are on one scale, whose topmost colour
// is the loudest of all, 0 dB at the least. The maps are not changed.
func Polar(maps ...*PolarMap) ([]Panel, error) {
	top := max(0, heatStep*math.Ceil(loudest(maps)/heatStep-0.5))
	var panels []Panel
	for _, m := range maps {
		if err := m.check(2); err != nil {
			return nil, err
		}
		panels = append(panels, &polarPanel{m, top})
	}
	return panels, nil
}

// loudest returns the highest finite level in dB of all maps; -Inf if there is none.
func loudest(maps []*PolarMap) float64 {
	high := math.Inf(-1)
	for _, m := range maps {
		high = max(high, most(m.LevelDB...))
	}
	return high
}

type polarPanel struct {
	*PolarMap
	top float64 // dB, that the topmost colour stands for
}

// level is the level in dB that a colour stands for.
func (p *polarPanel) level(k int) float64 { return p.top + float64(k-heatSteps+1)*heatStep }

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
			below[i] = append(below[i], -max(l, p.level(-1)))
		}
	}
	f := &field{logs, p.AngleDeg, below}
	whole := [][]point{{{in.x.lo, in.y.lo}, {in.x.hi, in.y.lo}, {in.x.hi, in.y.hi}, {in.x.lo, in.y.hi}}}
	in.areas = append(in.areas, area{whole, heat0 + heatSteps - 1})
	for k := heatSteps - 2; k >= 0; k-- {
		loops := f.above(-(p.level(k) + heatStep/2.0))
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
	p.key(s, rect{plotted.right() + 14, frameIn(plotted).y, 12, frameIn(plotted).h})
}

// key draws the colours with their levels, every other one written and 0 dB among these.
func (p *polarPanel) key(s *scene, r rect) {
	step := r.h / heatSteps
	for k := range heatSteps {
		s.fill(rect{r.x, r.bottom() - float64(k+1)*step, r.w, step}, heat0+ink(k))
	}
	s.frame(r)
	unit := " dB"
	for k := heatSteps - 1; k > 0; k-- {
		if int(p.level(k))%(2*heatStep) != 0 {
			continue
		}
		s.add(text{point{r.right() + 5, r.bottom() - (float64(k)+0.5)*step + tickSize*capHeight/2}, number(p.level(k), 3) + unit, tickSize, false, start, faint})
		unit = ""
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
