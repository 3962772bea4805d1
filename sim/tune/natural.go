package tune

import (
	"math"
	"math/cmplx"

	"sixdown/xover"
)

// natural returns for each variable the values that a network for its driver might have: those whose reactance is the driver's
// impedance at one of its way's target frequencies, or the resistance that is as large. What a search knows of crossovers
// in general is here.
func (p *Problem) natural() [][]float64 {
	all := make([][]float64, len(p.vars))
	for w := range p.design.Ways {
		at := p.frequencies(w)
		load := func(f float64) float64 {
			return cmplx.Abs(p.sys.LoadImpedance(w, p.design.Ways[w].Drivers, complex(0, 2*math.Pi*f)))
		}
		for _, v := range p.variablesOf(w) {
			if p.vars[v].Control != "" {
				continue
			}
			for _, f := range at {
				value := load(f)
				switch p.vars[v].Kind {
				case xover.Inductor:
					value /= 2 * math.Pi * f
				case xover.Capacitor:
					value = 1 / (2 * math.Pi * f * value)
				}
				all[v] = append(all[v], value)
			}
		}
	}
	for v := range all {
		if len(all[v]) == 0 {
			all[v] = []float64{p.vars[v].Value}
		}
	}
	return all
}

// frequencies returns the frequencies in Hz that way w should cross at: its own targets', else those of all ways, else the
// middle of the band.
func (p *Problem) frequencies(w int) []float64 {
	of := func(ways []xover.Way) (at []float64) {
		for _, way := range ways {
			for _, t := range way.Targets {
				if t.Frequency > p.freqs[0] && t.Frequency < p.freqs[len(p.freqs)-1] {
					at = append(at, t.Frequency)
				}
			}
		}
		return at
	}
	if at := of(p.design.Ways[w : w+1]); len(at) > 0 {
		return at
	}
	if at := of(p.design.Ways); len(at) > 0 {
		return at
	}
	return []float64{p.freqs[len(p.freqs)/2]}
}

// partsOf returns the names of the parts in an arrangement.
func partsOf(steps []xover.Step) (names []string) {
	var leaves func(e *xover.Expr)
	leaves = func(e *xover.Expr) {
		switch {
		case e == nil:
		case e.Op == xover.Leaf:
			names = append(names, e.Part)
		default:
			for _, arg := range e.Args {
				leaves(arg)
			}
		}
	}
	for _, st := range steps {
		leaves(st.Expr)
	}
	return names
}
