package circuit

import "math"

// windValues holds what the admittance of coupled coils is computed from: Z = diag(r) + jω·M.
type windValues struct {
	r []float64 // Ω, per coil
	m []float64 // H, row by row; the diagonal holds the inductances
	n int
	z []cdoubled // scratch, n × n
	i []cdoubled // scratch, n: currents
	j []cdoubled // scratch, n: currents of the adjoint network
}

func (c *windCell) values(vals, loss []float64) windValues {
	n := len(c.coils)
	w := windValues{r: make([]float64, n), m: make([]float64, n*n), n: n, z: make([]cdoubled, n*n), i: make([]cdoubled, n), j: make([]cdoubled, n)}
	w.set(c, vals, loss)
	return w
}

// set takes the values of the coils and computes M_ab = k·√(L_a·L_b).
func (w *windValues) set(c *windCell, vals, loss []float64) {
	for i, a := range c.coils {
		w.r[i] = loss[a.branch]
		for j, b := range c.coils {
			w.m[i*w.n+j] = c.k[i][j] * math.Sqrt(vals[a.branch]*vals[b.branch])
		}
		w.m[i*w.n+i] = vals[a.branch]
	}
}

// admittance stores the upper triangle of Z⁻¹, row by row.
func (w *windValues) admittance(y []cvec, omega *vec) {
	if w.n == 2 {
		w.pair(y, omega)
		return
	}
	for i := range lanes {
		w.invert(complex(0, omega[i]))
		k := 0
		for a := range w.n {
			for b := a; b < w.n; b++ {
				y[k].re[i], y[k].im[i] = w.z[a*w.n+b].re.hi, w.z[a*w.n+b].im.hi
				k++
			}
		}
	}
}

// pair is admittance for two coils, in closed form.
func (w *windValues) pair(y []cvec, omega *vec) {
	for i := range lanes {
		o := omega[i]
		r1, r2, x1, x2, xm := w.r[0], w.r[1], o*w.m[0], o*w.m[3], o*w.m[1]
		dr := r1*r2 - (w.m[0]*w.m[3]-w.m[1]*w.m[1])*o*o
		di := r1*x2 + r2*x1
		d := 1 / (dr*dr + di*di)
		dr, di = dr*d, -di*d
		y[0].re[i], y[0].im[i] = r2*dr-x2*di, r2*di+x2*dr
		y[1].re[i], y[1].im[i] = xm*di, -xm*dr
		y[2].re[i], y[2].im[i] = r1*dr-x1*di, r1*di+x1*dr
	}
}

// invert leaves (diag(r) + s·M)⁻¹ in z. The matrix is the impedance of a passive circuit, with a positive
// definite real or imaginary part, so that Gauss-Jordan elimination needs no exchange of rows.
func (w *windValues) invert(s complex128) {
	n, z, ds := w.n, w.z, doubledOf(s)
	for i := range z {
		z[i] = ds.scale(w.m[i])
	}
	for i := range n {
		z[i*n+i] = z[i*n+i].add(doubledOf(complex(w.r[i], 0)))
	}
	for k := range n {
		p := z[k*n+k].inv()
		z[k*n+k] = doubledOf(1)
		for j := range n {
			z[k*n+j] = z[k*n+j].mul(p)
		}
		for i := range n {
			if i == k {
				continue
			}
			f := z[i*n+k]
			z[i*n+k] = cdoubled{}
			for j := range n {
				z[i*n+j] = z[i*n+j].sub(f.mul(z[k*n+j]))
			}
		}
	}
}

// currents stores in dst the currents of the coils for the voltages across them that volt gives; z must hold the
// admittances. It returns how much is left, at the least, of the terms that a current is the sum of: near 0,
// voltages of float64 are not enough.
func (w *windValues) currents(dst []cdoubled, volt func(coil int) cdoubled) (left float64) {
	left = 1
	for a := range dst {
		var sum cdoubled
		terms := 0.0
		for b := range w.n {
			t := w.z[a*w.n+b].mul(volt(b))
			sum = sum.add(t)
			terms += t.modulus()
		}
		dst[a] = sum
		if terms > 0 {
			left = min(left, sum.modulus()/terms)
		}
	}
	return left
}

// slope is ∂H/∂L of coil a, per jω, from the currents i and j: L itself, and the mutual inductances
// M = k·√(L_a·L_b), of which ∂M/∂L_a = M/(2·L_a).
func (w *windValues) slope(a int) complex128 {
	x := w.i[a].mul(w.j[a])
	for b := range w.n {
		if b != a {
			both := w.i[a].mul(w.j[b]).add(w.i[b].mul(w.j[a]))
			x = x.add(both.scale(w.m[a*w.n+b] / (2 * w.m[a*w.n+a])))
		}
	}
	return x.complex()
}
