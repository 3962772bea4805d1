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

// WindingOhm returns the resistance in Ω that a coil of that many H is taken to have of which neither a list nor the design says any:
// 0.35 Ω for 1 mH (common practice, no source), and others as of the same wire.
func WindingOhm(henry float64) float64 { return 0.35 * math.Pow(henry/1e-3, sameWire) }

// windings returns the resistances of coils: those of the list where it states them, else of the design's own coil, wound of the
// same wire, else WindingOhm's. Of several coils of one value, such as with cores and without, it has the mean in ln.
func (p *Problem) windings(source Source) windings {
	coils := make(windings, len(p.vars))
	for v := range p.vars {
		q := &p.vars[v]
		if q.Kind != xover.Inductor {
			continue
		}
		part := p.leader(p.design.Part(q.Part))
		w := &winding{}
		same := 0. // coils of the last value
		for _, item := range source.Within(preferred.Inductor, q.Low, q.High) {
			if !(item.DCR > 0) {
				continue
			}
			lnL, lnR := math.Log(item.Value), math.Log(item.DCR)
			if n := len(w.lnL); n > 0 && lnL-w.lnL[n-1] < 1e-9 {
				same++
				w.lnR[n-1] += (lnR - w.lnR[n-1]) / same
				continue
			}
			same = 1
			w.lnL, w.lnR = append(w.lnL, lnL), append(w.lnR, lnR)
		}
		if len(w.lnL) == 0 {
			lnL, ohm := math.Log(part.Value), part.DCR
			if !(ohm > 0) {
				ohm = WindingOhm(part.Value)
			}
			w.lnL, w.lnR = []float64{lnL}, []float64{math.Log(ohm)}
		}
		if len(w.lnL) == 1 {
			w.lnL, w.lnR = append(w.lnL, w.lnL[0]+1), append(w.lnR, w.lnR[0]+sameWire)
		}
		coils[v] = w
	}
	return coils
}

// fixedOhms returns windings by which coils have these resistances in Ω, 0 for what the design states, whatever their values do about x.
func (p *Problem) fixedOhms(x, ohms []float64) windings {
	if ohms == nil {
		return nil
	}
	coils := make(windings, len(x))
	for v, ohm := range ohms {
		if ohm > 0 {
			lnR := math.Log(ohm)
			coils[v] = &winding{[]float64{x[v], x[v] + 1}, []float64{lnR, lnR}}
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
