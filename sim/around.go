package sim

import (
	"fmt"

	"sixdown/sim/driver"
	"sixdown/sim/field"
	"sixdown/xover"
)

// setAround adds what was measured at angles to a speaker whose response on the axis, t, was measured at mic.
//
// Measured phases are on a time base common to all drivers, so the cabinet is taken to have been turned about its
// origin: the bearing of the ear is seen from there, and each file holds the flight to a microphone that went round the
// origin the other way. With minimum phases there is no common time base and the driver is taken to
// have been turned about its own acoustic centre.
func (sp *speaker) setAround(d *xover.Driver, t *driver.Table, mic field.Point, soundSpeed float64, open opener) error {
	if len(d.Horizontal) == 0 && len(d.Vertical) == 0 {
		return nil
	}
	pivot, at := field.Point{}, field.Point(d.At)
	if d.MinimumPhase {
		pivot = at
	} else if pivot.Distance(mic) == 0 {
		return fmt.Errorf("driver %q: its microphone stands at the origin, about which the cabinet was turned; correct mic", d.Name)
	}
	var planes [2][]driver.AngledTable
	for i, files := range [][]xover.AngledFile{d.Horizontal, d.Vertical} {
		for _, f := range files {
			if f.AngleDeg == 0 {
				continue
			}
			table, err := readTable(d, f.File, open)
			if err != nil {
				return err
			}
			a := driver.AngledTable{AngleDeg: f.AngleDeg, Table: table}
			if !d.MinimumPhase {
				angle := field.Angle{HorizontalDeg: f.AngleDeg}
				if i == 1 {
					angle = field.Angle{VerticalDeg: f.AngleDeg}
				}
				near, far := at.Distance(mic), at.Distance(angle.Turned(mic))
				if far == 0 {
					return fmt.Errorf("driver %q: its microphone stood at its acoustic centre for the angle of %s; correct mic or at", d.Name, f.File)
				}
				a.Delay, a.Gain = (far-near)/soundSpeed, near/far
			}
			planes[i] = append(planes[i], a)
		}
	}
	around, err := driver.NewDirectivity(t, planes[0], planes[1], d.MinimumPhase)
	if err != nil {
		return fmt.Errorf("driver %q: %w", d.Name, err)
	}
	sp.around = around
	sp.doubt = sp.doubt.Plus(around.Doubt())
	sp.notes = append(sp.notes, around.Notes()...)
	first, last := t.Rows[0].Frequency, t.Rows[len(t.Rows)-1].Frequency
	if lo, hi := around.Range(); lo > first || hi < last {
		sp.notes = append(sp.notes, fmt.Sprintf("driver %q: only from %s to %s do its responses have rows at every angle; beyond, some are carried on by their slopes, which is invented", d.Name, hertz(lo), hertz(hi)))
	}
	sp.bearing = func(ear field.Point) field.Bearing {
		if pivot.Distance(ear) == 0 {
			return field.Bearing{}
		}
		return field.BearingOf(ear, pivot, mic)
	}
	return nil
}

// invented says what about a speaker in the direction of an ear was not measured, though others of its responses were.
func (sp *speaker) invented(ear field.Point) []string {
	if sp.around == nil {
		return nil
	}
	b := sp.bearing(ear)
	return sp.around.Invented(b.OffDeg, b.AroundDeg)
}
