package tune

import (
	"errors"
	"fmt"

	"sixdown/sim/circuit"
	"sixdown/xover"
)

// leastTurn is how near a control may come to either end while it is searched for: at the end itself a part of its track is gone, and
// the arrangement another.
const leastTurn = 1e-3

// OffTheEnds returns d with the controls that stand at an end of their tracks, or nearly, turned a thousandth off it, for
// MoveSettings. It changes d.
func OffTheEnds(d *xover.Design) {
	for i := range d.Controls {
		c := &d.Controls[i]
		c.At = min(max(c.At, leastTurn), 1-leastTurn)
	}
}

// MoveSettings makes variables of the settings of all controls, beside the parts that may be moved. The design must have been made
// into a System with OffTheEnds.
func (p *Problem) MoveSettings() error {
	if len(p.design.Controls) == 0 {
		return errors.New("tune: the design has no controls to turn; give it [control.NAME]")
	}
	for _, q := range []*Problem{p, p.rough} {
		for _, c := range p.design.Controls {
			if c.At < leastTurn || c.At > 1-leastTurn {
				return fmt.Errorf("tune: control %q is at %g, an end of its track; turn it a little off", c.Name, c.At)
			}
			q.vars = append(q.vars, Variable{Part: c.Part, Control: c.Name, Kind: xover.Potentiometer, Value: c.At, Low: leastTurn, High: 1 - leastTurn})
			q.branches = append(q.branches, p.sys.PartBranches(c.Part))
		}
	}
	return nil
}

// name is what the variable is called: the control's name or the part's.
func (q *Variable) name() string {
	if q.Control != "" {
		return q.Control
	}
	return q.Part
}

// turn gives the two parts of a track, or the one that is used of it, what they have at a setting.
func (p *Problem) turn(s *circuit.Sweep, v int, at float64) error {
	part := p.leader(p.design.Part(p.vars[v].Part))
	share := part.Fraction(at)
	for i, b := range p.branches[v] {
		if i == 1 {
			share = 1 - share
		}
		if err := s.SetValue(b, part.Value*share); err != nil {
			return err
		}
	}
	return nil
}

// rates returns by how much the value of each branch of variable v moves with x, the logarithm of the variable.
func (p *Problem) rates(v int, value float64) []float64 {
	rates := make([]float64, len(p.branches[v]))
	if p.vars[v].Control == "" {
		for i := range rates {
			rates[i] = value
		}
		return rates
	}
	part := p.leader(p.design.Part(p.vars[v].Part))
	for i, sign := range []float64{1, -1}[:len(rates)] {
		rates[i] = sign * part.Value * part.FractionSlope(value) * value
	}
	return rates
}
