package measure

import "math"

// basisRun is how many samples a rotation goes before it is set exact again: its
// error then stays below 64 roundings, 1e-14, however long the record.
const basisRun = 64

// basis stores cos and sin of 2π·nu·(first + i) in c[i] and s[i], len(c) = len(s).
// nu is in cycles a sample.
func basis(c, s []float64, nu float64, first int) {
	stepS, stepC := math.Sincos(2 * math.Pi * nu)
	for from := 0; from < len(c); from += basisRun {
		turns := nu * float64(first+from)
		y, x := math.Sincos(2 * math.Pi * (turns - math.Floor(turns)))
		for i := from; i < min(from+basisRun, len(c)); i++ {
			c[i], s[i] = x, y
			x, y = x*stepC-y*stepS, y*stepC+x*stepS
		}
	}
}
