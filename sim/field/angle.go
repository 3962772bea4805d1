package field

import "math"

// An Angle is how far the ear is turned about the origin from where the listener is, in degrees; the distance
// stays. It is turned up first, then to the right about the vertical axis, so that Horizontal is the angle of
// the horizontal orbit and Vertical that of the vertical one.
type Angle struct {
	HorizontalDeg float64 // positive: to the right, toward +x
	VerticalDeg   float64 // positive: up, toward +y
}

// Turned returns p turned by the angle about the origin.
func (a Angle) Turned(p Point) Point {
	sin, cos := sincosDeg(a.VerticalDeg)
	y, z := p[1]*cos+p[2]*sin, p[2]*cos-p[1]*sin
	sin, cos = sincosDeg(a.HorizontalDeg)
	return Point{p[0]*cos + z*sin, y, z*cos - p[0]*sin}
}

// sincosDeg returns sine and cosine of an angle in degrees, exact at whole quarter turns: an ear at 90° is in
// the plane of the baffle, not a rounding error behind it.
func sincosDeg(deg float64) (sin, cos float64) {
	deg = math.Mod(deg, 360)
	quarter := math.Round(deg / 90)
	sin, cos = math.Sincos((deg - 90*quarter) * math.Pi / 180)
	switch int(quarter) & 3 {
	case 1:
		sin, cos = cos, -sin
	case 2:
		sin, cos = -sin, -cos
	case 3:
		sin, cos = -cos, sin
	}
	return sin, cos
}
