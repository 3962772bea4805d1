package audioio

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"

	"sixdown/sim"
	"sixdown/sim/circuit"
)

// A Suspect is a part that would explain a failed verification by itself if it had another value.
type Suspect struct {
	Part      string
	Nominal   float64 // Ω, H or F
	Estimate  float64 // the value that fits the measurement best
	Sigma     float64 // how many standard deviations Estimate lies from Nominal
	Explained float64 // share of the squared deviation that goes away at Estimate, 0 … 1
}

// explains is the least share of the deviation that a part must explain to be suspected.
const explains = 0.8

// suspects fits each part's value by itself to the logarithms of measured over predicted gains, by
// Gauss-Newton with the exact derivatives, and returns those that explain most of the deviation, the best
// first. Parts with several branches (potentiometers) are passed over.
func (p *predictor) suspects(sys *sim.System, points []Point) ([]Suspect, error) {
	before := 0.0
	for i := range points {
		before += deviation(&points[i], points[i].Fitted)
	}
	var found []Suspect
	seen := map[string]bool{}
	for b := range p.net.Branches {
		x := &p.net.Branches[b]
		if x.Kind == circuit.Port || x.Value == 0 || seen[x.Name] || len(sys.PartBranches(x.Name)) != 1 {
			continue
		}
		seen[x.Name] = true
		s, err := p.fit(b, points, before)
		if err != nil {
			return nil, err
		}
		if s.Explained >= explains {
			found = append(found, s)
		}
	}
	slices.SortStableFunc(found, func(a, b Suspect) int { return cmp.Compare(b.Explained, a.Explained) })
	return found, nil
}

// deviation is the squared distance of a point from a gain, on the logarithmic scale; 0 if it does not count.
func deviation(p *Point, gain complex128) float64 {
	if !p.Counted {
		return 0
	}
	d := cmplx.Abs(logRatio(p.Measured, gain))
	if math.IsNaN(d) || math.IsInf(d, 0) {
		return 0
	}
	return d * d
}

// fit finds the value of branch b that explains the points best. Steps are limited to a factor of two, and
// one that makes things worse is halved.
func (p *predictor) fit(b int, points []Point, before float64) (Suspect, error) {
	nominal := p.net.Branches[b].Value
	s := Suspect{Part: p.net.Branches[b].Name, Nominal: nominal, Estimate: nominal}
	defer p.sweep.SetValue(b, nominal)
	least, u := before, 0.0 // ln(value/nominal)
	var slope, stiff float64
	for range 12 {
		if err := p.look(b, nominal*math.Exp(u)); err != nil {
			return s, err
		}
		slope, stiff = p.normal(b, points)
		if !(stiff > 0) {
			return s, nil
		}
		step := min(max(slope/stiff, -math.Ln2), math.Ln2)
		if math.Abs(step) < 1e-9 {
			break
		}
		better := false
		for range 6 {
			if err := p.look(b, nominal*math.Exp(u+step)); err != nil {
				return s, err
			}
			if now := p.misfit(points); now < least {
				least, u, better = now, u+step, true
				break
			}
			step /= 2
		}
		if !better {
			break
		}
	}
	s.Estimate = nominal * math.Exp(u)
	s.Explained = 1 - least/before
	counted := 0
	for i := range points {
		if points[i].Counted {
			counted += 2 // a level and a phase
		}
	}
	noise := math.Sqrt(max(least, 1e-18) / float64(max(counted-1, 1)))
	s.Sigma = math.Abs(u) * math.Sqrt(stiff) / noise
	return s, nil
}

// look solves with another value of branch b, derivatives included.
func (p *predictor) look(b int, value float64) error {
	if err := p.sweep.SetValue(b, value); err != nil {
		return err
	}
	return p.sweep.Gradient()
}

// normal are the two sides of the normal equation for ln(value of branch b), at the present value.
func (p *predictor) normal(b int, points []Point) (slope, stiff float64) {
	gain, grad := make([]complex128, p.n), make([]complex128, p.n)
	value := p.sweep.Value(b)
	for i := range points {
		w, k := i/p.n, i%p.n
		if k == 0 {
			p.sweep.Gain(gain, w)
			p.sweep.GainGradient(grad, w, b)
		}
		if !points[i].Counted || gain[k] == 0 {
			continue
		}
		d := logRatio(points[i].Measured, gain[k])
		j := grad[k] * complex(value, 0) / gain[k]
		if cmplx.IsNaN(d) || cmplx.IsInf(d) {
			continue
		}
		slope += real(j)*real(d) + imag(j)*imag(d)
		stiff += real(j)*real(j) + imag(j)*imag(j)
	}
	return slope, stiff
}

// misfit is the squared deviation of the points from the present gains.
func (p *predictor) misfit(points []Point) float64 {
	gain := make([]complex128, p.n)
	sum := 0.0
	for i := range points {
		if i%p.n == 0 {
			p.sweep.Gain(gain, i/p.n)
		}
		sum += deviation(&points[i], gain[i%p.n])
	}
	return sum
}
