package sim

import (
	"math"
	"math/cmplx"
	"slices"

	"sixdown/sim/field"
)

// A Lobe is where in the vertical plane the sum is loudest at the frequency of a crossing. Angles are in degrees up
// from where the design has the ear, within ±45°.
type Lobe struct {
	AngleDeg float64    // of the highest level; of several as high to 0.1 dB, the nearest to 0, or the one above
	LevelDB  float64    // there, relative to that at 0°; +Inf if that is silence
	Nulls    []LobeNull // the nearest below and the nearest above the lobe, rising; one or none if it is farther than 45°
	Warnings []string   // what the angles add to what is invented, a sentence each
}

// A LobeNull is a direction in which the sum is lower than on both sides.
type LobeNull struct {
	AngleDeg float64
	LevelDB  float64 // relative to the lobe; below -6 dB, or it is no null
}

const (
	lobeReach = 45.0 // degrees up and down
	lobeStep  = 0.5  // degrees: 12 of them between neighbouring lobes of two drivers 10 wavelengths apart
	fanStep   = 3.0  // degrees
	lobeAlike = 0.1  // dB
	lobeNull  = -6.0 // dB
)

// A fan is the air from every driver to ears at steps of fanStep in the vertical plane. From it follows the air to an ear
// anywhere between: the path is exact, and what diaphragm and edges do, which changes slowly with the angle, is
// interpolated. Edges are too much work to be done again at each angle that a search tries: some milliseconds.
type fan struct {
	s     *System
	airs  [][]air // by angle
	notes []string
}

func (s *System) newFan() (*fan, error) {
	n := 2*int(lobeReach/fanStep) + 1
	f := &fan{s: s, airs: make([][]air, n)}
	for i := range n {
		if i == n/2 {
			continue
		}
		for _, w := range s.angleWarnings(s.also(field.Angle{VerticalDeg: fanStep * float64(i-n/2)})) {
			if !slices.Contains(f.notes, w) {
				f.notes = append(f.notes, w)
			}
		}
	}
	return f, share(n, func(i int) (err error) {
		f.airs[i], err = s.airs(field.Angle{VerticalDeg: fanStep * float64(i-n/2)})
		return err
	})
}

// A rose is the sum at one frequency by angle.
type rose struct {
	s     *System
	f     float64        // Hz
	front [][]complex128 // by unit, by the fan's angle: what the unit gives for a path of 1
}

func (fn *fan) at(f float64) (*rose, error) {
	q, err := fn.s.solve([]float64{f})
	if err != nil {
		return nil, err
	}
	r := &rose{s: fn.s, f: f, front: make([][]complex128, len(fn.s.units))}
	for i := range r.front {
		r.front[i] = make([]complex128, len(fn.airs))
		for k, as := range fn.airs {
			r.front[i][k] = q.source[i][0] * as[i].factor(f) / as[i].path.At(f)
		}
	}
	return r, nil
}

// size returns the sum's amplitude in Pa at an angle in degrees.
func (r *rose) size(deg float64) float64 {
	l := r.s.listener
	l.Angle = r.s.also(field.Angle{VerticalDeg: deg})
	sum := complex128(0)
	for i, front := range r.front {
		sum += lagrange(front, (deg+lobeReach)/fanStep) * r.s.units[i].speaker.path(l).At(r.f)
	}
	return cmplx.Abs(sum)
}

// lagrange interpolates v, known at 0, 1, 2 …, at x by the polynomial through the six neighbours of x. Where
// v turns by a radian from one to the next, as the sound of a cabinet's edge does at some kHz, it is off by 1/200 of v.
func lagrange(v []complex128, x float64) complex128 {
	const n = 6
	first := min(max(int(math.Floor(x))-n/2+1, 0), len(v)-n)
	sum := complex128(0)
	for i := range n {
		weight := 1.0
		for j := range n {
			if j != i {
				weight *= (x - float64(first+j)) / float64(i-j)
			}
		}
		sum += complex(weight, 0) * v[first+i]
	}
	return sum
}

// lobe looks for the main lobe and the nulls beside it.
func (r *rose) lobe() (Lobe, error) {
	const n = 2*int(lobeReach/lobeStep) + 1
	var deg, size [n]float64
	for i := range deg {
		deg[i] = lobeStep * float64(i-n/2)
		size[i] = r.size(deg[i])
	}
	top := n
	least := math.Pow(10, -lobeAlike/20) * slices.Max(size[:])
	for i := range size {
		peak := (i == 0 || size[i] >= size[i-1]) && (i == n-1 || size[i] >= size[i+1])
		if peak && size[i] >= least && (top == n || max(i-n/2, n/2-i) <= max(top-n/2, n/2-top)) {
			top = i
		}
	}
	l := Lobe{AngleDeg: deg[top]}
	level := size[top]
	var err error
	if top > 0 && top < n-1 {
		if l.AngleDeg, level, err = r.extreme(deg[top], -1); err != nil {
			return Lobe{}, err
		}
	}
	l.LevelDB = 20 * math.Log10(level/size[n/2])
	for _, step := range [2]int{-1, 1} {
		for i := top + step; i > 0 && i < n-1; i += step {
			if size[i] > size[i-1] || size[i] > size[i+1] {
				continue
			}
			angle, least, err := r.extreme(deg[i], 1)
			if err != nil {
				return Lobe{}, err
			}
			if db := 20 * math.Log10(least/level); db < lobeNull {
				l.Nulls = append(l.Nulls, LobeNull{angle, db})
				break
			}
		}
	}
	return l, nil
}

// extreme refines the place of the lowest size within lobeStep of deg, for the sign 1, or of the highest, for -1.
func (r *rose) extreme(deg, sign float64) (angle, size float64, err error) {
	const shift = 2 * lobeReach // minimum takes its tolerance from the numbers' size, and angles may be 0
	found, err := minimum(deg-lobeStep+shift, deg+lobeStep+shift, func(x float64) (float64, error) {
		return sign * r.size(x-shift), nil
	})
	if err != nil {
		return 0, 0, err
	}
	angle, size = found-shift, r.size(found-shift)
	// Where all angles are alike, or the place is on the grid, it is not to be found better than by chance.
	if there := r.size(deg); sign*there <= sign*size+1e-12*there {
		return deg, there, nil
	}
	return angle, size, nil
}
