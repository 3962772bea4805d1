package field

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

func near(t *testing.T, what string, got, want, abs float64) {
	t.Helper()
	if !(math.Abs(got-want) <= abs) {
		t.Errorf("%s: got %.12g, want %.12g within %.1e", what, got, want, abs)
	}
}

// By hand, from the 3-4-5 triangle: the driver is 1.5 m below the ear's height and the ear 2 m away, so r = 2.5
// m.
func TestFromOneMetre(t *testing.T) {
	l := Listener{Distance: 2, Height: 0.5, SoundSpeed: 343}
	p := l.FromOneMetre(Point{0, -1, 0})
	near(t, "gain", p.Gain, 0.4, 1e-15)
	near(t, "delay", p.Delay, 0.5/343, 1e-17)
	// 0.5 m is half a wave at 343 Hz: the phase turns over.
	if got := p.At(343); cmplx.Abs(got-complex(-0.4, 0)) > 1e-14 {
		t.Errorf("at 343 Hz: got %g, want -0.4", got)
	}
	if on := (Listener{Distance: 2, SoundSpeed: 343}).FromOneMetre(Point{}); on.Gain != 0.5 || on.Delay != 0 {
		t.Errorf("a driver at the origin: got %+v, want half the pressure and no delay", on)
	}
}

func TestFromMicrophone(t *testing.T) {
	l := Listener{Distance: 1, SoundSpeed: 343}
	// The ear where the microphone was needs no geometry at all, wherever the driver stands.
	for _, at := range []Point{{}, {0, -0.2, -0.03}, {0.1, 0.3, 0}} {
		p := l.FromMicrophone(at, Point{0, 0, 1})
		near(t, "gain", p.Gain, 1, 0)
		near(t, "delay", p.Delay, 0, 0)
	}
	// Twice as far along the axis from a driver at the origin: half the pressure, and the added flight is
	// common to all drivers.
	far := Listener{Distance: 2, SoundSpeed: 343}
	p := far.FromMicrophone(Point{}, Point{0, 0, 1})
	near(t, "gain at twice the distance", p.Gain, 0.5, 1e-15)
	near(t, "delay at twice the distance", p.Delay, 0, 1e-18)
	// 3-4-5 again: microphone 4 m and ear 8 m out on the axis, driver 3 m up: 5 m and √73 m, common part 4 m.
	p = Listener{Distance: 8, SoundSpeed: 343}.FromMicrophone(Point{0, 3, 0}, Point{0, 0, 4})
	near(t, "gain by the triangle", p.Gain, 5/math.Sqrt(73), 1e-15)
	near(t, "delay by the triangle", p.Delay, (math.Sqrt(73)-5-4)/343, 1e-17)
}

// Two point drivers a wavelength apart, in phase, seen from afar: S. Linkwitz, "Active Crossover Networks for
// Noncoincident Drivers", J. Audio Eng. Soc. 24(1), 2–8, 1976. The main lobe is on the axis, the first nulls at
// sinθ = λ/2d, so at 30° (derived). In quadrature the lobe tilts toward the lagging driver by sinθ = λ/4d,
// 14.48°, where it is 3.01 dB up on the axis, and there is a null on the other side.
func TestLobes(t *testing.T) {
	const d, c, far = 0.343, 343.0, 1e4 // λ = d at 1 kHz; the far field to within d²/far
	sum := func(theta float64, upper complex128) float64 {
		l := Listener{Distance: far * math.Cos(theta), Height: far * math.Sin(theta), SoundSpeed: c}
		up, down := l.FromOneMetre(Point{0, d / 2, 0}), l.FromOneMetre(Point{0, -d / 2, 0})
		return far / 2 * cmplx.Abs(upper*up.At(1000)+down.At(1000))
	}
	near(t, "in phase, on axis", sum(0, 1), 1, 1e-8)
	near(t, "in phase, 30° up", sum(math.Pi/6, 1), 0, 1e-3)
	near(t, "in phase, 30° down", sum(-math.Pi/6, 1), 0, 1e-3)
	tilt := math.Asin(0.25)
	near(t, "14.48°", tilt*180/math.Pi, 14.48, 0.005)
	lag := complex(0, -1)
	near(t, "upper lags, on axis", sum(0, lag), math.Sqrt2/2, 1e-3)
	near(t, "upper lags, tilted up", sum(tilt, lag), 1, 1e-3)
	near(t, "upper lags, null below", sum(-tilt, lag), 0, 1e-3)
}

func ExampleListener_FromOneMetre() {
	ear := Listener{Distance: 2, Height: 0, SoundSpeed: 343}
	p := ear.FromOneMetre(Point{0, 0, -0.0343}) // set back by 34.3 mm
	fmt.Printf("%.1f µs late\n", p.Delay*1e6)
	// Output: 100.0 µs late
}
