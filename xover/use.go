package xover

import (
	"fmt"
	"math"

	"sixdown/xover/quantity"
)

// checkUse looks at what the networks use, once all is read: each part and driver once, coils that couple
// as coils can, nodes that hold together.
func (p *parser) checkUse() {
	used := map[string]Position{}
	drivers := map[string]bool{}
	networks := make([][]Step, 0, len(p.design.Ways)+1)
	for _, way := range p.design.Ways {
		for _, name := range way.DriverNames() {
			drivers[name] = true
		}
		networks = append(networks, way.Network)
	}
	if p.design.Tone != nil {
		networks = append(networks, p.design.Tone.Network)
	}
	for _, network := range networks {
		for _, step := range network {
			if step.Expr == nil {
				continue
			}
			step.Expr.leaves(func(x *Expr) {
				if first, again := used[x.Part]; again {
					p.fail(x.Pos, fmt.Sprintf("%s is used twice, first in line %d", x.Part, first.Line),
						fmt.Sprintf("give the second a name of its own, perhaps with { same = %q }", x.Part))
					return
				}
				used[x.Part] = x.Pos
			})
		}
	}
	if p.networkFault {
		return
	}
	for i := range p.design.Parts {
		part := &p.design.Parts[i]
		if _, ok := used[part.Name]; !ok {
			p.warn(part.Pos, part.Name+" is defined and not used", "use it in a network, or take it out")
		} else if part.Kind == Potentiometer && !p.turned(part.Name) {
			p.warn(part.Pos, fmt.Sprintf("%s is a potentiometer that no control turns; it stands at %v", part.Name, DefaultTurn),
				fmt.Sprintf("add a table [control.NAME] with part = %q and at", part.Name))
		}
		if len(p.design.Ways) > 0 && part.Same == "" && !p.faulty[part.Name] {
			p.checkSize(part)
		}
	}
	for i := range p.design.Drivers {
		if d := &p.design.Drivers[i]; !drivers[d.Name] {
			p.warn(d.Pos, fmt.Sprintf("driver %q is defined and not used", d.Name), "give it a [[way]], or take it out")
		}
	}
	p.checkCouplings(networks, used)
	if !p.full() && (len(p.design.Ways) == 0) != (p.design.Tone == nil) {
		p.checkWiring()
	}
}

// checkSize warns of a part that no loudspeaker has: most likely a prefix is wrong. The bounds are wider than
// what is sold (common practice, no source).
func (p *parser) checkSize(part *Part) {
	unit := part.Kind.Unit()
	least, most := 0.01, 10e3 // Ω
	switch unit {
	case quantity.Henry:
		least, most = 1e-6, 0.2
	case quantity.Farad:
		least, most = 1e-9, 5e-3
	}
	if part.Value < least || part.Value > most {
		p.warn(part.Pos, fmt.Sprintf("%s is %s; parts of a loudspeaker lie between %s and %s", part.Name,
			quantity.Format(part.Value, unit), quantity.Format(least, unit), quantity.Format(most, unit)), "check the unit's prefix")
	}
}

func (p *parser) turned(part string) bool {
	for _, c := range p.design.Controls {
		if c.Part == part {
			return true
		}
	}
	return false
}

// checkCouplings reports coils that are coupled twice, that no network uses, or that cannot be coupled so
// all at once.
func (p *parser) checkCouplings(networks [][]Step, used map[string]Position) {
	index := map[string]int{} // of the coupled coils
	pairs := map[[2]string]bool{}
	var last Step
	var couplings []Step
	for _, network := range networks {
		for _, step := range network {
			if step.Op != Couple {
				continue
			}
			last = step
			for _, coil := range []string{step.A, step.B} {
				if _, ok := used[coil]; !ok {
					p.fail(step.Pos, fmt.Sprintf("%s is coupled and in no network", coil), "use it in a step too, or take the coupling out")
				}
				if _, ok := index[coil]; !ok {
					index[coil] = len(index)
				}
			}
			if pairs[[2]string{step.A, step.B}] || pairs[[2]string{step.B, step.A}] {
				p.fail(step.Pos, fmt.Sprintf("%s and %s are coupled twice", step.A, step.B), "keep one of them")
				continue
			}
			pairs[[2]string{step.A, step.B}] = true
			couplings = append(couplings, step)
		}
	}
	if !p.full() && !passive(len(index), index, couplings) {
		p.fail(last.Pos, "these couplings cannot all be: the coils would give energy", "make the coefficients smaller; coils that couple tightly to one coil couple to one another too")
	}
}

// leastPassive is what must be left of a coil's inductance when the coils coupled to it are shorted, as a fraction: below
// it the arithmetic of a simulation cannot tell the network from one that makes energy.
const leastPassive = 1e-12

// passive tells whether the matrix of coupling coefficients, with ones on its diagonal, is positive
// definite, which is what makes the stored energy ½ iᵀ L i positive for all currents. It tries the Cholesky
// factorisation (G. H. Golub and C. F. Van Loan, Matrix Computations, 4th ed., 2013, section 4.2).
func passive(n int, index map[string]int, couplings []Step) bool {
	m := make([][]float64, n)
	for i := range m {
		m[i] = make([]float64, n)
		m[i][i] = 1
	}
	for _, c := range couplings {
		a, b := index[c.A], index[c.B]
		m[a][b], m[b][a] = c.K, c.K
	}
	for j := range m {
		for i := j; i < n; i++ {
			sum := m[i][j]
			for k := range j {
				sum -= m[i][k] * m[j][k]
			}
			if i > j {
				m[i][j] = sum / m[j][j]
				continue
			}
			if !(sum > leastPassive) {
				return false
			}
			m[j][j] = math.Sqrt(sum)
		}
	}
	return true
}
