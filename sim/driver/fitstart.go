package driver

import (
	"math"
	"math/cmplx"
	"sort"
)

// A hump is a rise of |Z| and fall again.
type hump struct {
	w, r, q float64 // rad/s; Ω above the coil's resistance; Q
	height  float64 // in nepers over the higher of its feet
}

// humps returns the maxima of |Z| that stand out by 2 % or more, the highest first. A table that begins with a
// falling |Z| begins with one.
func (s *search) humps() []hump {
	n := len(s.points)
	ln := make([]float64, n)
	const near = 0.04 // a twelfth of an octave across, against the noise
	for i := range s.points {
		sum, count := 0.0, 0
		for j := i; j >= 0 && math.Log(s.points[i].w/s.points[j].w) <= near; j-- {
			sum, count = sum+math.Log(cmplx.Abs(s.points[j].z)), count+1
		}
		for j := i + 1; j < n && math.Log(s.points[j].w/s.points[i].w) <= near; j++ {
			sum, count = sum+math.Log(cmplx.Abs(s.points[j].z)), count+1
		}
		ln[i] = sum / float64(count)
	}
	// foot returns how far ln falls from i on before it is higher than there.
	foot := func(i, step int) float64 {
		low := ln[i]
		j := i + step
		for ; j >= 0 && j < n && ln[j] <= ln[i]; j += step {
			low = math.Min(low, ln[j])
		}
		return ln[i] - low
	}
	var hs []hump
	for i := range n - 1 {
		if ln[i+1] > ln[i] || i > 0 && ln[i-1] >= ln[i] {
			continue
		}
		height := foot(i, 1)
		if i > 0 {
			height = math.Min(height, foot(i, -1))
		}
		if height >= 0.02 {
			hs = append(hs, s.hump(i, height))
		}
	}
	sort.SliceStable(hs, func(i, j int) bool { return hs[i].height > hs[j].height })
	return hs
}

// hump measures the hump at point i: its width where what rises above the coil's resistance is down by 3 dB.
func (s *search) hump(i int, height float64) hump {
	re := complex(s.ohm, 0)
	top := cmplx.Abs(s.points[i].z - re)
	edge := func(step int) (float64, bool) {
		for j := i + step; j >= 0 && j < len(s.points); j += step {
			if cmplx.Abs(s.points[j].z-re) < top/math.Sqrt2 {
				return math.Abs(math.Log(s.points[j].w / s.points[i].w)), true
			}
		}
		return 0, false
	}
	left, okLeft := edge(-1)
	right, okRight := edge(1)
	switch {
	case !okLeft && !okRight:
		left, right = 0.5, 0.5
	case !okLeft:
		left = right
	case !okRight:
		right = left
	}
	h := hump{w: s.points[i].w, r: math.Max(top, 0.01*s.ohm), height: height}
	h.q = 1 / (2 * math.Sinh((left+right)/2))
	return h
}

// first returns the model that the curve itself suggests: a semi-inductance, and the highest hump.
func (s *search) first(hs []hump) *model {
	m := &model{coil: SemiInductance}
	top := s.points[len(s.points)-1]
	low := top
	for i := len(s.points) - 1; i >= 0 && top.w/low.w < 4; i-- {
		low = s.points[i]
	}
	rest := func(p point) float64 {
		z := p.z - complex(0.97*s.ohm, 0)
		if len(hs) > 0 {
			x, _ := detuning(p.w, hs[0].w)
			z -= complex(hs[0].r, 0) / (1 + complex(hs[0].q, 0)*x)
		}
		if imag(z) <= 0 {
			return 0
		}
		return cmplx.Abs(z)
	}
	n, k := 0.7, 0.02*s.ohm
	if a, b := rest(low), rest(top); b > 0 && top.w > low.w {
		if a > 0 {
			n = math.Max(0.4, math.Min(0.95, math.Log(b/a)/math.Log(top.w/low.w)))
		}
		k = b * math.Pow(semiAt/top.w, n)
	}
	m.p = []float64{math.Log(0.97 * s.ohm), math.Log(k), math.Log(n / (1 - n))}
	if len(hs) > 0 {
		m.body = single
		m.p = append(m.p, math.Log(hs[0].w), math.Log(hs[0].r), math.Log(hs[0].q))
	}
	return m
}

// with returns the model with another coil, its unknowns begun from those it has.
func (s *search) with(f fitted, coil Coil) *model {
	m := &model{coil: coil, body: f.body, extras: f.extras, p: []float64{f.p[0]}}
	w := s.band[1]
	if f.coil == NoCoil {
		m.p = append(m.p, coilStart(coil, func(float64) complex128 { return complex(0, 1e-3*s.ohm) }, w)...)
	} else {
		v := make([]float64, f.size())
		f.values(v)
		ch := (&model{coil: f.coil, p: f.p[:f.bodyAt()]}).circuit(v[:f.bodyAt()])[1:]
		m.p = append(m.p, coilStart(coil, func(w float64) complex128 { return ch.Impedance(complex(0, w)) }, w)...)
	}
	m.p = append(m.p, f.p[f.bodyAt():]...)
	return m
}

