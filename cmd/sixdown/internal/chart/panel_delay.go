package chart

import "math"

// GroupDelay draws the group delay of the sum. Where it is positive and spans much, which low notes make it do, the
// axis is in equal ratios. The flight that the first subject's tables hold is left out.
func GroupDelay(subjects []*Subject, note string) Panel {
	lo, hi := ends(subjects)
	p := &plotPanel{high: 146, plot: plot{title: "Group delay", note: note, x: frequencyAxis(lo, hi)}}
	p.note += held(subjects)
	var all [][]float64
	for k, s := range subjects {
		ms := make([]float64, len(s.Response.SumDelay))
		for i, d := range s.Response.SumDelay {
			ms[i] = 1000 * (d - subjects[0].late())
		}
		all = append(all, ms)
		p.series = append(p.series, series{name: s.named("sum"), x: s.Response.Freqs, y: ms, pen: styles(k, len(subjects), total, -1, totalWidth), bold: true})
	}
	from, to := least(all...), most(all...)
	if math.IsInf(from, 1) {
		from, to = 0, 1 // there is no delay anywhere
	}
	if from > 0 && to > 20*from {
		// A thousandth of the longest delay is of no account, however small the least one is.
		p.y = logAxis(roundDown(max(from, to/2000)), roundUp(to), false, func(v float64) string { return number(v, 3) })
		if n := len(p.y.ticks); n > 0 {
			p.y.ticks[n-1].text += " ms"
		}
		return p
	}
	if !(to-from > 1e-3) {
		from, to = from-0.05, to+0.05
	}
	room := 0.08 * (to - from)
	p.y = linearAxis(from-room, to+room, 5, " ms", false)
	return p
}

// roundDown returns the largest 1, 2 or 5 times a power of ten that is below v; roundUp the smallest above.
func roundDown(v float64) float64 {
	decade := math.Pow(10, math.Floor(math.Log10(v)))
	for _, m := range []float64{5, 2} {
		if m*decade < v {
			return m * decade
		}
	}
	return decade
}

func roundUp(v float64) float64 { return niceStep(v * 1.02) }
