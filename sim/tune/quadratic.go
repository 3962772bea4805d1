package tune

import "math"

// A quadratic minimises ½dᵀGd + gᵀd, G symmetric and positive definite, under conditions aᵀd ≥ b, by the dual method of
// D. Goldfarb and A. Idnani, "A Numerically Stable Dual Method for Solving Strictly Convex Quadratic Programs", Math.
// Programming 27, 1983, 1–33: from the free minimum it takes on one violated condition after another, letting go of
// those that hold it back. Problems here have some ten unknowns and few active conditions, so the small systems are solved
// anew at each step instead of being updated.
type quadratic struct {
	n      int
	chol   []float64 // n × n, lower triangle of G's Cholesky factor
	d      []float64
	conds  []condition
	active []int     // indices of conds
	force  []float64 // multiplier of each active condition, ≥ 0

	z, r       []float64
	ginv       [][]float64 // G⁻¹a of each active condition
	gram, work []float64
}

// A condition is aᵀd ≥ b; a has length n.
type condition struct {
	a []float64
	b float64
}

func newQuadratic(n int) *quadratic {
	return &quadratic{n: n, chol: make([]float64, n*n), d: make([]float64, n), z: make([]float64, n), work: make([]float64, n)}
}

// solve leaves the answer in d. G is n × n, row by row; it reports whether G is positive definite and the conditions can
// be met together.
func (q *quadratic) solve(G, g []float64, conds []condition) bool {
	n := q.n
	copy(q.chol, G)
	if !cholesky(q.chol, n) {
		return false
	}
	for i := range q.d {
		q.d[i] = -g[i]
	}
	choleskySolve(q.chol, n, q.d)
	q.conds, q.active, q.force = conds, q.active[:0], q.force[:0]
	for range 50 * (len(conds) + 1) {
		p, worst := -1, 0.0
		for i, c := range conds {
			if v := (dot(c.a, q.d) - c.b) / norm(c.a); v < worst-1e-13*(1+math.Abs(c.b)) && !contains(q.active, i) {
				p, worst = i, v
			}
		}
		if p < 0 {
			return true
		}
		if !q.take(p) {
			return false
		}
	}
	return false
}

// take makes condition p hold; it reports whether that is possible.
func (q *quadratic) take(p int) bool {
	c, force := &q.conds[p], 0.0
	for range 2*len(q.conds) + 2 {
		q.direction(c.a)
		// How far until the condition holds, and until an active one stops pushing.
		full, part, drop := math.Inf(1), math.Inf(1), -1
		if bend := dot(q.z, c.a); bend > 1e-14*norm(c.a)*norm(q.z) && norm(q.z) > 1e-12*q.reach(c.a) {
			full = (c.b - dot(c.a, q.d)) / bend
		}
		for j, r := range q.r {
			if r > 0 && q.force[j]/r < part {
				part, drop = q.force[j]/r, j
			}
		}
		t := min(full, part)
		if math.IsInf(t, 1) {
			return false
		}
		if !math.IsInf(full, 1) {
			for i := range q.d {
				q.d[i] += t * q.z[i]
			}
		}
		for j := range q.force {
			q.force[j] -= t * q.r[j]
		}
		force += t
		if full <= part {
			q.active, q.force = append(q.active, p), append(q.force, force)
			return true
		}
		q.active = append(q.active[:drop], q.active[drop+1:]...)
		q.force = append(q.force[:drop], q.force[drop+1:]...)
	}
	return false
}

// reach is the length of G⁻¹a, against which a direction counts as none.
func (q *quadratic) reach(a []float64) float64 {
	copy(q.work, a)
	choleskySolve(q.chol, q.n, q.work)
	return norm(q.work)
}

// direction finds z = G⁻¹(a - N r) with r the least-squares multipliers (NᵀG⁻¹N)⁻¹NᵀG⁻¹a, N the active conditions.
func (q *quadratic) direction(a []float64) {
	n, m := q.n, len(q.active)
	copy(q.z, a)
	choleskySolve(q.chol, n, q.z)
	for len(q.ginv) < m {
		q.ginv = append(q.ginv, make([]float64, n))
	}
	if cap(q.gram) < m*m {
		q.gram = make([]float64, m*m)
	}
	if cap(q.r) < m {
		q.r = make([]float64, m, 2*m)
	}
	q.gram, q.r = q.gram[:m*m], q.r[:m]
	for j, k := range q.active {
		copy(q.ginv[j], q.conds[k].a)
		choleskySolve(q.chol, n, q.ginv[j])
		q.r[j] = dot(q.conds[k].a, q.z)
	}
	for j, k := range q.active {
		for i := range q.active {
			q.gram[j*m+i] = dot(q.conds[k].a, q.ginv[i])
		}
	}
	if m == 0 || !cholesky(q.gram, m) {
		return
	}
	choleskySolve(q.gram, m, q.r)
	for j, r := range q.r {
		for i := range q.z {
			q.z[i] -= r * q.ginv[j][i]
		}
	}
}

// pushed returns the greatest multiplier of conditions from index first on.
func (q *quadratic) pushed(first int) float64 {
	most := 0.0
	for j, k := range q.active {
		if k >= first {
			most = max(most, q.force[j])
		}
	}
	return most
}

// cholesky overwrites the lower triangle of the n × n matrix a with its factor; it reports whether a is positive definite.
func cholesky(a []float64, n int) bool {
	for j := range n {
		for i := j; i < n; i++ {
			s := a[i*n+j]
			for k := range j {
				s -= a[i*n+k] * a[j*n+k]
			}
			if i == j {
				if !(s > 0) {
					return false
				}
				a[j*n+j] = math.Sqrt(s)
			} else {
				a[i*n+j] = s / a[j*n+j]
			}
		}
	}
	return true
}

// choleskySolve overwrites x with the solution of LLᵀx.
func choleskySolve(l []float64, n int, x []float64) {
	for i := range n {
		s := x[i]
		for k := range i {
			s -= l[i*n+k] * x[k]
		}
		x[i] = s / l[i*n+i]
	}
	for i := n - 1; i >= 0; i-- {
		s := x[i]
		for k := i + 1; k < n; k++ {
			s -= l[k*n+i] * x[k]
		}
		x[i] = s / l[i*n+i]
	}
}

func dot(a, b []float64) float64 {
	s := 0.0
	for i, v := range a {
		s += v * b[i]
	}
	return s
}

func norm(a []float64) float64 { return math.Sqrt(dot(a, a)) }

func contains(list []int, v int) bool {
	for _, x := range list {
		if x == v {
			return true
		}
	}
	return false
}
