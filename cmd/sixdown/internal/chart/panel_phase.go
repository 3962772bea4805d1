package chart

import (
	"math"

	"sixdown/sim"
)

// Phase draws the phase of the sum and of each way where it is heard: within levelRange/2 dB of the sum. The flight that
// the first subject's tables hold is taken out of all, which the note then says.
func Phase(subjects []*Subject, note string) Panel {
	lo, hi := ends(subjects)
	p := &plotPanel{high: 174, plot: plot{title: "Phase", note: note, x: frequencyAxis(lo, hi), y: phaseAxis(180)}}
	p.note += held(subjects)
	late := subjects[0].late()
	for k, s := range subjects {
		f := s.Response.Freqs
		for i, w := range s.Response.Ways {
			phase := sim.PhasesDeg(withoutFlight(s.output(i), f, late))
			if s.sounds() {
				for j, l := range s.levels(i) {
					if !(l > sim.SPL(s.Response.Sum[j])-levelRange/2) {
						phase[j] = math.NaN()
					}
				}
			}
			x, y := turned(f, phase)
			p.series = append(p.series, series{name: s.named(w.Name), x: x, y: y, pen: styles(k, len(subjects), s.wayInk(i), i, wayWidth), near: s.leads(i)})
		}
		if s.sounds() {
			x, y := turned(f, sim.PhasesDeg(withoutFlight(s.Response.Sum, f, late)))
			p.series = append(p.series, series{name: s.named("sum"), x: x, y: y, pen: styles(k, len(subjects), total, -1, totalWidth), bold: true})
		}
	}
	return p
}

// phaseAxis goes from -limit to limit in degrees, with lines every 45° and numbers every 90°, or half of that.
func phaseAxis(limit float64) axis {
	a := axis{lo: -limit, hi: limit}
	for v := -limit; v <= limit; v += limit / 2 {
		a.ticks = append(a.ticks, tick{v, number(v, 3) + "°"})
		if v < limit {
			a.minor = append(a.minor, v+limit/4)
		}
	}
	return a
}

// turned returns a wrapped phase in degrees as a curve that leaves the frame at one edge and comes in at the other:
// where it jumps by more than half a turn, both ends are carried on to ±180° and a gap is set between.
func turned(f, phase []float64) (x, y []float64) {
	for i := range f {
		if i > 0 && math.Abs(phase[i]-phase[i-1]) > 180 {
			edge := math.Copysign(180, phase[i-1])
			// How far into the step the edge lies; the step goes on beyond it by a turn.
			next := phase[i] + 2*edge
			t := (edge - phase[i-1]) / (next - phase[i-1])
			at := f[i-1] * math.Pow(f[i]/f[i-1], t)
			x, y = append(x, at, at, at), append(y, edge, math.NaN(), -edge)
		}
		x, y = append(x, f[i]), append(y, phase[i])
	}
	return x, y
}
