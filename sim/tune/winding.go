package tune

import (
	"math"
	"slices"

	"sixdown/xover"
	"sixdown/xover/preferred"
)

// windings are by variable the resistances that coils of any value would have; nil for what is no coil, or one without
// resistance.
type windings []*winding

// A winding gives a coil's resistance as straight lines in ln L and ln R, carried on beyond their ends.
type winding struct{ lnL, lnR []float64 }

// leastOhm is the resistance with which a coil is compiled that the design states none for, before a list gives it one.
const leastOhm = 1e-6 // Ω

// sameWire is the power of L with which the resistance of coils of the same wire and shape goes. N turns fill an area in
// proportion to N, so the sides of a coil of Brooks's shape, and its diameter, go with N^½; L goes with N²·N^½ and the length
// of the wire with N·N^½, so that R goes with L^(1.5/2.5).
const sameWire = 0.6

// windings returns the resistances of coils: those of the list where it states them, else of the design's own coil, wound of the
// same wire.
func (p *Problem) windings(source Source) windings {
	coils := make(windings, len(p.vars))
	for v := range p.vars {
		q := &p.vars[v]
		if q.Kind != xover.Inductor {
			continue
		}
		part := p.leader(p.design.Part(q.Part))
		w := &winding{}
		for _, item := range source.Within(preferred.Inductor, q.Low, q.High) {
			if item.DCR > 0 {
				w.lnL, w.lnR = append(w.lnL, math.Log(item.Value)), append(w.lnR, math.Log(item.DCR))
			}
		}
		switch {
		case len(w.lnL) == 1:
			w.lnL, w.lnR = append(w.lnL, w.lnL[0]+1), append(w.lnR, w.lnR[0]+sameWire)
		case len(w.lnL) == 0 && part.DCR > 0:
			lnL, lnR := math.Log(part.Value), math.Log(part.DCR)
			w.lnL, w.lnR = []float64{lnL, lnL + 1}, []float64{lnR, lnR + sameWire}
		}
		if len(w.lnL) > 0 {
			coils[v] = w
		}
	}
	return coils
}

// ohm returns the resistance in Ω of the coil of ln value x; 0 where it does not move.
func (c windings) ohm(v int, x float64) float64 {
	if c == nil || c[v] == nil {
		return 0
	}
	i := c[v].piece(x)
	return math.Exp(c[v].lnR[i] + (x-c[v].lnL[i])*c[v].steep(i))
}

// slope returns the derivative of ohm by x, in Ω.
func (c windings) slope(v int, x float64) float64 {
	if c == nil || c[v] == nil {
		return 0
	}
	return c.ohm(v, x) * c[v].steep(c[v].piece(x))
}

// piece returns the index of the line for x.
func (w *winding) piece(x float64) int {
	i, _ := slices.BinarySearch(w.lnL, x)
	return min(max(i-1, 0), len(w.lnL)-2)
}

// steep returns the slope of line i.
func (w *winding) steep(i int) float64 { return (w.lnR[i+1] - w.lnR[i]) / (w.lnL[i+1] - w.lnL[i]) }
