package cli

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"sixdown/cmd/sixdown/internal/chart"
	"sixdown/sim"
	"sixdown/sim/field"
	"sixdown/xover"
)

// The grid of a polar map and of polar curves.
const (
	polarStep      = 2   // degrees: finer than the corners of a curve show, and angles are what takes time
	polarEdge      = 90  // degrees, to either side: the half-space in front, which a baffle's model is for
	polarFrom      = 100 // Hz, below which a loudspeaker has hardly any directivity
	polarPerOctave = 24
)

// Levels in dB that are told apart: by the ear at best, and by a polar map's colours, half to either side of 0 dB.
const (
	polarAlike  = 0.05
	polarColour = 1.5
)

// polarPage is what there is to draw of how one or two designs sound all round the front.
type polarPage struct {
	maps, curves []*chart.PolarMap // of both designs side by side, first of the one plane, then of the other
	omitted      []string          // which maps are left out, and why, a line each
}

// polarPanels predicts all round the front and draws it: for each plane a map, then curves at the crossings and
// near the top. Where it sounds alike all round, as points that stand in one place do, there is nothing to draw. A map of one
// colour, since a driver was measured at one angle and the others do little, is left out, which the lines say.
func polarPanels(s *streams, ps []*prediction, names []string, grid *gridOptions) (panels []chart.Panel, omitted []string, err error) {
	page := &polarPage{}
	most := 0.0
	for _, plane := range []sim.Plane{sim.Horizontal, sim.Vertical} {
		for k, p := range ps {
			off, err := page.add(s, p, plane, names[k], grid)
			if err != nil {
				return nil, nil, err
			}
			most = max(most, off)
		}
	}
	if most <= polarAlike {
		return nil, nil, nil
	}
	maps, err := chart.Polar(page.maps...)
	if err != nil {
		return nil, nil, err
	}
	curves, err := chart.PolarCurves(page.curves...)
	return append(maps, curves...), page.omitted, err
}

// add predicts one plane of one design, and returns how many dB it is off what it is straight ahead, at most.
func (page *polarPage) add(s *streams, p *prediction, plane sim.Plane, name string, grid *gridOptions) (off float64, err error) {
	title, side := "Horizontal", "to the right"
	if plane == sim.Vertical {
		title, side = "Vertical", "up"
	}
	note := "dB re straight ahead"
	if p.Angle != (field.Angle{}) {
		note = "dB re the ear, angles from there" // the page says how it is turned
	}
	freqs := (&gridOptions{from: min(max(polarFrom, grid.from), grid.to/2), to: grid.to, perOctave: polarPerOctave}).even()
	whole := &chart.PolarMap{Title: strings.TrimSpace(title + " " + name), Note: note + "; positive: " + side, Freqs: freqs}
	lines := &chart.PolarMap{Title: whole.Title, Note: whole.Note, Freqs: p.polarCuts(freqs[0], grid.to)}
	if err := p.around(s, plane, whole, lines); err != nil {
		return 0, err
	}
	for _, levels := range whole.LevelDB {
		for _, l := range levels {
			off = max(off, math.Abs(l))
		}
	}
	if once := measuredOnce(p.design); len(once) > 0 {
		if off < polarColour {
			of := ""
			if name != "" {
				of = " of " + name
			}
			page.omitted = append(page.omitted, fmt.Sprintf("no %s map%s: %s measured at one angle and taken to sound alike at all", strings.ToLower(title), of, wasOrWere(once)))
			return off, nil
		}
		whole.Note += "; " + wasOrWere(once) + " measured at one angle: alike at all"
	}
	page.maps, page.curves = append(page.maps, whole), append(page.curves, lines)
	return off, nil
}

// around fills in the angles of a plane's map and curves and the levels there relative to the ear. Both are asked for at once, since
// what a baffle does takes long for each angle, however many frequencies it is for.
func (p *prediction) around(s *streams, plane sim.Plane, whole, lines *chart.PolarMap) error {
	var degs []float64
	for deg := -polarEdge; deg <= polarEdge; deg += polarStep {
		degs = append(degs, float64(deg))
	}
	a, err := p.system.Polar(slices.Concat(whole.Freqs, lines.Freqs), plane, degs)
	if err != nil {
		return err
	}
	for _, w := range a.Warnings {
		p.warnOnce(s, w)
	}
	n := len(whole.Freqs)
	whole.AngleDeg, lines.AngleDeg = degs, degs
	for _, levels := range a.LevelDB {
		whole.LevelDB, lines.LevelDB = append(whole.LevelDB, levels[:n]), append(lines.LevelDB, levels[n:])
	}
	return nil
}

// measuredOnce returns the drivers whose response was measured at one angle only.
func measuredOnce(d *xover.Design) []string {
	var names []string
	for i := range d.Drivers {
		v := &d.Drivers[i]
		if v.ResponseFile != "" && len(v.Horizontal)+len(v.Vertical) == 0 {
			names = append(names, v.Name)
		}
	}
	return names
}

// wasOrWere names one or more with the verb: "woofer and tweeter were".
func wasOrWere(names []string) string {
	if len(names) == 1 {
		return names[0] + " was"
	}
	last := len(names) - 1
	return strings.Join(names[:last], ", ") + " and " + names[last] + " were"
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
