package chart

import "math"

// StepResponse draws the answer to a step. Each subject must have its Step.
func StepResponse(subjects []*Subject) Panel {
	p := &plotPanel{high: 178, half: true, plot: plot{title: "Step", note: "relative to the peak" + held(subjects)}}
	top, bottom := math.Inf(-1), math.Inf(1)
	from, to := math.Inf(1), math.Inf(-1)
	for k, s := range subjects {
		ms := make([]float64, len(s.Step.Seconds))
		for i, t := range s.Step.Seconds {
			ms[i] = 1000 * (t - subjects[0].late())
		}
		from, to = min(from, ms[0]), max(to, ms[len(ms)-1])
		for i, c := range s.Step.Ways {
			if len(subjects) > 1 && s.Step.Sum != nil {
				break // two sums are enough to compare
			}
			p.series = append(p.series, series{name: s.named(s.Step.Names[i]), x: ms, y: c, pen: styles(k, len(subjects), s.wayInk(i), i, wayWidth)})
			top, bottom = max(top, most(c)), min(bottom, least(c))
		}
		if c := s.Step.Sum; c != nil {
			p.series = append(p.series, series{name: s.named("sum"), x: ms, y: c, pen: styles(k, len(subjects), total, -1, totalWidth), bold: true})
			top, bottom = max(top, most(c)), min(bottom, least(c))
		} else {
			p.note = "volts for 1 V"
		}
	}
	p.x = linearAxis(from, to, 6, " ms", false)
	if !(top > bottom) {
		top, bottom = 1, 0 // nothing is heard
	}
	room := 0.08 * (top - bottom)
	p.y = linearAxis(bottom-room, top+room, 5, "", false)
	return p
}