// coilStart returns unknowns of a coil whose impedance is z up to w in rad/s.
func coilStart(coil Coil, z func(w float64) complex128, w float64) []float64 {
	henry := func(w float64) float64 { return math.Max(imag(z(w))/w, 1e-9) }
	switch coil {
	case PlainCoil:
		return []float64{math.Log(henry(w))}
	case OneLoss, TwoLosses:
		// What the inductance loses from the middle of the band to its top belongs to the pairs.
		le := 0.7 * henry(w)
		l := math.Max(henry(w/30)-le, le/2)
		corner := w / 8
		if coil == OneLoss {
			return []float64{math.Log(le), math.Log(corner * l), math.Log(l)}
		}
		le /= 2
		return []float64{math.Log(le), math.Log(corner / 4 * l), math.Log(l), math.Log(corner * 2 * le), math.Log(le)}
	case SemiInductance:
		a, b := cmplx.Abs(z(w/8)), cmplx.Abs(z(w))
		n := math.Max(0.3, math.Min(0.97, math.Log(b/a)/math.Log(8)))
		return []float64{math.Log(b) - n*math.Log(w/semiAt), math.Log(n / (1 - n))}
	}
	return nil
}

// missing returns the resonance that would bring what f misses down most, were the misfit linear in it: each of a
// grid of frequencies and Qs is tried as a template. ok is false if none would.
func (s *search) missing(f fitted) (h hump, ok bool) {
	n := len(s.points)
	miss, y := make([]complex128, n), make([]complex128, n)
	v, d := make([]float64, f.size()), make([]complex128, f.size())
	f.values(v)
	for i, p := range s.points {
		z := f.impedance(v, p.w, d)
		miss[i], y[i] = cmplx.Log(p.z/z), 1/z
	}
	best := 0.0
	span := math.Log(s.band[1] / s.band[0])
	steps := math.Min(math.Ceil(span/0.06), 400) // a twelfth of an octave apart, some
	for k := range int(steps) + 1 {
		w := s.band[0] * math.Exp(span*float64(k)/math.Max(steps, 1))
		for _, q := range [...]float64{1, 3, 8, 25} {
			var along, square float64
			for i, p := range s.points {
				t := inverse(q*(p.w/w-w/p.w)) * y[i]
				along += p.weight * (real(t)*real(miss[i]) + imag(t)*imag(miss[i]))
				square += p.weight * (real(t)*real(t) + imag(t)*imag(t))
			}
			if gain := along * along / square; along > 0 && gain > best {
				best, ok = gain, true
				h = hump{w: w, r: along / square, q: q}
			}
		}
	}
	return h, ok
}

// plus returns the model with one more resonance.
func (f fitted) plus(h hump) *model {
	m := f.clone()
	m.p = append(m.p, math.Log(h.w), math.Log(h.r), math.Log(h.q))
	if m.body == still {
		m.body = single // its extras are none, so the resonance stands where the body's does
	} else {
		m.extras++
	}
	return m
}

// boxed returns a model with two resonances, the driver's and one more, taken for the two of a vented box. With
// the lower one at fL and the higher at fH, and fb between them where |Z| is least, fs = fL·fH/fb and α = (fH² -
// fb²)(fb² - fL²)/(fL·fH)² if there are no losses: the squares of fL and fH are the roots of x² - x(fs²(1 + α) + fb²) +
// fs²·fb². At high frequencies the mass alone is left, 1/Cmes the sum of the two resonances' 1/C.
func (s *search) boxed(f fitted) *model {
	v := make([]float64, f.size())
	f.values(v)
	a, b := v[f.bodyAt():], v[f.extrasAt():] // ω, R and Q of each
	lo, hi := math.Min(a[0], b[0]), math.Max(a[0], b[0])
	if hi < 1.05*lo {
		hi, lo = 1.05*hi, lo/1.05
	}
	box, least := math.Sqrt(lo*hi), math.Inf(1)
	for _, p := range s.points {
		if z := cmplx.Abs(p.z); p.w > 1.02*lo && p.w < hi/1.02 && z < least {
			box, least = p.w, z
		}
	}
	ws := lo * hi / box
	alpha := (hi*hi - box*box) * (box*box - lo*lo) / (lo * lo * hi * hi)
	qms := math.Max(a[2], b[2])
	res := qms / ws * (a[1]*a[0]/a[2] + b[1]*b[0]/b[2])
	m := &model{coil: f.coil, body: vented, p: append([]float64(nil), f.p[:f.bodyAt()]...)}
	for _, v := range [...]float64{ws, res, qms, box, alpha, 10} {
		m.p = append(m.p, math.Log(v))
	}
	return m
}
