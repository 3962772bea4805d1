package sim

import "sixdown/sim/field"

// Turned returns a System that answers for the ear turned by angle about the origin from where s has it, in all that
// is heard: Predict, Summary and the rest. Angles that it is asked for in turn are added to this one, horizontal to
// horizontal and vertical to vertical. The angle must be finite, and may not put the ear where a driver is.
func (s *System) Turned(angle field.Angle) (*System, error) {
	straight, err := s.airs(angle)
	if err != nil {
		return nil, err
	}
	t := *s
	t.straight, t.turned = straight, s.also(angle)
	return &t, nil
}

// also returns angle further on from where the ear is turned already.
func (s *System) also(angle field.Angle) field.Angle {
	return field.Angle{HorizontalDeg: s.turned.HorizontalDeg + angle.HorizontalDeg, VerticalDeg: s.turned.VerticalDeg + angle.VerticalDeg}
}
