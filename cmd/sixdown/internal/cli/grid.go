package cli

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"github.com/spf13/cobra"

	"sixdown/audioio/signal"
	"sixdown/xover"
	"sixdown/xover/quantity"
)

// Bounds on the grids that may be asked for.
const (
	maxPoints    = 200_000
	minFrequency = 1e-3 // Hz
	maxFrequency = 1e7  // Hz
)

// gridOptions say at which frequencies an answer is wanted.
type gridOptions struct {
	at        []float64 // Hz
	from, to  float64   // Hz
	perOctave int
	spaced    bool // one of from, to and perOctave is given
}

// addTo adds the flags with their defaults.
func (g *gridOptions) addTo(cmd *cobra.Command) {
	g.from, g.to, g.perOctave = 20, 20e3, 24
	cmd.Flags().Var(&quantityList{unit: quantity.Hertz, values: &g.at}, "at", "answer at these frequencies, as in `\"1 kHz,2 kHz\"`")
	cmd.Flags().Var(&quantityFlag{unit: quantity.Hertz, value: &g.from}, "from", "lowest `frequency` of an even grid")
	cmd.Flags().Var(&quantityFlag{unit: quantity.Hertz, value: &g.to}, "to", "highest `frequency` of an even grid")
	cmd.Flags().IntVar(&g.perOctave, "per-octave", g.perOctave, "how many `points` an octave of that grid has, at least")
}

// read notes which of the flags are given, and checks them.
func (g *gridOptions) read(cmd *cobra.Command) error {
	for _, name := range []string{"from", "to", "per-octave"} {
		if !cmd.Flags().Changed(name) {
			continue
		}
		if g.spaced = true; len(g.at) > 0 {
			return usageFault("command line", fmt.Sprintf("both --at and --%s are given", name), "give either single frequencies or a grid")
		}
	}
	for _, f := range g.at {
		if err := checkFrequency("--at", f); err != nil {
			return err
		}
	}
	if err := cmp.Or(checkFrequency("--from", g.from), checkFrequency("--to", g.to)); err != nil {
		return err
	}
	if !(g.to > g.from) {
		return usageFault("--to", fmt.Sprintf("%s is not above %s, where the grid begins", quantity.Format(g.to, quantity.Hertz), quantity.Format(g.from, quantity.Hertz)), "give --from the lower and --to the higher frequency")
	}
	if g.perOctave < 1 || g.points() > maxPoints {
		return usageFault("--per-octave", fmt.Sprintf("%d points an octave cannot be had", g.perOctave), fmt.Sprintf("give 1 or more, and no more than makes %d points in all", maxPoints))
	}
	return nil
}

func checkFrequency(where string, f float64) error {
	if f == 0 {
		return usageFault(where, "0 Hz is direct current, at which nothing sounds and levels in dB have no end", "give a positive frequency")
	}
	if !(f >= minFrequency && f <= maxFrequency) {
		return usageFault(where, fmt.Sprintf("%s is outside what can be asked", quantity.Format(f, quantity.Hertz)), "give a frequency from 0.001 Hz to 10 MHz")
	}
	return nil
}

// points is how many points the even grid has.
func (g *gridOptions) points() int {
	n := math.Ceil(float64(g.perOctave)*math.Log2(g.to/g.from) - 1e-9) // a whole number of octaves stays one
	return int(min(n, 2*maxPoints)) + 1
}

// even returns the grid from g.from to g.to, both included, equally spaced in log frequency, perOctave or a
// little more to the octave.
func (g *gridOptions) even() []float64 {
	freqs := make([]float64, g.points())
	last := float64(len(freqs) - 1)
	for i := range freqs {
		freqs[i] = g.from * math.Pow(g.to/g.from, float64(i)/last)
	}
	freqs[len(freqs)-1] = g.to
	return freqs
}

// frequencies returns what is asked for: the single frequencies, or the even grid, or, if nothing is said and
// the answer is for people, the third-octaves of ISO 266 from 20 Hz to 20 kHz with the design's targets among them.
func (g *gridOptions) frequencies(d *xover.Design, forPeople bool) []float64 {
	if len(g.at) > 0 {
		return g.at
	}
	if g.spaced || !forPeople {
		return g.even()
	}
	return thirdOctaves(d, g.from, g.to)
}

// thirdOctaves are the third-octaves of ISO 266 between two frequencies in Hz, with the design's targets among them.
func thirdOctaves(d *xover.Design, from, to float64) []float64 {
	var freqs []float64
	for _, b := range signal.ThirdOctaves(from, to) {
		freqs = append(freqs, b.Nominal)
	}
	for _, w := range d.Ways {
		for _, t := range w.Targets {
			freqs = append(freqs, t.Frequency)
		}
	}
	slices.Sort(freqs)
	return slices.Compact(freqs)
}
