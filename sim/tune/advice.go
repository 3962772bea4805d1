package tune

import (
	"cmp"
	"math"
	"slices"

	"sixdown/xover"
)

// A Worth is what one part contributes: what the objective would be without it, the others tuned anew.
type Worth struct {
	Part    string
	Open    bool    // it is best left out as an open circuit, not as a short
	Without float64 // dB², the objective then; infinite if the network does not work without it, or the limit on the impedance cannot be held
	Costs   float64 // dB², how much that is more than with it
	Useless bool    // it costs next to nothing
}

// A part is useless if leaving it out costs less than this share of the objective and less than this in dB².
const (
	uselessShare = 0.01
	uselessDB2   = 1e-3
	shorted      = 0.5 // of the least impedance with it, below which a short is none that could be meant
)

// missingPart returns the value of a part that is as good as not there, shorted or open, in Ω, H or F. The values are far beyond any
// that is real, and near enough for the circuit to be solved.
func missingPart(k xover.Kind, open bool) float64 {
	small, large := 1e-6, 1e9
	switch k {
	case xover.Inductor:
		small, large = 1e-10, 1e4
	case xover.Capacitor:
		small, large = 10, 1e-16 // a large capacitor is the short
	}
	if open {
		return large
	}
	return small
}

// Worths returns what each part that may be moved is worth at values, which should be an optimum; the least first. Controls are no parts.
func (p *Problem) Worths(values []float64) ([]Worth, error) {
	x, err := p.logs(values)
	if err != nil {
		return nil, err
	}
	e, err := p.newEvaluator()
	if err != nil {
		return nil, err
	}
	d := p.newDescent(e)
	if err := d.begin(x); err != nil {
		return nil, err
	}
	with := d.f
	least, _, err := p.leastImpedance(x, nil)
	if err != nil {
		return nil, err
	}
	var all []Worth
	for v := range p.vars {
		if p.vars[v].Control != "" {
			continue
		}
		w := Worth{Part: p.vars[v].Part, Without: math.Inf(1)}
		d.frozen[v] = true
		for _, open := range []bool{true, false} { // open first: of two that do as well it is the safer
			y := slices.Clone(x)
			y[v] = math.Log(missingPart(p.vars[v].Kind, open))
			if d.begin(y) != nil {
				continue // a resonance without loss
			}
			if err := d.run(25); err != nil {
				return nil, err
			}
			if !(d.missed < 1e-6) || !(d.f < w.Without*(1-1e-9)) {
				continue
			}
			// A short must not be one of the amplifier, which the sum does not show.
			if !open {
				ohm, _, err := p.leastImpedance(d.x, nil)
				if err != nil || ohm < shorted*least {
					continue
				}
			}
			w.Without, w.Open = d.f, open
		}
		d.frozen[v] = false
		w.Costs = w.Without - with
		w.Useless = w.Costs < max(uselessShare*with, uselessDB2*p.scale)
		all = append(all, w)
	}
	slices.SortStableFunc(all, func(a, b Worth) int { return cmp.Compare(a.Costs, b.Costs) })
	return all, nil
}
