package chart

// clipped returns the parts of a polyline that lie in r, as polylines.
func clipped(points []point, r rect) [][]point {
	var parts [][]point
	var part []point
	flush := func() {
		if len(part) > 1 {
			parts = append(parts, part)
		}
		part = nil
	}
	for i := 1; i < len(points); i++ {
		a, b, ok := clipSegment(points[i-1], points[i], r)
		if !ok {
			flush()
			continue
		}
		if len(part) == 0 || part[len(part)-1] != a {
			flush()
			part = []point{a}
		}
		if part = append(part, b); b != points[i] {
			flush()
		}
	}
	flush()
	return parts
}

// clipSegment returns the part of a straight line from a to b that lies in r.
//
// Y.-D. Liang and B. A. Barsky, "A New Concept and Method for Line Clipping", ACM Trans. Graphics 3(1), 1984.
func clipSegment(a, b point, r rect) (from, to point, ok bool) {
	dx, dy := b.x-a.x, b.y-a.y
	t0, t1 := 0.0, 1.0
	for _, e := range [4][2]float64{{-dx, a.x - r.x}, {dx, r.right() - a.x}, {-dy, a.y - r.y}, {dy, r.bottom() - a.y}} {
		p, q := e[0], e[1]
		switch {
		case p == 0 && q < 0:
			return a, b, false
		case p < 0:
			t0 = max(t0, q/p)
		case p > 0:
			t1 = min(t1, q/p)
		}
	}
	if t0 > t1 {
		return a, b, false
	}
	from, to = a, b
	if t0 > 0 {
		from = point{a.x + t0*dx, a.y + t0*dy}
	}
	if t1 < 1 {
		to = point{a.x + t1*dx, a.y + t1*dy}
	}
	return from, to, true
}
