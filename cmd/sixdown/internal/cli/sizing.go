package cli

import (
	"math"

	"sixdown/xover/ladder"
	"sixdown/xover/preferred"
)

// A sizing is the answer of size: a crossover, its preferred values, and how its ways add up.
type sizing struct {
	*crossover
	series   preferred.Series
	ways     []waySizing
	sum      sumShape // as sized, with the polarities that are best, or that an all-pass arrangement needs
	roundSum sumShape // with the same polarities and every part at its nearest value
}

// A waySizing is what is said of one way.
type waySizing struct {
	levelDB  []float64 // at each of its crossovers, re the amplifier's voltage
	choices  []choice  // in the order of its parts
	together effect    // of every part at its nearest value
}

// A choice is a part with the preferred values on either side.
type choice struct {
	part         ladder.NamedPart
	below, above option
	nearest      float64 // the nearer of the two, by ratio
}

// An option is a preferred value and what taking it for the one part does to the way.
type option struct {
	value float64
	off   float64 // relative to the part's value, a fraction
	effect
}

func newSizing(c *crossover, series preferred.Series) (*sizing, error) {
	t, err := newTrial(c.sections)
	if err != nil {
		return nil, err
	}
	s := &sizing{crossover: c, series: series}
	nearest := map[string]float64{}
	for i, w := range c.sections {
		var ws waySizing
		for j := range w.crossings {
			ws.levelDB = append(ws.levelDB, t.crossingDB(i, j))
		}
		for _, p := range w.parts {
			ch, err := t.choose(i, p, series)
			if err != nil {
				return nil, err
			}
			nearest[p.Name] = ch.nearest
			ws.choices = append(ws.choices, ch)
		}
		s.ways = append(s.ways, ws)
	}
	h, err := t.with(nearest)
	if err != nil {
		return nil, err
	}
	for i := range s.ways {
		s.ways[i].together = t.effect(i, h[i])
	}
	scale := c.scale()
	if c.midReversed != nil {
		s.sum, _ = t.sum(t.sized, scale, []bool{false, *c.midReversed, false})
	} else {
		s.sum = t.bestSum(t.sized, scale)
	}
	s.roundSum, _ = t.sum(h, scale, s.sum.Reversed)
	return s, nil
}

// scale returns the factor by which each way's level must be brought down before they add up.
func (c *crossover) scale() []float64 {
	scale := make([]float64, len(c.sections))
	for i := range scale {
		scale[i] = 1
	}
	if c.midReversed == nil {
		return scale
	}
	if excess := math.Pow(10, -math.Abs(c.midExcessDB)/20); c.midExcessDB > 0 {
		scale[1] = excess
	} else {
		scale[0], scale[2] = excess, excess
	}
	return scale
}

// choose finds the preferred values about a part of way i.
func (t *trial) choose(i int, p ladder.NamedPart, series preferred.Series) (choice, error) {
	ch := choice{part: p, nearest: series.Nearest(p.Value)}
	below, above := series.Neighbours(p.Value)
	for _, o := range []struct {
		value float64
		put   *option
	}{{below, &ch.below}, {above, &ch.above}} {
		h, err := t.with(map[string]float64{p.Name: o.value})
		if err != nil {
			return choice{}, err
		}
		*o.put = option{o.value, o.value/p.Value - 1, t.effect(i, h[i])}
	}
	return ch, nil
}
