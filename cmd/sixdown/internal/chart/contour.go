package chart

import "math"

// A field is a quantity over a grid: z[i][k] at xs[k], ys[i].
type field struct {
	xs, ys []float64
	z      [][]float64
}

// above returns, as closed loops to be filled by the even-odd rule, where the field is at or above a level, values
// between grid points taken to run straight along the edges of the grid's cells.
//
// Each cell is cut on its own, as marching squares do; the edges that two neighbours share, which they run through
// in opposite directions, are struck out, and what is left is joined into loops. So there is no seam between cells.
func (f *field) above(level float64) [][]point {
	type edge struct{ from, to point }
	from := map[point][]point{}
	struck := map[edge]int{}
	var all []edge
	for i := 0; i+1 < len(f.ys); i++ {
		for k := 0; k+1 < len(f.xs); k++ {
			for _, loop := range f.cell(i, k, level) {
				for j := range loop {
					e := edge{loop[j], loop[(j+1)%len(loop)]}
					switch back := (edge{e.to, e.from}); {
					case e.from == e.to:
					case struck[back] > 0:
						struck[back]--
					default:
						struck[e]++
						all = append(all, e)
					}
				}
			}
		}
	}
	var order []point
	for _, e := range all {
		if struck[e] > 0 {
			struck[e]--
			from[e.from] = append(from[e.from], e.to)
			order = append(order, e.from)
		}
	}
	var loops [][]point
	for _, p := range order {
		for len(from[p]) > 0 {
			loop := []point{p}
			for at := p; len(from[at]) > 0; {
				next := from[at][0]
				from[at] = from[at][1:]
				if at = next; at == p {
					break
				}
				loop = append(loop, at)
			}
			loops = append(loops, loop)
		}
	}
	return loops
}

// cell returns the part of one cell, whose first corner is (k, i), that is at or above level: a polygon, or two where
// opposite corners are above and the middle is not.
func (f *field) cell(i, k int, level float64) [][]point {
	corners := [4]point{{f.xs[k], f.ys[i]}, {f.xs[k+1], f.ys[i]}, {f.xs[k+1], f.ys[i+1]}, {f.xs[k], f.ys[i+1]}}
	z := [4]float64{f.z[i][k], f.z[i][k+1], f.z[i+1][k+1], f.z[i+1][k]}
	var in [4]bool
	n := 0
	for c := range z {
		if in[c] = z[c] >= level; in[c] {
			n++
		}
	}
	if n == 0 {
		return nil
	}
	if saddle := n == 2 && in[0] == in[2]; saddle && (z[0]+z[1]+z[2]+z[3])/4 < level {
		var two [][]point
		for c := range z {
			if in[c] {
				two = append(two, []point{crossing(corners, z, (c+3)%4, c, level), corners[c], crossing(corners, z, c, (c+1)%4, level)})
			}
		}
		return two
	}
	var loop []point
	for c := range z {
		next := (c + 1) % 4
		if in[c] {
			loop = append(loop, corners[c])
		}
		if in[c] != in[next] {
			loop = append(loop, crossing(corners, z, c, next, level))
		}
	}
	return [][]point{loop}
}

// crossing returns where the level lies on the edge between two corners. It is computed from the lower corner in the
// grid to the upper, so that the neighbour beyond the edge finds the same point to the last digit.
func crossing(corners [4]point, z [4]float64, a, b int, level float64) point {
	if p, q := corners[a], corners[b]; q.x < p.x || q.y < p.y {
		a, b = b, a
	}
	t := (level - z[a]) / (z[b] - z[a])
	if math.IsInf(z[a], -1) || math.IsInf(z[b], -1) || math.IsNaN(t) {
		t = 0.5
	}
	p, q := corners[a], corners[b]
	return point{p.x + t*(q.x-p.x), p.y + t*(q.y-p.y)}
}
