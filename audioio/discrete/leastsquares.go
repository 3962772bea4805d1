package discrete

import "math"

// A system is an overdetermined set of linear equations, columns · x ≈ rhs.
type system struct {
	columns [][]float64 // each as long as rhs
	rhs     []float64
}

func newSystem(rows, columns int) *system {
	s := &system{columns: make([][]float64, columns), rhs: make([]float64, rows)}
	for j := range s.columns {
		s.columns[j] = make([]float64, rows)
	}
	return s
}

// reduce turns the system into an equivalent triangular one, and overwrites it. It needs at least as many
// rows as columns, and full rank.
//
// Method: Householder reflections, G. Golub, "Numerical Methods for Solving Linear Least Squares
// Problems", Numer. Math. 7, 1965, 206–216.
func (s *system) reduce() *triangle {
	n := len(s.columns)
	for k, c := range s.columns {
		v := c[k:]
		length := norm(v)
		if length == 0 {
			continue
		}
		if v[0] > 0 {
			length = -length
		}
		v[0] -= length
		f := -1 / (length * v[0]) // 2/|v|²
		for _, other := range s.columns[k+1:] {
			reflect(other[k:], v, f)
		}
		reflect(s.rhs[k:], v, f)
		v[0] = length // the rest of v is no longer needed
	}
	t := &triangle{columns: make([][]float64, n), rhs: append([]float64(nil), s.rhs[:n]...), rest: norm(s.rhs[n:])}
	for k, c := range s.columns {
		t.columns[k] = append([]float64(nil), c[:k+1]...)
	}
	return t
}

// reflect takes f·(v·x) times v off x.
func reflect(x, v []float64, f float64) {
	x = x[:len(v)]
	sum := f * dot(v, x)
	for i, vi := range v {
		x[i] -= sum * vi
	}
}

// A triangle is a reduced system: column k has k + 1 entries. No x can bring the error below rest.
type triangle struct {
	columns [][]float64
	rhs     []float64
	rest    float64 // length of the residual
}

// solve returns the x of least squares and, for each unknown, by how much the square of the
// residual would grow if that unknown were left out and the others solved anew.
//
// That growth is x²/G, G the diagonal of the inverse normal matrix (e.g. A. J. Miller, Subset
// Selection in Regression, 1990, on backward elimination); here G comes from the inverse of the triangle.
func (t *triangle) solve() (x, growth []float64) {
	n := len(t.columns)
	x = make([]float64, n)
	copy(x, t.rhs[:n])
	growth = make([]float64, n)
	// Column c of the inverse by back substitution; the squares of its entries add to G.
	inverse := make([]float64, n)
	for c := range n {
		clear(inverse)
		inverse[c] = 1
		t.backSubstitute(inverse[:c+1])
		for i, v := range inverse[:c+1] {
			growth[i] += v * v
		}
	}
	t.backSubstitute(x)
	for i := range growth {
		growth[i] = x[i] * x[i] / growth[i]
	}
	return x, growth
}

func (t *triangle) backSubstitute(x []float64) {
	for k := len(x) - 1; k >= 0; k-- {
		c := t.columns[k]
		x[k] /= c[k]
		for i, v := range c[:k] {
			x[i] -= v * x[k]
		}
	}
}

// drop leaves out unknown j, and brings the rest back to triangular form by rotations.
func (t *triangle) drop(j int) {
	t.columns = append(t.columns[:j], t.columns[j+1:]...)
	for k := j; k < len(t.columns); k++ {
		c := t.columns[k]
		r := math.Hypot(c[k], c[k+1])
		if r == 0 {
			t.columns[k] = c[:k+1]
			continue
		}
		cos, sin := c[k]/r, c[k+1]/r
		rotate := func(x []float64) {
			x[k], x[k+1] = cos*x[k]+sin*x[k+1], cos*x[k+1]-sin*x[k]
		}
		for _, other := range t.columns[k:] {
			rotate(other)
		}
		rotate(t.rhs)
		t.columns[k] = c[:k+1]
	}
	last := len(t.columns)
	t.rest = math.Hypot(t.rest, t.rhs[last])
	t.rhs = t.rhs[:last]
}

// norm is the Euclidean length of x.
func norm(x []float64) float64 { return math.Sqrt(dot(x, x)) }

// dot is Σ a[i]·b[i]; four sums run side by side, so that none waits for the one before.
func dot(a, b []float64) float64 {
	b = b[:len(a)]
	var s0, s1, s2, s3 float64
	for len(a) >= 4 && len(b) >= 4 {
		s0 += a[0] * b[0]
		s1 += a[1] * b[1]
		s2 += a[2] * b[2]
		s3 += a[3] * b[3]
		a, b = a[4:], b[4:]
	}
	for i := range a {
		s0 += a[i] * b[i]
	}
	return (s0 + s1) + (s2 + s3)
}
