package spread

import (
	"errors"
	"fmt"
	"io"
	"math"
	"slices"

	"sixdown/sim"
	"sixdown/sim/circuit"
	"sixdown/xover"
)

// A Problem is a design of which many are built. It does not change, and may be used from several goroutines.
type Problem struct {
	design *xover.Design
	sys    *sim.System
	parts  []Part
	open   func(name string) (io.ReadCloser, error)
}

// A Part is one that deviates.
type Part struct {
	Name     string
	Tol      float64 // fraction of the value
	branches []int
	nominal  []float64 // of each branch, Ω, H or F
}

// leastFactor is the least that a part may be of its nominal value, however wide its tolerance: none is negative.
const leastFactor = 0.01

// New makes a Problem of a design and the System that was made of it; open opens the file of [tune] curve, and may be nil if
// there is none. New keeps all three.
func New(d *xover.Design, sys *sim.System, open func(name string) (io.ReadCloser, error)) (*Problem, error) {
	p := &Problem{design: d, sys: sys, open: open}
	net := sys.Netlist()
	for _, name := range sys.Parts() {
		part := Part{Name: name, Tol: tolerance(d, name)}
		if !(part.Tol > 0) {
			continue
		}
		for _, b := range sys.PartBranches(name) {
			if v := net.Branches[b].Value; v > 0 { // a potentiometer at its end is no part on that side
				part.branches, part.nominal = append(part.branches, b), append(part.nominal, v)
			}
		}
		if len(part.branches) > 0 {
			p.parts = append(p.parts, part)
		}
	}
	if len(p.parts) == 0 {
		return nil, errors.New("spread: no part has a tolerance; give some a tol, or [spread] tol")
	}
	return p, nil
}

// tolerance returns a part's own tolerance or that of its kind.
func tolerance(d *xover.Design, name string) float64 {
	part := d.Part(name)
	if part.Tol >= 0 {
		return part.Tol
	}
	switch part.Kind {
	case xover.Inductor:
		return d.Spread.TolL
	case xover.Capacitor:
		return d.Spread.TolC
	case xover.Potentiometer:
		return d.Spread.TolP
	}
	return d.Spread.TolR
}

// Parts returns the parts that deviate, in the order of the network.
func (p *Problem) Parts() []Part { return slices.Clone(p.parts) }

// Band returns the band in Hz over which a build must pass.
func (p *Problem) Band() [2]float64 {
	if b := p.design.Tune.Band; b != [2]float64{} {
		return b
	}
	return [2]float64{200, 20e3}
}

// LimitDB returns what a build may be off by, in dB.
func (p *Problem) LimitDB() float64 {
	if p.design.Spread.LimitDB > 0 {
		return p.design.Spread.LimitDB
	}
	return 1
}

// A bench builds and measures one loudspeaker at a time. One goroutine at a time may use it. It allocates nothing
// once made.
type bench struct {
	p     *Problem
	sweep *circuit.Sweep
	press [][]complex128 // by way; nil: it makes no sound
	gain  []complex128
	sum   []complex128
	power [][]float32 // re (20 µPa)² or 1, by curve: the sum first, if there is one, then the ways
}

// curves is how many curves a bench measures.
func (p *Problem) curves() int {
	if p.sys.Sums() {
		return 1 + len(p.sys.Names())
	}
	return len(p.sys.Names())
}

func (p *Problem) newBench(freqs []float64) (*bench, error) {
	sweep, err := p.sys.Circuit().NewSweep(freqs)
	if err != nil {
		return nil, fmt.Errorf("spread: %w", err)
	}
	b := &bench{p: p, sweep: sweep, gain: make([]complex128, len(freqs)), sum: make([]complex128, len(freqs))}
	for i := range p.sys.Names() {
		var press []complex128
		if p.sys.Sounds(i) {
			press = make([]complex128, len(freqs))
			p.sys.Pressures(press, i, freqs)
		}
		b.press = append(b.press, press)
	}
	b.power = make([][]float32, p.curves())
	for i := range b.power {
		b.power[i] = make([]float32, len(freqs))
	}
	return b, nil
}

// build gives each part its nominal value times a factor.
func (b *bench) build(factors []float64) error {
	for i := range b.p.parts {
		part := &b.p.parts[i]
		for j, branch := range part.branches {
			if err := b.sweep.SetValue(branch, part.nominal[j]*max(factors[i], leastFactor)); err != nil {
				return err
			}
		}
	}
	return b.sweep.Solve()
}

// measure fills power from the present build. Levels are taken of what is asked for in the end, since a logarithm costs as much
// as a frequency.
func (b *bench) measure() {
	sums := b.p.sys.Sums()
	clear(b.sum)
	curve := b.power
	if sums {
		curve = b.power[1:]
	}
	for w, press := range b.press {
		b.sweep.Gain(b.gain, w)
		if press == nil {
			powers(curve[w], b.gain, 1)
			continue
		}
		for k, g := range b.gain {
			g *= press[k]
			b.gain[k] = g
			b.sum[k] += g
		}
		powers(curve[w], b.gain, pascalRef)
	}
	if sums {
		powers(b.power[0], b.sum, pascalRef)
	}
}

const pascalRef = 20e-6 // Pa

// lowestDB stands for silence.
const lowestDB = -360

// powers stores |z/ref|².
func powers(dst []float32, z []complex128, ref float64) {
	scale := 1 / (ref * ref)
	for k, v := range z {
		re, im := real(v), imag(v)
		dst[k] = float32((re*re + im*im) * scale)
	}
}

// decibels returns the level of a power.
func decibels(power float32) float64 { return max(10*math.Log10(float64(power)), lowestDB) }
