package sim

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"sixdown/sim/field"
)

// A Plane is an orbit of the ear about the origin.
type Plane uint8

// The planes.
const (
	Horizontal Plane = iota // positive angles to the right
	Vertical                // positive angles up
)

// Angle returns the angle of the ear at deg on the orbit.
func (p Plane) Angle(deg float64) field.Angle {
	if p == Vertical {
		return field.Angle{VerticalDeg: deg}
	}
	return field.Angle{HorizontalDeg: deg}
}

// A Polar is what a loudspeaker radiates into the angles of one plane.
type Polar struct {
	Plane    Plane
	Freqs    []float64   // Hz
	AngleDeg []float64   // as asked
	LevelDB  [][]float64 // of the sum, by angle, then by frequency; dB re straight ahead
	Warnings []string
}

// Polar answers at freqs in Hz for the ear at the angles degs of a plane. The error says what is wrong with them,
// or that there is no sum.
func (s *System) Polar(freqs []float64, plane Plane, degs []float64) (*Polar, error) {
	if !s.Sums() {
		return nil, errNoSum
	}
	angles := []field.Angle{{}}
	for _, deg := range degs {
		angles = append(angles, plane.Angle(deg))
	}
	rs, err := s.Field(freqs, angles)
	if err != nil {
		return nil, err
	}
	p := &Polar{Plane: plane, Freqs: slices.Clone(freqs), AngleDeg: slices.Clone(degs), Warnings: warningsOf(rs)}
	ahead := SPLs(rs[0].Sum)
	for _, r := range rs[1:] {
		levels := SPLs(r.Sum)
		for k := range levels {
			levels[k] -= ahead[k]
		}
		p.LevelDB = append(p.LevelDB, levels)
	}
	return p, nil
}

var errNoSum = errors.New("design: there is no sum at the ear; give every driver a response or a sensitivity")

// warningsOf returns the warnings of all, each once.
func warningsOf(rs []*Response) []string {
	var ws []string
	for _, r := range rs {
		for _, w := range r.Warnings {
			if !slices.Contains(ws, w) {
				ws = append(ws, w)
			}
		}
	}
	return ws
}

// Curves are those of ANSI/CTA-2034-A, "Standard Method of Measurement for In-Home Loudspeakers", for a loudspeaker
// that is turned in steps of 10° in two planes. All means are of the squares of pressures. Levels are in dB SPL for the
// drive's level at the design's listening distance, over Freqs. What belongs to which curve, and with what
// weight, is from memory of the standard.
type Curves struct {
	Freqs           []float64 // Hz
	OnAxis          []float64
	ListeningWindow []float64 // mean of the axis, ±10° vertically, ±10°, ±20° and ±30° horizontally

	// Reflections in a room.
	Floor            []float64 // mean of 20°, 30° and 40° down
	Ceiling          []float64 // mean of 40°, 50° and 60° up
	FrontWall        []float64 // mean of the axis, ±10°, ±20° and ±30° horizontally
	SideWalls        []float64 // mean of ±40° to ±80° horizontally
	RearWall         []float64 // mean of ±90° to ±170° and 180° horizontally
	EarlyReflections []float64 // mean of these five

	SoundPower         []float64 // mean over the sphere with the standard's weights; of a beam up to 1.05 dB above the true one
	EarlyReflectionsDI []float64 // dB, ListeningWindow less EarlyReflections
	SoundPowerDI       []float64 // dB, ListeningWindow less SoundPower
	InRoom             []float64 // 12 % of the listening window, 44 % of the early reflections, 44 % of the sound power

	Basis    string   // "measured", "model" or "mixed": where the drivers' directivity is from
	Missing  []string // unless it is "model", what was not measured, a sentence each
	Warnings []string
}

// A direction is one of the standard's angles.
type direction struct {
	plane Plane
	deg   int
}

// angle returns where the ear is.
func (d direction) angle() field.Angle { return d.plane.Angle(float64(d.deg)) }

// directions are all that are measured: 36 horizontally and the 34 vertically that are not among them.
func directions() []direction {
	var all []direction
	for _, plane := range []Plane{Horizontal, Vertical} {
		for deg := -170; deg <= 180; deg += 10 {
			if plane == Horizontal || deg != 0 && deg != 180 {
				all = append(all, direction{plane, deg})
			}
		}
	}
	return all
}

// weight returns what the square of the pressure in a direction counts for in the sound power. The standard prints these
// weights; as remembered, 0.000604486 at 0° and 180°, 0.004730189 at 10°, 0.019629373 at 90°. To their last digit
// they are parts of the sphere: what lies between two half-planes, 5° before and behind the angle, that end in the line
// about which the loudspeaker turns, and between the two planes at 45° that part one orbit from the other. On a unit
// sphere these last are, at an angle ψ on the orbit, at elevations of tan ε = ± sin ψ; with sin ε = sin ψ/√(1 + sin² ψ)
// the part is
//
//	(1/4π) ∫ 2 sin ε dψ = (1/2π) [-arcsin(cos ψ/√2)]
//
// At 0° and 180° the weight is a quarter of what lies there: what is on one side of one orbit. So all 70 add up to
// 1 - 6 × 0.000604486, by which the mean is divided. (Derived; the test
// holds it against the printed figures.)
//
// Away from the orbit such a part is farther from the axis than its angle says, so what beams comes out with more power
// than it has: a cardioid 0.1 dB, a dipole 0.35 dB, a pressure of cos² θ 0.5 dB, a narrow beam up to
// 10 lg(4/π) = 1.05 dB. A quarter of the band between two cones about the axis would be nearer to the truth, and not the
// standard's curve.
func (d direction) weight() float64 {
	const half = 5 * math.Pi / 180
	theta := math.Abs(float64(d.deg)) * math.Pi / 180
	from, to := max(theta-half, 0), min(theta+half, math.Pi)
	return (math.Asin(math.Cos(from)/math.Sqrt2) - math.Asin(math.Cos(to)/math.Sqrt2)) / (2 * math.Pi)
}

