package field

import "math"

// A Bearing is a direction from a point, by its angle from an axis and how that is turned round the axis.
type Bearing struct {
	OffDeg    float64 // from the axis, 0 to 180
	AroundDeg float64 // 0: to the right of it, 90: above, ±180: to the left, -90: below; 0 where OffDeg is 0 or 180
}

// BearingOf returns the direction of p as seen from a point, from the axis that runs from there to ahead. Right is
// level, and above is toward +y. Neither p nor ahead may be at from.
func BearingOf(p, from, ahead Point) Bearing {
	for i := range from {
		p[i] -= from[i]
		ahead[i] -= from[i]
	}
	// Undo what turns +z to ahead: about the vertical axis, then about the level one.
	level := math.Hypot(ahead[0], ahead[2])
	sin, cos := 0., 1.
	if level > 0 {
		sin, cos = ahead[0]/level, ahead[2]/level
	}
	x, z := p[0]*cos-p[2]*sin, p[0]*sin+p[2]*cos
	whole := math.Hypot(level, ahead[1])
	sin, cos = ahead[1]/whole, level/whole
	y, z := p[1]*cos-z*sin, p[1]*sin+z*cos
	off := math.Hypot(x, y)
	if off < 1e-12*math.Abs(z) { // rounding, which has no direction
		if z < 0 {
			return Bearing{OffDeg: 180}
		}
		return Bearing{}
	}
	return Bearing{math.Atan2(off, z) * 180 / math.Pi, math.Atan2(y, x) * 180 / math.Pi}
}
