package spread

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"sixdown/sim"
	"sixdown/sim/circuit"
)

// A Judge builds one loudspeaker at a time about nominal values that may be moved, and tells by how much it is off and which
// way that changes with the nominal values: for those who look for the values of the best yield. One goroutine at a time may
// use it.
type Judge struct {
	Freqs []float64 // Hz, at which builds are judged
	p     *Problem
	sweep *circuit.Sweep
	press [][]complex128 // Pa for a gain of 1, by way
	gain  []complex128
	sum   []complex128
	want  []float64 // dB
	aim   []float64 // dB about the level; nil: builds are judged by their nominal sum

	names  []string    // of SettleGradient
	where  [][]int     // by name: its branches
	wanted [][]float64 // by name, by frequency: the derivative of want by the logarithm of the nominal value, in dB
}

// NewJudge prepares for builds judged at perOctave frequencies an octave of the band and at its ends. The design must have a
// sum. The parts' nominal values are the Judge's own.
func (p *Problem) NewJudge(perOctave int) (*Judge, error) {
	if !p.sys.Sums() {
		return nil, errors.New("spread: there is no sum to judge builds by; give every driver an acoustic output")
	}
	own := *p
	own.parts = slices.Clone(p.parts)
	for i := range own.parts {
		own.parts[i].nominal = slices.Clone(own.parts[i].nominal)
	}
	band := p.Band()
	s := Settings{PerOctave: perOctave, From: band[0], To: band[1]}
	if err := s.complete(p); err != nil {
		return nil, err
	}
	j := &Judge{p: &own}
	j.Freqs, _, _ = own.grid(&s)
	b, err := own.newBench(j.Freqs)
	if err != nil {
		return nil, err
	}
	n := len(j.Freqs)
	j.sweep, j.press = b.sweep, b.press
	j.gain, j.sum, j.want = make([]complex128, n), make([]complex128, n), make([]float64, n)
	if own.design.Spread.AboutLevel {
		if j.aim, err = sim.Aim(&own.design.Tune, j.Freqs, own.open); err != nil {
			return nil, fmt.Errorf("spread: %w", err)
		}
	}
	return j, nil
}

// Dimensions is how many parts deviate.
func (j *Judge) Dimensions() int { return len(j.p.parts) }

// Factors is Problem.Factors.
func (j *Judge) Factors(dst []float64, s *Sampler, build int) { j.p.Factors(dst, s, build) }

// Nominal gives the part of that name another nominal value, in Ω, H or F. Parts that do not deviate are moved too; of a
// potentiometer each side gets the same value, so it is not for these.
func (j *Judge) Nominal(part string, value float64) error {
	for _, branch := range j.p.sys.PartBranches(part) {
		if err := j.sweep.SetValue(branch, value); err != nil {
			return err
		}
	}
	for i := range j.p.parts {
		if p := &j.p.parts[i]; p.Name == part {
			for k := range p.nominal {
				p.nominal[k] = value
			}
		}
	}
	return nil
}

// Settle takes what builds are judged by from the present nominal values. It must be called after Nominal.
func (j *Judge) Settle() error {
	if err := j.set(nil); err != nil {
		return err
	}
	if err := j.sweep.Solve(); err != nil {
		return err
	}
	j.add()
	if j.aim == nil {
		for k := range j.want {
			j.want[k] = j.levelAt(k)
		}
		return nil
	}
	level := j.p.design.Tune.Level
	if !j.p.design.Tune.HasLevel {
		level = 0
		for k := range j.want {
			level += (j.levelAt(k) - j.aim[k]) / float64(len(j.want))
		}
	}
	for k := range j.want {
		j.want[k] = level + j.aim[k]
	}
	return nil
}

// SettleGradient is Settle for OffGradient to follow, by the parts of these names.
func (j *Judge) SettleGradient(names []string) error {
	if err := j.Settle(); err != nil {
		return err
	}
	if err := j.sweep.Gradient(); err != nil {
		return err
	}
	if !slices.Equal(j.names, names) {
		j.names, j.where, j.wanted = slices.Clone(names), nil, nil
		for _, name := range names {
			j.where = append(j.where, j.p.sys.PartBranches(name))
			j.wanted = append(j.wanted, make([]float64, len(j.Freqs)))
		}
	}
	fixed := j.aim != nil && j.p.design.Tune.HasLevel
	for i, wanted := range j.wanted {
		clear(wanted)
		if fixed {
			continue
		}
		mean := 0.0
		for k := range wanted {
			wanted[k] = j.slopeAt(i, k)
			mean += wanted[k] / float64(len(wanted))
		}
		for k := range wanted {
			if j.aim != nil {
				wanted[k] = mean
			}
		}
	}
	return nil
}

// slopeAt returns the derivative of the present build's level at frequency k by the logarithm of the value of part i, in dB.
func (j *Judge) slopeAt(i, k int) float64 {
	d := complex128(0)
	for w, press := range j.press {
		for _, branch := range j.where[i] {
			d += press[k] * j.sweep.GainGradientAt(w, branch, k) * complex(j.sweep.Value(branch), 0)
		}
	}
	return 20 / math.Ln10 * real(d/j.sum[k])
}

// set gives the parts their nominal values times factors; nil: 1.
func (j *Judge) set(factors []float64) error {
	for i := range j.p.parts {
		part, f := &j.p.parts[i], 1.0
		if factors != nil {
			f = max(factors[i], leastFactor)
		}
		for k, branch := range part.branches {
			if err := j.sweep.SetValue(branch, part.nominal[k]*f); err != nil {
				return err
			}
		}
	}
	return nil
}

// add adds up the sum of the present build.
func (j *Judge) add() {
	clear(j.sum)
	for w, press := range j.press {
		j.sweep.Gain(j.gain, w)
		for k, g := range j.gain {
			j.sum[k] += press[k] * g
		}
	}
}

func (j *Judge) levelAt(k int) float64 {
	re, im := real(j.sum[k])/pascalRef, imag(j.sum[k])/pascalRef
	return max(10*math.Log10(re*re+im*im), lowestDB)
}

// Off builds with these factors and returns the greatest deviation in dB, with its sign, and the index of the frequency
// where it is. It allocates nothing.
func (j *Judge) Off(factors []float64) (db float64, at int, err error) {
	if err := j.set(factors); err != nil {
		return 0, 0, err
	}
	if err := j.sweep.Solve(); err != nil {
		return 0, 0, err
	}
	db, at = j.worst()
	return db, at, nil
}

func (j *Judge) worst() (db float64, at int) {
	j.add()
	for k, want := range j.want {
		if d := j.levelAt(k) - want; math.Abs(d) > math.Abs(db) {
			db, at = d, k
		}
	}
	return db, at
}

// OffGradient is Off, and stores in dst, by the names that SettleGradient was given, the derivative of that level by the logarithm of
// the nominal value, in dB: of the build's own and of what it is judged by. It allocates nothing once it has been called.
func (j *Judge) OffGradient(dst, factors []float64) (db float64, at int, err error) {
	if err := j.set(factors); err != nil {
		return 0, 0, err
	}
	if err := j.sweep.Gradient(); err != nil {
		return 0, 0, err
	}
	db, at = j.worst()
	for i := range j.names {
		dst[i] = j.slopeAt(i, at) - j.wanted[i][at]
	}
	return db, at, nil
}
