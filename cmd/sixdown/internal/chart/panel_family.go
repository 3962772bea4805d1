package chart

import (
	"math"
	"strconv"

	"sixdown/sim"
)

// FamilyCurves draws the output of a tone network over the travel of a control: one hue, the line the broader the farther it is turned
// up, the settings written at the curves.
func FamilyCurves(f *sim.Family, note string) Panel {
	freqs := f.Responses[0].Freqs
	p := &plotPanel{high: 300, plot: plot{title: "Output, by " + f.Control, note: note, x: frequencyAxis(freqs[0], freqs[len(freqs)-1])}}
	top, bottom := math.Inf(-1), math.Inf(1)
	for i, r := range f.Responses {
		levels := sim.DBs(r.Ways[0].H)
		top, bottom = max(top, most(levels)), min(bottom, least(levels))
		ink := way1
		if i < len(f.Responses)/2 {
			ink = way1.pale()
		}
		width := 0.9 + 1.5*f.At[i]
		p.series = append(p.series, series{name: strconv.FormatFloat(f.At[i], 'g', 3, 64), x: freqs, y: levels, pen: pen{ink, width, nil}, near: apartAt(f, i)})
	}
	if !(top > bottom) {
		top, bottom = 0, -10
	}
	top, bottom = topOf([]float64{top}), max(5*math.Floor((bottom-1)/5), top-80)
	p.y = linearAxis(bottom, top, 6, " dB", false)
	for v := top; v > bottom; v -= 5 {
		p.y.minor = append(p.y.minor, v)
	}
	return p
}

// apartAt returns the frequency at which the curve of setting i is farthest from those beside it, where its name is best read.
func apartAt(f *sim.Family, i int) float64 {
	at, widest := 0.0, 0.0
	for k, hz := range f.Responses[i].Freqs {
		gap := math.Inf(1)
		for _, j := range []int{i - 1, i + 1} {
			if j >= 0 && j < len(f.Responses) {
				gap = min(gap, math.Abs(sim.DB(f.Responses[i].Ways[0].H[k])-sim.DB(f.Responses[j].Ways[0].H[k])))
			}
		}
		if gap > widest && !math.IsInf(gap, 1) {
			at, widest = hz, gap
		}
	}
	return at
}
