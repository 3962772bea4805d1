package sim

import (
	"math"

	"sixdown/sim/driver"
	"sixdown/sim/field"
)

// An air is what becomes of a speaker's pressure on the way to one ear.
type air struct {
	path     field.Path
	edges    *field.Diffraction // nil: no baffle in the model
	ka       float64            // of the diaphragm, for each Hz, if there are no edges; 0: a point
	sinTheta float64            // of the ear from the speaker's axis
	toward   *driver.Toward     // the ear; nil: not measured at angles
}

// to returns the air between the speaker and a listener's ear, which must not be where the speaker is. What a
// measured response holds already, the diaphragm and the cabinet, is not put in again.
func (sp *speaker) to(l field.Listener) air {
	a := air{path: sp.path(l)}
	ear := l.Ear()
	switch {
	case sp.around != nil:
		b := sp.bearing(ear)
		a.toward = sp.around.Toward(b.OffDeg, b.AroundDeg)
	case sp.baffle != nil:
		a.edges = sp.baffle.Diffraction(sp.at, sp.radius, ear, l.SoundSpeed)
	case sp.radius > 0:
		a.ka = 2 * math.Pi * sp.radius / l.SoundSpeed
		a.sinTheta = 1 // an infinite baffle has no behind: there it is taken as at the side
		if ear[2] > sp.at[2] {
			a.sinTheta = min(1, math.Hypot(ear[0]-sp.at[0], ear[1]-sp.at[1])/sp.at.Distance(ear))
		}
	}
	return a
}

// factor returns the pressure at the ear at f in Hz over the pressure where the speaker's data refer to. It
// allocates nothing.
func (a *air) factor(f float64) complex128 {
	p := a.path.At(f)
	switch {
	case a.toward != nil:
		p *= a.toward.At(f)
	case a.edges != nil:
		p *= a.edges.At(f)
	case a.ka > 0:
		p *= complex(field.Piston(a.ka*f, a.sinTheta), 0)
	}
	return p
}