// both returns the horizontal directions at each angle to both sides.
func both(degs ...int) []direction {
	var ds []direction
	for _, deg := range degs {
		ds = append(ds, direction{Horizontal, deg})
		if deg != 0 && deg != 180 {
			ds = append(ds, direction{Horizontal, -deg})
		}
	}
	return ds
}

// Curves answers at freqs in Hz. The error says what is wrong with them, or that there is no sum.
func (s *System) Curves(freqs []float64) (*Curves, error) {
	if !s.Sums() {
		return nil, errNoSum
	}
	all := directions()
	angles := make([]field.Angle, len(all))
	for i, d := range all {
		angles[i] = d.angle()
	}
	rs, err := s.Field(freqs, angles)
	if err != nil {
		return nil, err
	}
	squares := map[direction][]float64{}
	for i, r := range rs {
		squares[all[i]] = make([]float64, len(freqs))
		for k, p := range r.Sum {
			squares[all[i]][k] = real(p)*real(p) + imag(p)*imag(p)
		}
	}
	c := curvesOf(squares, len(freqs))
	c.Freqs, c.Warnings = slices.Clone(freqs), warningsOf(rs)
	c.Basis, c.Missing = s.basis(angles)
	return c, nil
}

// curvesOf combines the squares of pressures in all directions.
func curvesOf(squares map[direction][]float64, n int) *Curves {
	mean := func(ds ...direction) []float64 {
		m := make([]float64, n)
		for _, d := range ds {
			for k, q := range squares[d] {
				m[k] += q / float64(len(ds))
			}
		}
		return m
	}
	up := func(degs ...int) []direction {
		var ds []direction
		for _, deg := range degs {
			ds = append(ds, direction{Vertical, deg})
		}
		return ds
	}
	axis := mean(direction{Horizontal, 0})
	window := mean(append(both(0, 10, 20, 30), up(-10, 10)...)...)
	bounces := [][]float64{
		mean(up(-20, -30, -40)...),
		mean(up(40, 50, 60)...),
		mean(both(0, 10, 20, 30)...),
		mean(both(40, 50, 60, 70, 80)...),
		mean(both(90, 100, 110, 120, 130, 140, 150, 160, 170, 180)...),
	}
	early, power, room := make([]float64, n), make([]float64, n), make([]float64, n)
	for _, b := range bounces {
		for k := range b {
			early[k] += b[k] / float64(len(bounces))
		}
	}
	whole := 0.0
	for _, d := range directions() {
		whole += d.weight()
	}
	for _, d := range directions() { // in order, so that rounding is the same each time
		for k, q := range squares[d] {
			power[k] += d.weight() / whole * q
		}
	}
	for k := range room {
		room[k] = 0.12*window[k] + 0.44*early[k] + 0.44*power[k]
	}
	level := func(squares []float64) []float64 {
		return each(complexes(squares), SPL)
	}
	c := &Curves{
		OnAxis: level(axis), ListeningWindow: level(window),
		Floor: level(bounces[0]), Ceiling: level(bounces[1]), FrontWall: level(bounces[2]), SideWalls: level(bounces[3]), RearWall: level(bounces[4]),
		EarlyReflections: level(early), SoundPower: level(power), InRoom: level(room),
	}
	for k := range n {
		c.EarlyReflectionsDI = append(c.EarlyReflectionsDI, c.ListeningWindow[k]-c.EarlyReflections[k])
		c.SoundPowerDI = append(c.SoundPowerDI, c.ListeningWindow[k]-c.SoundPower[k])
	}
	return c
}

// complexes returns the pressures of which squares are the squares.
func complexes(squares []float64) []complex128 {
	p := make([]complex128, len(squares))
	for k, q := range squares {
		p[k] = complex(math.Sqrt(q), 0)
	}
	return p
}

// basis tells where the drivers' directivity at angles is from.
func (s *System) basis(angles []field.Angle) (basis string, missing []string) {
	measured := 0
	var seen []*speaker
	for _, u := range s.units {
		sp := u.speaker
		if slices.Contains(seen, sp) {
			continue
		}
		seen = append(seen, sp)
		var gaps []string
		switch {
		case sp.around != nil:
			measured++
			l := s.listener
			for _, a := range angles {
				l.Angle = a
				for _, gap := range sp.invented(l.Ear()) {
					if !slices.Contains(gaps, gap) {
						gaps = append(gaps, gap)
					}
				}
			}
		case sp.measured:
			measured++
			gaps = []string{"it was measured at one angle and is taken to be the same at all others"}
		default:
			missing = append(missing, fmt.Sprintf("driver %q: it was not measured at angles and is from the model", sp.name))
		}
		for _, gap := range gaps {
			missing = append(missing, fmt.Sprintf("driver %q: %s", sp.name, gap))
		}
	}
	switch {
	case measured == 0:
		return "model", nil
	case len(missing) == 0:
		return "measured", nil
	}
	return "mixed", missing
}
