package cli

import (
	"fmt"
	"strings"

	"sixdown/xover/align"
	"sixdown/xover/ladder"
	"sixdown/xover/quantity"
)

// A crossover is a set of sized ways, from the lowest to the highest.
type crossover struct {
	title    string // "Linkwitz-Riley 4 at 2.2 kHz"
	sections []section

	// Of an all-pass arrangement:
	midReversed *bool   // what the sum needs; nil: not such an arrangement
	midExcessDB float64 // by how much the mid is too loud
}

// A section is the network of one way.
type section struct {
	name      string    // low, mid or high
	targets   []string  // in the words of the design file; none in an all-pass arrangement
	load      float64   // Ω
	crossings []float64 // Hz, one or two
	network   ladder.Network
	steps     []string
	parts     []ladder.NamedPart
}

// size returns the crossover that the options, checked, ask for.
func (o *crossoverOptions) size() (*crossover, error) {
	names := []string{"low", "high"}
	if len(o.at) == 2 {
		names = []string{"low", "mid", "high"}
	}
	c := &crossover{}
	networks := c.allPass
	if o.arrangement == plainArrangement {
		a, words, err := o.alignment()
		if err != nil {
			return nil, err
		}
		c.title = strings.Replace(strings.ToUpper(words[:1])+words[1:], "-riley", "-Riley", 1)
		networks = func(o *crossoverOptions, load float64) ([]ladder.Network, error) { return plainNetworks(a, o.at, load) }
	} else {
		c.title = fmt.Sprintf("All-pass three-way of order %d", o.order)
	}
	for i, f := range o.at {
		c.title += [2]string{" at ", " and "}[i] + hertz(f)
	}
	var namer ladder.Namer
	for i, name := range names {
		load := o.load[min(i, len(o.load)-1)]
		// Every way's network is that of a set in which all ways have its load.
		all, err := networks(o, load)
		if err != nil {
			return nil, fmt.Errorf("size: %w", err)
		}
		w := section{name: name, load: load, network: all[i], crossings: o.at[max(i-1, 0):min(i+1, len(o.at))]}
		w.steps, w.parts = w.network.Steps(&namer)
		if o.arrangement == plainArrangement {
			w.targets = o.targets(i)
		}
		c.sections = append(c.sections, w)
	}
	return c, nil
}

// alignment returns the alignment asked for and what it is called, "chebyshev 3 ripple 0.5 dB".
func (o *crossoverOptions) alignment() (*align.Alignment, string, error) {
	shape, err := align.ParseShape(o.shape)
	if err != nil {
		return nil, "", fmt.Errorf("--%w", err)
	}
	spec := align.Spec{Shape: shape, Order: o.order, RippleDB: o.rippleDB}
	if o.reference != "" {
		if spec.Reference, err = align.ParseReference(o.reference); err != nil {
			return nil, "", fmt.Errorf("--%w", err)
		}
	}
	a, err := align.New(spec)
	if err != nil {
		return nil, "", fmt.Errorf("size: %w", err)
	}
	return a, o.alignmentWords(), nil
}

// alignmentWords names the alignment as a target in the design file does.
func (o *crossoverOptions) alignmentWords() string {
	words := fmt.Sprintf("%s %d", o.shape, o.order)
	if o.rippleDB != 0 {
		words += " ripple " + quantity.Format(o.rippleDB, quantity.Decibel)
	}
	if o.reference != "" && o.reference != align.Magnitude.String() {
		words += " reference " + o.reference
	}
	return words
}

// targets returns the targets of way i in the words of the design file.
func (o *crossoverOptions) targets(i int) []string {
	var targets []string
	if i > 0 {
		targets = append(targets, fmt.Sprintf("high-pass %s at %s", o.alignmentWords(), quantity.Format(o.at[i-1], quantity.Hertz)))
	}
	if i < len(o.at) {
		targets = append(targets, fmt.Sprintf("low-pass %s at %s", o.alignmentWords(), quantity.Format(o.at[i], quantity.Hertz)))
	}
	return targets
}

// plainNetworks returns the networks of two or three ways that all drive load.
func plainNetworks(a *align.Alignment, at []float64, load float64) ([]ladder.Network, error) {
	if len(at) == 2 {
		low, mid, high, err := ladder.ThreeWayPlain(a, at[0], at[1], load)
		return []ladder.Network{low, mid, high}, err
	}
	low, err := ladder.LowPass(a, at[0], load)
	if err != nil {
		return nil, err
	}
	high, err := ladder.HighPass(a, at[0], load)
	return []ladder.Network{low, high}, err
}

// allPass returns the networks of an all-pass three-way and notes its polarity. Which polarity there is depends
// on the order, so the default is the one that exists.
func (c *crossover) allPass(o *crossoverOptions, load float64) ([]ladder.Network, error) {
	reversed := o.mid == "reversed" || o.mid == "" && o.order == 2
	t, err := ladder.ThreeWayAllPass(o.order, reversed, o.at[0], o.at[1], load)
	if err != nil {
		return nil, err
	}
	c.midReversed, c.midExcessDB = &t.MidReversed, t.MidExcessDB
	return []ladder.Network{t.Low, t.Mid, t.High}, nil
}
