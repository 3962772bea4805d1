package cli

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"sixdown/sim"
	"sixdown/sim/circuit"
	"sixdown/xover"
	"sixdown/xover/ladder"
	"sixdown/xover/quantity"
)

// A trial is a crossover on its resistive loads, solved over a wide band, in which parts can be changed to see
// what comes of it.
type trial struct {
	sections []section
	freqs    []float64      // Hz, rising
	sweep    *circuit.Sweep // values as sized unless a change is being looked at
	branch   map[string]int // of each part
	sized    [][]complex128 // gain of each way as sized
}

// Over what is looked, and how finely.
const (
	trialOctaves   = 6  // below the lowest and above the highest crossover
	trialPerOctave = 24 // points
)

func newTrial(sections []section) (*trial, error) {
	d, _, err := xover.Parse("size", []byte(resistiveDesign(sections)))
	if err != nil {
		return nil, err
	}
	sys, err := sim.New(d, nil)
	if err != nil {
		return nil, err
	}
	t := &trial{sections: sections, freqs: trialGrid(sections), branch: map[string]int{}}
	for _, w := range sections {
		for _, p := range w.parts {
			t.branch[p.Name] = sys.PartBranches(p.Name)[0]
		}
	}
	if t.sweep, err = sys.Circuit().NewSweep(t.freqs); err != nil {
		return nil, err
	}
	t.sized, err = t.gains()
	return t, err
}

// resistiveDesign writes the design in which every way drives its resistance.
func resistiveDesign(sections []section) string {
	var b strings.Builder
	b.WriteString("[parts]\n")
	for _, w := range sections {
		for _, p := range w.parts {
			fmt.Fprintf(&b, "%s = %q\n", p.Name, quantity.Format(p.Value, partUnit(p.Kind)))
		}
	}
	for _, w := range sections {
		fmt.Fprintf(&b, "[driver.%s]\nimpedance = %q\n", w.name, quantity.Format(w.load, quantity.Ohm))
	}
	for _, w := range sections {
		fmt.Fprintf(&b, "[[way]]\nname = %q\ndriver = %q\nnetwork = %s\n", w.name, w.name, tomlList(w.steps))
	}
	return b.String()
}

// partUnit returns the unit of a part's value.
func partUnit(k ladder.Kind) quantity.Unit {
	switch k {
	case ladder.Inductor:
		return quantity.Henry
	case ladder.Capacitor:
		return quantity.Farad
	}
	return quantity.Ohm
}

// trialGrid returns an even grid about the crossovers, the crossovers themselves, and the ends of the bands that
// effects are about.
func trialGrid(sections []section) []float64 {
	var at, ends []float64
	for _, w := range sections {
		at = append(at, w.crossings...)
		from, to := w.effectBand()
		ends = append(ends, from, to)
	}
	wide := math.Exp2(trialOctaves)
	g := gridOptions{from: slices.Min(at) / wide, to: slices.Max(at) * wide, perOctave: trialPerOctave}
	freqs := slices.Concat(g.even(), at, ends)
	slices.Sort(freqs)
	return slices.Compact(freqs)
}

// gains solves the network and returns each way's gain.
func (t *trial) gains() ([][]complex128, error) {
	if err := t.sweep.Solve(); err != nil {
		return nil, err
	}
	h := make([][]complex128, len(t.sections))
	for i := range h {
		h[i] = make([]complex128, len(t.freqs))
		t.sweep.Gain(h[i], i)
	}
	return h, nil
}

// with returns the gains that the ways have when these parts have these values, and leaves them as sized.
func (t *trial) with(values map[string]float64) (h [][]complex128, err error) {
	for name, v := range values {
		if err := t.sweep.SetValue(t.branch[name], v); err != nil {
			return nil, err
		}
	}
	if h, err = t.gains(); err != nil {
		return nil, err
	}
	for _, w := range t.sections {
		for _, p := range w.parts {
			if err := t.sweep.SetValue(t.branch[p.Name], p.Value); err != nil {
				return nil, err
			}
		}
	}
	return h, nil
}

// An effect is what a change of parts does to a way.
type effect struct {
	CrossingDB float64 // change of its level where it crosses; of two crossovers, the larger change
	WorstDB    float64 // largest change within two octaves of its crossovers
	WorstHz    float64 // where that is
}

// effectBand returns the band from two octaves below the way's crossovers to two octaves above them, in Hz.
func (w *section) effectBand() (from, to float64) {
	return slices.Min(w.crossings) / 4, slices.Max(w.crossings) * 4
}

// effect compares the gain h of way i with that as sized.
func (t *trial) effect(i int, h []complex128) effect {
	at := t.sections[i].crossings
	from, to := t.sections[i].effectBand()
	var e effect
	for k, f := range t.freqs {
		change := sim.DB(h[k]) - sim.DB(t.sized[i][k])
		if slices.Contains(at, f) && math.Abs(change) > math.Abs(e.CrossingDB) {
			e.CrossingDB = change
		}
		if f >= from && f <= to && math.Abs(change) > math.Abs(e.WorstDB) {
			e.WorstDB, e.WorstHz = change, f
		}
	}
	return e
}

// crossingDB returns the level of way i at its j-th crossover, as sized, re the amplifier's voltage.
func (t *trial) crossingDB(i, j int) float64 {
	k, _ := slices.BinarySearch(t.freqs, t.sections[i].crossings[j])
	return sim.DB(t.sized[i][k])
}

// A sumShape is how the ways add up, all drivers equally sensitive and at one place.
type sumShape struct {
	Reversed  []bool  // polarity of each way
	LowestDB  float64 // re one way in its pass band, over the trial's band
	HighestDB float64
}

// bestSum returns the polarities, the lowest way's normal, with which the sum is the flattest; of equally flat
// ones, those with the least turn of phase, and so the least delay. scale is a factor for each way.
func (t *trial) bestSum(h [][]complex128, scale []float64) sumShape {
	const equal = 1e-6 // dB: rounding does not choose
	var best sumShape
	var bestError, bestTurn float64
	for choice := range 1 << (len(h) - 1) {
		reversed := make([]bool, len(h))
		for i := range reversed[1:] {
			reversed[i+1] = choice>>i&1 == 1
		}
		s, turn := t.sum(h, scale, reversed)
		off := max(math.Abs(s.LowestDB), math.Abs(s.HighestDB))
		if choice == 0 || off < bestError-equal || off < bestError+equal && turn < bestTurn-1 {
			best, bestError, bestTurn = s, off, turn
		}
	}
	return best
}

// sum adds up the ways with these polarities. turn is by how many degrees the sum's phase turns over the band.
func (t *trial) sum(h [][]complex128, scale []float64, reversed []bool) (s sumShape, turn float64) {
	total := make([]complex128, len(t.freqs))
	for i := range h {
		factor := scale[i]
		if reversed[i] {
			factor = -factor
		}
		for k := range total {
			total[k] += complex(factor, 0) * h[i][k]
		}
	}
	levels := sim.DBs(total)
	phase := sim.UnwrappedDeg(total)
	return sumShape{reversed, slices.Min(levels), slices.Max(levels)}, math.Abs(phase[len(phase)-1] - phase[0])
}
