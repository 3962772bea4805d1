package field

import (
	"math"
	"testing"
)

// TestBearing: directions that are read off a sketch; the angles are those of right triangles.
func TestBearing(t *testing.T) {
	origin, ahead := Point{}, Point{0, 0, 1}
	for _, c := range []struct {
		name           string
		p, from, ahead Point
		off, around    float64
	}{
		{"on the axis", Point{0, 0, 3}, origin, ahead, 0, 0},
		{"right", Point{1, 0, 1}, origin, ahead, 45, 0},
		{"left", Point{-1, 0, 1}, origin, ahead, 45, 180},
		{"up", Point{0, 1, 1}, origin, ahead, 45, 90},
		{"down, at the side", Point{0, -2, 0}, origin, ahead, 90, -90},
		{"behind to the right", Point{1, 0, -1}, origin, ahead, 135, 0},
		{"behind above", Point{0, 1, -1}, origin, ahead, 135, 90},
		{"straight behind", Point{0, 0, -1}, origin, ahead, 180, 0},
		{"up and right by as much", Point{1, 1, math.Sqrt2}, origin, ahead, 45, 45},
		{"seen from elsewhere", Point{1, 5, 3}, Point{0, 5, 2}, Point{0, 5, 9}, 45, 0},
		{"an axis that rises by 45°", Point{0, 1, 0}, origin, Point{0, 1, 1}, 45, 90},
		{"on an axis to the right and up", Point{3, 2, 1}, origin, Point{3, 2, 1}, 0, 0},
		{"level right of an axis to the right by 45°", Point{1, 0, 0}, origin, Point{1, 0, 1}, 45, 0},
		{"an axis straight up", Point{0, 0, -1}, origin, Point{0, 1, 0}, 90, 90},
	} {
		got := BearingOf(c.p, c.from, c.ahead)
		if math.Abs(got.OffDeg-c.off) > 1e-12 || math.Abs(got.AroundDeg-c.around) > 1e-12 {
			t.Errorf("%s: got %v, want %g° off, %g° around", c.name, got, c.off, c.around)
		}
	}
}

// TestBearingOfAngles: on its two orbits the ear is as far off the axis as it was turned, to that side.
func TestBearingOfAngles(t *testing.T) {
	for deg := -170.0; deg <= 170; deg += 10 {
		for _, c := range []struct {
			angle  Angle
			around float64
		}{{Angle{HorizontalDeg: deg}, 0}, {Angle{VerticalDeg: deg}, 90}} {
			around := c.around
			if deg < 0 {
				around -= 180
			}
			b := BearingOf(Listener{Distance: 2, Angle: c.angle}.Ear(), Point{}, Point{0, 0, 1})
			turned := math.Abs(math.Remainder(b.AroundDeg-around, 360))
			if math.Abs(b.OffDeg-math.Abs(deg)) > 1e-12 || deg != 0 && turned > 1e-9 {
				t.Errorf("%v: %v", c.angle, b)
			}
		}
	}
}
