package tune

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"

	"sixdown/xover"
)

// An Explanation says what a change of values did.
type Explanation struct {
	Changes []Change // by part, what matters most first
	Octaves []Octave // by way, then the sum, rising
	Scaled  []Scaled // ways of which the whole network became one for another impedance
}

// A Scaled is a way whose parts were moved together: resistors and coils by about Factor, capacitors by about its reciprocal.
type Scaled struct {
	Way    string
	Factor float64
}

// A way counts as scaled if its parts moved by this factor on the whole, and so many of them toward it.
const (
	muchScaled  = 1.5
	mostOfParts = 0.75
)

// scaled returns the ways that were scaled from a to b, logarithms of values.
func (p *Problem) scaled(a, b []float64) []Scaled {
	var all []Scaled
	for w := range p.design.Ways {
		vars := p.variablesOf(w)
		sum, toward := 0.0, 0
		moves := make([]float64, len(vars))
		for i, v := range vars {
			if moves[i] = b[v] - a[v]; p.vars[v].Kind == xover.Capacitor {
				moves[i] = -moves[i]
			}
			sum += moves[i] / float64(len(vars))
		}
		for _, m := range moves {
			if m*sum > 0 && math.Abs(m) > leastChange {
				toward++
			}
		}
		if len(vars) > 2 && math.Abs(sum) > math.Log(muchScaled) && float64(toward) >= mostOfParts*float64(len(vars)) {
			all = append(all, Scaled{p.sys.Names()[w], math.Exp(sum)})
		}
	}
	return all
}

// A Change is what one part's change did, found by undoing it alone.
type Change struct {
	Part          string  // or control
	Before, After float64 // Ω, H or F; of a control settings
	Way           string  // whose level it changes most
	From, To      float64 // Hz, the octave of the band in which it does so
	DB            float64 // mean change of that way's level there, from undone to done
	Costs         float64 // dB², what undoing it alone adds to the objective
}

// An Octave is how far a way is from its target, or the sum from its aim, in one octave of the band, in dB rms.
type Octave struct {
	Way           string  // "": the sum
	From, To      float64 // Hz
	Before, After float64 // dB
}

// leastChange is the ratio in ln below which a part counts as unchanged.
const leastChange = 0.005

// Explain compares values before with values after, by variable. ohms are the resistances in Ω that coils have with the values
// after, by variable, 0 for what the design states; nil: all as the design states.
func (p *Problem) Explain(before, after, ohms []float64) (*Explanation, error) {
	a, err := p.logs(before)
	if err != nil {
		return nil, err
	}
	b, err := p.logs(after)
	if err != nil {
		return nil, err
	}
	e, err := p.newEvaluatorWith(p.fixedOhms(b, ohms))
	if err != nil {
		return nil, err
	}
	if err := e.measureAt(b); err != nil {
		return nil, err
	}
	f, err := e.objective(b)
	if err != nil {
		return nil, err
	}
	x := &Explanation{Scaled: p.scaled(a, b)}
	done := e.wayLevels()
	counts := p.counting()
	octaves := p.octaves()
	offAfter := e.offs(octaves)
	names := p.sys.Names()
	for v := range p.vars {
		if math.Abs(a[v]-b[v]) < leastChange {
			continue
		}
		y := slices.Clone(b)
		y[v] = a[v]
		g, err := e.objective(y)
		if err != nil {
			continue
		}
		c := Change{Part: p.vars[v].name(), Before: before[v], After: after[v], Costs: g - f}
		undone := e.wayLevels()
		for w := range names {
			for _, o := range octaves {
				if !counts[w][o[0]] && !counts[w][o[len(o)-1]] {
					continue
				}
				mean := 0.0
				for _, k := range o {
					mean += (done[w][k] - undone[w][k]) / float64(len(o))
				}
				if math.Abs(mean) > math.Abs(c.DB) {
					c.Way, c.DB, c.From, c.To = names[w], mean, p.freqs[o[0]], p.freqs[o[len(o)-1]]
				}
			}
		}
		x.Changes = append(x.Changes, c)
	}
	slices.SortStableFunc(x.Changes, func(a, b Change) int { return cmp.Compare(b.Costs, a.Costs) })
	if e, err = p.newEvaluator(); err != nil {
		return nil, err
	}
	if _, err := e.objective(a); err != nil {
		return nil, err
	}
	for i, o := range e.offs(octaves) {
		o.After = offAfter[i].Before
		x.Octaves = append(x.Octaves, o)
	}
	return x, nil
}

// counting reports for each way and grid point whether the way's level there counts by itself: where its target is high enough, or
// everywhere if it has none.
func (p *Problem) counting() [][]bool {
	counts := make([][]bool, p.outputs())
	for w := range counts {
		counts[w] = make([]bool, len(p.freqs))
		i := slices.IndexFunc(p.terms, func(t term) bool { return t.way == w })
		for k := range counts[w] {
			counts[w][k] = i < 0
		}
		if i >= 0 {
			for _, k := range p.terms[i].at {
				counts[w][k] = true
			}
		}
	}
	return counts
}

// octaves returns the grid points of each octave of the band.
func (p *Problem) octaves() [][]int {
	lo, hi := p.freqs[0], p.freqs[len(p.freqs)-1]
	n := max(1, int(math.Round(math.Log2(hi/lo))))
	all := make([][]int, n)
	for k, f := range p.freqs {
		i := min(int(float64(n)*math.Log(f/lo)/math.Log(hi/lo)), n-1)
		all[i] = append(all[i], k)
	}
	return all
}

// wayLevels returns the levels in dB of the ways over the grid at the present place; what cannot be heard is at silent.
func (e *evaluator) wayLevels() [][]float64 {
	levels := make([][]float64, len(e.gain))
	for w, gain := range e.gain {
		levels[w] = make([]float64, len(gain))
		for k, g := range gain {
			levels[w][k] = max(dbPerNeper*math.Log(cmplx.Abs(g)), silent)
		}
	}
	return levels
}

// offs returns by how much the ways and the sum are off in each octave at the present place, in Octave.Before.
func (e *evaluator) offs(octaves [][]int) []Octave {
	var all []Octave
	names := e.p.sys.Names()
	for i := range e.p.terms {
		t := &e.p.terms[i]
		if t.ear > 0 {
			continue
		}
		for _, o := range octaves {
			square, n := 0.0, 0
			for j, k := range t.at {
				if k >= o[0] && k <= o[len(o)-1] {
					d := e.level(t, k) - t.aim[j] - e.mean[t.level]
					square += d * d
					n++
				}
			}
			if n == 0 {
				continue
			}
			oct := Octave{From: e.p.freqs[o[0]], To: e.p.freqs[o[len(o)-1]], Before: math.Sqrt(square / float64(n))}
			if t.way >= 0 {
				oct.Way = names[t.way]
			}
			all = append(all, oct)
		}
	}
	return all
}
