package chart

import "math"

// A Fan is between which levels many builds of a design lie.
type Fan struct {
	Name     string
	Freqs    []float64 // Hz, rising
	Nominal  []float64 // dB
	Low      []float64 // dB, below which 5 % of builds lie
	InnerLow []float64 // dB, 25 %
	InnerTop []float64 // dB, 75 %
	Top      []float64 // dB, 95 %
}

// fanRange is how many dB below the top are shown at most.
const fanRange = 40

// Fans draws fans as tints with the nominal curve on them: what 90 % of builds stay within, and deeper what half of them do.
// The first, which is the sum if sum is true, has limit dB about it drawn over band, in Hz; 0: no limit.
func Fans(fans []Fan, sum bool, limit float64, band [2]float64, note string) Panel {
	f := fans[0].Freqs
	p := &plotPanel{high: 232, plot: plot{title: "Spread", note: note, x: frequencyAxis(f[0], f[len(f)-1])}}
	top, bottom := math.Inf(-1), math.Inf(1)
	for i := len(fans) - 1; i >= 0; i-- { // the first lies on the others
		fan := &fans[i]
		ink, width := total, totalWidth
		if !sum || i > 0 {
			way := i
			if sum {
				way--
			}
			ink, width = wayInk(way), wayWidth
		}
		p.areas = append(p.areas, between(f, fan.Low, fan.Top, ink.tint()), between(f, fan.InnerLow, fan.InnerTop, ink.pale()))
		p.series = append(p.series, series{name: fan.Name, x: f, y: fan.Nominal, pen: pen{ink, width, nil}, bold: sum && i == 0})
		top = max(top, most(fan.Top))
		if i == 0 {
			bottom = least(fan.Low)
		}
	}
	if limit > 0 {
		p.series = append(p.series, shifted(f, fans[0].Nominal, -limit, band), shifted(f, fans[0].Nominal, limit, band))
		top = max(top, most(fans[0].Nominal)+limit)
	}
	if math.IsInf(top, 0) || math.IsInf(bottom, 0) {
		top, bottom = 0, -fanRange
	}
	p.y = linearAxis(max(bottom-3, top-fanRange), top+1, 6, " dB", true)
	for _, a := range p.areas { // what lies below the frame ends at its edge
		for k := range a.loops[0] {
			a.loops[0][k].y = min(max(a.loops[0][k].y, p.y.lo), p.y.hi)
		}
	}
	return p
}

// FanDeviation draws a fan relative to its nominal curve, with limit dB about it over band, in Hz; 0: no limit.
func FanDeviation(fan *Fan, limit float64, band [2]float64) Panel {
	f := fan.Freqs
	less := func(y []float64) []float64 {
		d := make([]float64, len(y))
		for i := range d {
			d[i] = y[i] - fan.Nominal[i]
		}
		return d
	}
	low, top := less(fan.Low), less(fan.Top)
	flat := make([]float64, len(f))
	p := &plotPanel{high: 170, plot: plot{title: "Off nominal", note: "dB, " + fan.Name, x: frequencyAxis(f[0], f[len(f)-1])}}
	p.areas = []area{between(f, low, top, total.tint()), between(f, less(fan.InnerLow), less(fan.InnerTop), total.pale())}
	p.series = []series{{x: f, y: flat, pen: pen{total, wayWidth, nil}}}
	reach := max(most(top), -least(low), 0.1)
	if limit > 0 {
		p.series = append(p.series, shifted(f, flat, -limit, band), shifted(f, flat, limit, band))
		reach = max(reach, limit)
	}
	if math.IsInf(reach, 0) || math.IsNaN(reach) {
		reach = 1
	}
	p.y = linearAxis(-1.1*reach, 1.1*reach, 5, " dB", true)
	return p
}

// between is what lies between two curves.
func between(x, low, top []float64, ink ink) area {
	var loop []point
	for i := range x {
		loop = append(loop, point{x[i], top[i]})
	}
	for i := len(x) - 1; i >= 0; i-- {
		loop = append(loop, point{x[i], low[i]})
	}
	return area{loops: [][]point{loop}, ink: ink}
}

// shifted is a curve moved by db over a band, thin and dashed.
func shifted(x, y []float64, db float64, band [2]float64) series {
	s := series{pen: pen{aim, 0.9, []float64{4, 3}}}
	for i := range x {
		if x[i] >= band[0]*(1-1e-9) && x[i] <= band[1]*(1+1e-9) {
			s.x, s.y = append(s.x, x[i]), append(s.y, y[i]+db)
		}
	}
	return s
}

// A Bar is one part's weight in something.
type Bar struct {
	Name   string
	Value  float64
	Remark string
}

// Bars draws values, none negative, as bars from zero, the first at the top.
func Bars(title, note, unit string, bars []Bar) Panel {
	n := float64(len(bars))
	p := &plotPanel{high: 60 + 17*n, plot: plot{title: title, note: note, y: axis{lo: -0.4, hi: n}, bare: true}}
	reach := 1e-6
	for i, b := range bars {
		at := n - float64(i) - 0.5
		p.y.ticks = append(p.y.ticks, tick{at, b.Name})
		reach = max(reach, b.Value)
		p.areas = append(p.areas, area{ink: way1.pale(), loops: [][]point{{{0, at - 0.32}, {b.Value, at - 0.32}, {b.Value, at + 0.32}, {0, at + 0.32}}}})
		p.callouts = append(p.callouts, callout{b.Value, at, b.Remark, way1})
	}
	p.x = linearAxis(0, 1.3*reach, 6, unit, false) // with room for the last remark
	return p
}

// A Mark is a design among others: what it costs, and how good it is.
type Mark struct {
	Across, Up float64
	Name       string // "": one of the others, drawn faint
}

// Frontier draws designs by two figures; marks must be in the order of Across. With step, less is better in both, and the best of
// those that are named are joined by a stair.
func Frontier(title, note, across, up string, marks []Mark, step bool) Panel {
	p := &plotPanel{high: 250, plot: plot{title: title, note: note}}
	right, left, top := math.Inf(-1), math.Inf(1), math.Inf(-1)
	var x, y []float64
	best := math.Inf(1)
	for _, m := range marks {
		right, left, top = max(right, m.Across), min(left, m.Across), max(top, m.Up)
		if m.Name == "" {
			p.callouts = append(p.callouts, callout{m.Across, m.Up, "", faint})
		}
	}
	for _, m := range marks {
		if m.Name == "" {
			continue
		}
		p.callouts = append(p.callouts, callout{m.Across, m.Up, m.Name, way2})
		if m.Up < best {
			if len(x) > 0 {
				x, y = append(x, m.Across), append(y, best)
			}
			best = m.Up
			x, y = append(x, m.Across), append(y, best)
		}
	}
	if step {
		p.series = []series{{x: x, y: y, pen: pen{way2, wayWidth, nil}}}
	}
	p.x = linearAxis(left-1, right+1, 8, across, false)
	p.y = linearAxis(0, top*1.05, 6, up, true)
	return p
}
