package circuit

import "math"

// windValues holds what the admittance of coupled coils is computed from: Z = diag(r) + jω·M.
type windValues struct {
	r []float64 // Ω, per coil
	m []float64 // H, row by row; the diagonal holds the inductances
	n int
	z []complex128 // scratch, n × n
	i []complex128 // scratch, n: currents
	j []complex128 // scratch, n: currents of the adjoint network
}

func (c *windCell) values(vals, loss []float64) windValues {
	n := len(c.coils)
	w := windValues{r: make([]float64, n), m: make([]float64, n*n), n: n, z: make([]complex128, n*n), i: make([]complex128, n), j: make([]complex128, n)}
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
				y[k].re[i], y[k].im[i] = real(w.z[a*w.n+b]), imag(w.z[a*w.n+b])
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
	n, z := w.n, w.z
	for i := range z {
		z[i] = s * complex(w.m[i], 0)
	}
	for i := range n {
		z[i*n+i] += complex(w.r[i], 0)
	}
	for k := range n {
		p := 1 / z[k*n+k]
		z[k*n+k] = 1
		for j := range n {
			z[k*n+j] *= p
		}
		for i := range n {
			if i == k {
				continue
			}
			f := z[i*n+k]
			z[i*n+k] = 0
			for j := range n {
				z[i*n+j] -= f * z[k*n+j]
			}
		}
	}
}

// currents stores in dst the currents of the coils for the voltages across them that volt gives; z must
// hold the admittances.
func (w *windValues) currents(dst []complex128, volt func(coil int) complex128) {
	clear(dst)
	for b := range w.n {
		v := volt(b)
		for a := range dst {
			dst[a] += w.z[a*w.n+b] * v
		}
	}
}

// slope is ∂H/∂L of coil a, per jω, from the currents i and j: L itself, and the mutual inductances
// M = k·√(L_a·L_b), of which ∂M/∂L_a = M/(2·L_a).
func (w *windValues) slope(a int) complex128 {
	x := w.i[a] * w.j[a]
	for b := range w.n {
		if b != a {
			x += complex(w.m[a*w.n+b]/(2*w.m[a*w.n+a]), 0) * (w.i[a]*w.j[b] + w.i[b]*w.j[a])
		}
	}
	return x
}
