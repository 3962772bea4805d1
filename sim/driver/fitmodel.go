package driver

import (
	"math"
	"math/cmplx"
	"strconv"
)

// A Coil is a model of the voice coil beyond its DC resistance.
type Coil uint8

// The models of a voice coil. The zero value leaves the choice to the data.
const (
	AutoCoil       Coil = iota
	NoCoil              // a resistance alone
	PlainCoil           // Le
	OneLoss             // Le + R2 ∥ L2
	TwoLosses           // Le + R2 ∥ L2 + R3 ∥ L3
	SemiInductance      // Leach's K·sⁿ
)

// params is how many unknowns each model has.
func (c Coil) params() int { return [...]int{0, 0, 1, 3, 5, 2}[c] }

// body says what the cone and the box do.
type body uint8

const (
	still  body = iota // no motion shows
	single             // one resonance: free air, or a closed box
	vented             // two, of driver and vent
)

func (b body) params() int { return 3 * int(b) }

// A model is an equivalent circuit with its unknowns. All but n are held as logarithms, n by its logit, so
// whatever a search does, every element stays positive and the circuit passive.
type model struct {
	coil   Coil
	body   body
	extras int
	p      []float64
}

// The unknowns, in this order: Re; the coil's; the body's: fs, Res, Qms, then fb, α and QL if it is vented;
// f, R and Q of each further resonance. Frequencies are in rad/s. The semi-inductance is known by its |Z| at
// 1 kHz, which the data say better than K.
const semiAt = 2 * math.Pi * 1000 // rad/s

func (m *model) size() int   { return m.extrasAt() + 3*m.extras }
func (m *model) bodyAt() int { return 1 + m.coil.params() }
func (m *model) extrasAt() int {
	return m.bodyAt() + m.body.params()
}

// clone returns a copy to change.
func (m *model) clone() *model {
	c := *m
	c.p = append([]float64(nil), m.p...)
	return &c
}

// values returns the unknowns themselves: the exponentials, and n.
func (m *model) values(dst []float64) {
	for i, p := range m.p {
		dst[i] = math.Exp(p)
	}
	if m.coil == SemiInductance {
		dst[2] = 1 / (1 + math.Exp(-m.p[2]))
	}
}

// impedance returns Z(jw) for the given values and stores its derivatives with respect to the unknowns as
// they are held.
func (m *model) impedance(v []float64, w float64, d []complex128) complex128 {
	z := complex(v[0], 0)
	d[0] = z
	switch m.coil {
	case PlainCoil, OneLoss, TwoLosses:
		d[1] = complex(0, w*v[1])
		z += d[1]
		for k := 2; k < m.bodyAt(); k += 2 {
			z += lossPair(v[k:], w, d[k:])
		}
	case SemiInductance:
		n := v[2]
		ln := complex(math.Log(w/semiAt), math.Pi/2)
		d[1] = complex(v[1], 0) * cmplx.Exp(complex(n, 0)*ln)
		d[2] = d[1] * ln * complex(n*(1-n), 0)
		z += d[1]
	}
	k := m.bodyAt()
	switch m.body {
	case single:
		z += tank(v[k:], w, d[k:])
	case vented:
		z += ventedBox(v[k:], w, d[k:])
	}
	for k = m.extrasAt(); k < len(v); k += 3 {
		z += tank(v[k:], w, d[k:])
	}
	return z
}

// lossPair is a resistance v[0] ∥ an inductance v[1].
func lossPair(v []float64, w float64, d []complex128) complex128 {
	y := w * v[1] / v[0]
	part := inverse(y)           // R/(R + jwL)
	rest := complex(0, y) * part // jwL/(R + jwL)
	z := complex(v[0], 0) * rest
	d[0], d[1] = z*rest, z*part
	return z
}

// detuning returns j(w/w0 - w0/w) and its derivative with respect to ln w0.
func detuning(w, w0 float64) (x, dx complex128) {
	return complex(0, w/w0-w0/w), complex(0, -w/w0-w0/w)
}

// tank is a resonance at v[0], R v[1], Q v[2].
func tank(v []float64, w float64, d []complex128) complex128 {
	up, down := w/v[0], v[0]/w
	y := v[2] * (up - down)
	part := inverse(y)
	z := complex(v[1], 0) * part
	t := z * part
	d[0] = t * complex(0, v[2]*(up+down))
	d[1] = z
	d[2] = t * complex(0, -y)
	return z
}

// inverse returns 1/(1 + jy) at a fraction of what a complex division costs.
func inverse(y float64) complex128 {
	g := 1 / (1 + y*y)
	return complex(g, -y*g)
}

// ventedBox is a driver's motional branch, a tank as above, with the box beside it: the compliance of its air, α
// times stiffer than the driver's suspension, as the inductance Lces/α; in series with it the vent's mass as a
// capacitance that resonates with it at v[3]; and the leakage as a resistance, QL its Q. v[4] is α, v[5] QL.
//
// R. H. Small, "Vented-Box Loudspeaker Systems", Part I, J. Audio Eng. Soc. 21(5), 363–372, 1973.
func ventedBox(v []float64, w float64, d []complex128) complex128 {
	ws, r, q, wb, alpha, ql := v[0], complex(v[1], 0), complex(v[2], 0), v[3], v[4], v[5]
	xs, dxs := detuning(w, ws)
	xb, dxb := detuning(w, wb)
	x := r / q * complex(wb/(alpha*ws), 0) // reactance of Lceb at wb
	zb := x * (complex(1/ql, 0) + xb)
	yb := 1 / zb
	y := (1+q*xs)/r + yb
	z := 1 / y
	// dz = -z²·dy; r sets the level of everything.
	d[0] = -z * z * (q*dxs/r + yb)
	d[1] = z
	d[2] = -z * z * (q*xs/r + yb)
	d[3] = z * z * (yb + yb*yb*x*dxb)
	d[4] = -z * z * yb
	d[5] = -z * z * yb * yb * x * complex(1/ql, 0)
	return z
}

// semi returns the semi-inductance.
func (m *model) semi(v []float64) Leach {
	return Leach{K: v[1] / math.Pow(semiAt, v[2]), N: v[2]}
}

// circuit returns the model as a chain, for these values.
func (m *model) circuit(v []float64) chain {
	ch := chain{{name: "e", r: v[0]}}
	switch m.coil {
	case PlainCoil, OneLoss, TwoLosses:
		ch = append(ch, cell{name: "e", l: v[1]})
		for k := 2; k < m.bodyAt(); k += 2 {
			ch = append(ch, cell{name: strconv.Itoa(1 + k/2), r: v[k], l: v[k+1]})
		}
	case SemiInductance:
		ch = append(ch, m.semi(v).cells()...)
	}
	if k := m.bodyAt(); m.body != still {
		c := tankCell(v[k:])
		if m.body == vented {
			wb, alpha, ql := v[k+3], v[k+4], v[k+5]
			c.lb = c.l / alpha
			c.cb = 1 / (wb * wb * c.lb)
			c.rb = wb * c.lb / ql
		}
		ch = append(ch, c)
	}
	for k := m.extrasAt(); k < len(v); k += 3 {
		c := tankCell(v[k:])
		c.name = "x" + strconv.Itoa(1+(k-m.extrasAt())/3)
		ch = append(ch, c)
	}
	return ch
}

func tankCell(v []float64) cell {
	w0, r, q := v[0], v[1], v[2]
	return cell{r: r, l: r / (q * w0), c: q / (r * w0)}
}
