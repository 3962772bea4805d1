package chart

import (
	"math"

	"sixdown/sim"
)

// levelRange is how many dB the response panel goes down from its top.
const levelRange = 50

// Response draws the level of each way, what it should be, and the sum; without a sum, the gains. note says what
// the levels are for.
func Response(subjects []*Subject, note string) Panel {
	lo, hi := ends(subjects)
	p := &plotPanel{high: 280, plot: plot{title: "Response", note: note, x: frequencyAxis(lo, hi)}}
	top, bottom := math.Inf(-1), math.Inf(1)
	for k, s := range subjects {
		f := s.Response.Freqs
		for i, t := range s.Targets {
			if t == nil || k > 0 {
				continue // two designs that are compared have one aim
			}
			name := ""
			if i == 0 {
				name = "target"
			}
			p.series = append(p.series, series{name: name, x: f, y: t, pen: pen{aim, aimWidth, []float64{4, 3}}})
			top = max(top, most(t))
		}
		for i, w := range s.Response.Ways {
			l := s.levels(i)
			p.series = append(p.series, series{name: s.named(w.Name), x: f, y: l, pen: styles(k, len(subjects), s.wayInk(i), i, wayWidth), near: s.leads(i)})
			top, bottom = max(top, most(l)), min(bottom, least(l))
		}
		if s.sounds() {
			l := sumLevels(s)
			p.series = append(p.series, series{name: s.named("sum"), x: f, y: l, pen: styles(k, len(subjects), total, -1, totalWidth), bold: true})
			top = max(top, most(l))
		}
	}
	top = topOf([]float64{top})
	bottom = min(max(top-levelRange, 5*math.Floor((bottom-1)/5)), top-10)
	p.y = linearAxis(bottom, top, 6, " dB", false)
	for v := top; v > bottom; v -= 5 {
		p.y.minor = append(p.y.minor, v)
	}
	return p
}

// topOf returns where a level axis ends above levels in dB: on a multiple of 5, with a little room.
// It is 0 where nothing sounds.
func topOf(levels []float64) float64 {
	if m := most(levels); !math.IsInf(m, 0) {
		return 5 * math.Ceil((m+2)/5)
	}
	return 0
}

// sumLevels returns the level of the sum in dB SPL.
func sumLevels(s *Subject) []float64 { return sim.SPLs(s.Response.Sum) }
