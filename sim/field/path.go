package field

import (
	"math"
	"math/cmplx"
)

// A Point is a place in m: right, up, toward the listener.
type Point [3]float64

// Distance returns the distance in m from p to q.
func (p Point) Distance(q Point) float64 {
	return math.Hypot(math.Hypot(p[0]-q[0], p[1]-q[1]), p[2]-q[2])
}

// A Listener is where the ear is and how fast the sound comes to it.
type Listener struct {
	Distance   float64 // m from the origin along +z, > 0; the flight time over it is common to all drivers and taken out
	Height     float64 // m, of the ear above the origin
	Angle      Angle   // how far the ear is then turned about the origin
	SoundSpeed float64 // m/s
}

// Ear returns where the ear is.
func (l Listener) Ear() Point { return l.Angle.Turned(Point{0, l.Height, l.Distance}) }

// A Path is what becomes of a driver's pressure on the way to the ear.
type Path struct {
	Gain  float64 // pressure at the ear over the pressure where the driver's data refer to
	Delay float64 // s, later than the common flight time; may be negative
}

// FromOneMetre returns the path of a driver at the acoustic centre at, whose pressure is known 1 m from that
// centre without flight time: the pressure falls as 1/r, and the delay is that of r less the listening
// distance. The driver must not be at the ear.
func (l Listener) FromOneMetre(at Point) Path {
	r := at.Distance(l.Ear())
	return Path{Gain: 1 / r, Delay: (r - l.Distance) / l.SoundSpeed}
}

// FromMicrophone returns the path of a driver at the acoustic centre at, whose pressure was measured at mic.
// The file's phase holds the flight to the microphone already, on a time base common to all drivers measured
// from there, so what counts is how much farther the ear is, less what is common: the listening distance less
// the microphone's distance from the origin. For an ear at the microphone's place on the z axis the path is 1
// exactly. The driver must be neither at the ear nor at the microphone.
func (l Listener) FromMicrophone(at, mic Point) Path {
	r, m := at.Distance(l.Ear()), at.Distance(mic)
	return Path{
		Gain:  m / r,
		Delay: ((r - m) - (l.Distance - mic.Distance(Point{}))) / l.SoundSpeed,
	}
}

// At returns the path's factor, gain · e^{-jωτ}, at the frequency f in Hz.
func (p Path) At(f float64) complex128 {
	return cmplx.Rect(p.Gain, -2*math.Pi*f*p.Delay)
}
