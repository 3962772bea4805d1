package field

import (
	"fmt"
	"math"
	"testing"
)

// By hand: the ear 2 m away and 0.5 m up, turned by quarter turns, which are exact, and by 30°.
func TestAngles(t *testing.T) {
	h := math.Sqrt(3) / 2
	for _, tt := range []struct {
		angle Angle
		want  Point
		abs   float64
	}{
		{Angle{}, Point{0, 0.5, 2}, 0},
		{Angle{HorizontalDeg: 90}, Point{2, 0.5, 0}, 0},
		{Angle{HorizontalDeg: -90}, Point{-2, 0.5, 0}, 0},
		{Angle{HorizontalDeg: 180}, Point{0, 0.5, -2}, 0},
		{Angle{HorizontalDeg: 360}, Point{0, 0.5, 2}, 0},
		{Angle{HorizontalDeg: 450}, Point{2, 0.5, 0}, 0},
		{Angle{VerticalDeg: 90}, Point{0, 2, -0.5}, 0},
		{Angle{VerticalDeg: -90}, Point{0, -2, 0.5}, 0},
		{Angle{VerticalDeg: 180}, Point{0, -0.5, -2}, 0},
		{Angle{HorizontalDeg: 30}, Point{1, 0.5, 2 * h}, 1e-15},
		{Angle{VerticalDeg: 30}, Point{0, 0.5*h + 1, 2*h - 0.25}, 1e-15},
		// Up first, then to the right about the vertical axis.
		{Angle{HorizontalDeg: 90, VerticalDeg: 30}, Point{2*h - 0.25, 0.5*h + 1, 0}, 1e-15},
	} {
		ear := Listener{Distance: 2, Height: 0.5, SoundSpeed: 343, Angle: tt.angle}.Ear()
		for i := range ear {
			near(t, fmt.Sprintf("%+v, coordinate %d", tt.angle, i), ear[i], tt.want[i], tt.abs)
		}
	}
	// Whatever the angle, the distance stays.
	for v := -180.0; v <= 180; v += 17 {
		ear := Listener{Distance: 3, Height: 1, Angle: Angle{HorizontalDeg: 2.3 * v, VerticalDeg: v}}.Ear()
		near(t, "distance", ear.Distance(Point{}), math.Sqrt(10), 1e-14)
	}
}
