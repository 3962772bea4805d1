package cli

import (
	"math"
	"slices"

	"sixdown/cmd/sixdown/internal/chart"
	"sixdown/sim"
	"sixdown/sim/field"
)

// The grid of a polar map.
const (
	polarStep      = 3   // degrees
	polarEdge      = 90  // degrees, to either side: the half-space in front, which a baffle's model is for
	polarFrom      = 100 // Hz, below which a loudspeaker has hardly any directivity
	polarPerOctave = 24
)

// polarPanels predicts all round the front and draws it: for each plane a map, then curves at the crossings and
// near the top. Where it sounds alike all round, as points that stand in one place do, there is nothing to draw.
func polarPanels(s *streams, p *prediction, name string, grid *gridOptions) ([]chart.Panel, error) {
	freqs := (&gridOptions{from: min(max(polarFrom, grid.from), grid.to/2), to: grid.to, perOctave: polarPerOctave}).even()
	var maps, curves []chart.Panel
	alike := true
	for _, plane := range []struct {
		title string
		at    func(deg float64) field.Angle
	}{
		{"Horizontal", func(deg float64) field.Angle { return field.Angle{HorizontalDeg: deg} }},
		{"Vertical", func(deg float64) field.Angle { return field.Angle{VerticalDeg: deg} }},
	} {
		m := &chart.PolarMap{Title: plane.title, Note: "dB re straight ahead", Freqs: freqs}
		if p.Angle != (field.Angle{}) {
			m.Note = "dB re the ear, " + angleText(p.Angle) + "; angles from there"
		}
		if name != "" {
			m.Title += " " + name
		}
		var angles []field.Angle
		for deg := -polarEdge; deg <= polarEdge; deg += polarStep {
			m.AngleDeg = append(m.AngleDeg, float64(deg))
			angles = append(angles, plane.at(float64(deg)))
		}
		rs, err := p.system.Field(freqs, angles)
		if err != nil {
			return nil, err
		}
		ahead := sim.SPLs(rs[slices.Index(m.AngleDeg, 0)].Sum)
		for _, r := range rs {
			for _, w := range r.Warnings {
				p.warnOnce(s, w)
			}
			levels := less(sim.SPLs(r.Sum), ahead)
			m.LevelDB = append(m.LevelDB, levels)
			alike = alike && !slices.ContainsFunc(levels, func(l float64) bool { return math.Abs(l) > 0.05 })
		}
		whole, err := chart.Polar(m)
		if err != nil {
			return nil, err
		}
		some, err := chart.PolarCurves(m, p.polarCuts(freqs[0], grid.to))
		if err != nil {
			return nil, err
		}
		maps, curves = append(maps, whole), append(curves, some)
	}
	if alike {
		return nil, nil
	}
	return append(maps, curves...), nil
}

// polarCuts returns the frequencies of the polar curves: those of the crossings, three at most, and 10 kHz.
func (p *prediction) polarCuts(from, to float64) []float64 {
	var cuts []float64
	for _, c := range p.summary.Crossings {
		if len(cuts) < 3 && c.Frequency >= from && c.Frequency <= to {
			cuts = append(cuts, c.Frequency)
		}
	}
	const high = 10e3
	if len(cuts) == 0 || cuts[len(cuts)-1] < high/1.5 {
		cuts = append(cuts, math.Min(high, to))
	}
	return cuts
}
