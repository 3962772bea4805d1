package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"runtime"
	"sync"

	"sixdown/sim/circuit"
	"sixdown/xover/quantity"
)

// chunk is how many frequencies are worth a goroutine of their own; a chunk is some milliseconds of work.
const chunk = 2048

// nudge is the relative step up and down of a frequency between which a group delay is taken. The central
// difference is off by nudge²·(ωτ)‴/6 or so, some 1e-9 at crossover-like slopes, and rounding adds about
// 1e-15/(nudge·ωτ).
const nudge = 1e-5

// Predict answers at freqs, in Hz, each > 0 and finite, in any order; it keeps a copy. Long grids are shared
// among the machine's cores, which changes no digit of the answer.
func (s *System) Predict(freqs []float64) (*Response, error) {
	for _, f := range freqs {
		if !(f > 0) || math.IsInf(f, 1) {
			return nil, fmt.Errorf("predict: a frequency is %g Hz; give positive ones", f)
		}
	}
	r := s.newResponse(freqs)
	if len(freqs) == 0 {
		return r, nil
	}
	r.Warnings = s.rangeWarnings(freqs)
	workers := min(runtime.GOMAXPROCS(0), (len(freqs)+chunk-1)/chunk)
	errs := make([]error, workers)
	var wg sync.WaitGroup
	for w := range workers {
		lo, hi := w*len(freqs)/workers, (w+1)*len(freqs)/workers
		if workers == 1 {
			errs[w] = s.predict(r, lo, hi)
			break
		}
		wg.Go(func() { errs[w] = s.predict(r, lo, hi) })
	}
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return nil, err
		}
	}
	return r, nil
}

// newResponse returns a Response with its slices made.
func (s *System) newResponse(freqs []float64) *Response {
	n := len(freqs)
	r := &Response{
		Title: s.title,
		Freqs: append(make([]float64, 0, n), freqs...),
		Amp:   make([]complex128, n),
		Zin:   make([]complex128, n),
	}
	for i, name := range s.names {
		w := WayResponse{Name: name, H: make([]complex128, n)}
		if s.tone == nil {
			w.Driver = s.ways[i].speaker.name
		}
		if s.Sounds(i) {
			w.P = make([]complex128, n)
		}
		r.Ways = append(r.Ways, w)
	}
	if s.Sums() {
		r.Sum = make([]complex128, n)
		r.SumDelay = make([]float64, n)
	}
	return r
}

// predict fills r from lo up to hi.
func (s *System) predict(r *Response, lo, hi int) error {
	n := hi - lo
	grid := r.Freqs[lo:hi:hi]
	if s.Sums() {
		for _, f := range r.Freqs[lo:hi] {
			grid = append(grid, f*(1-nudge))
		}
		for _, f := range r.Freqs[lo:hi] {
			grid = append(grid, f*(1+nudge))
		}
	}
	sweep, err := s.circuit.NewSweep(grid)
	if err != nil {
		return err
	}
	if err := sweep.Solve(); err != nil {
		return err
	}
	z := make([]complex128, len(grid))
	sweep.AmpGain(z)
	copy(r.Amp[lo:hi], z)
	sweep.InputImpedance(z)
	copy(r.Zin[lo:hi], z)
	sum := make([]complex128, len(grid))
	air := make([]complex128, len(grid))
	for i := range r.Ways {
		sweep.Gain(z, i)
		copy(r.Ways[i].H[lo:hi], z)
		if !s.Sounds(i) {
			continue
		}
		s.Pressures(air, i, grid)
		for k := range z {
			z[k] *= air[k]
			sum[k] += z[k]
		}
		copy(r.Ways[i].P[lo:hi], z)
	}
	if s.Sums() {
		copy(r.Sum[lo:hi], sum)
		for k := range n {
			turn := cmplx.Phase(sum[2*n+k] * cmplx.Conj(sum[n+k]))
			r.SumDelay[lo+k] = -turn / (2 * math.Pi * (grid[2*n+k] - grid[n+k]))
		}
	}
	return nil
}

// Sounds reports whether the driver of way i has an acoustic output.
func (s *System) Sounds(i int) bool { return s.tone == nil && s.ways[i].speaker.radiator != nil }

// Sums reports whether every way has one, so that there is a sum.
func (s *System) Sums() bool {
	for i := range s.ways {
		if !s.Sounds(i) {
			return false
		}
	}
	return s.tone == nil
}

// Pressures stores in dst[k] the pressure in Pa rms at the ear that way i gives at freqs[k], in Hz, for a gain
// of 1 at the drive's level; so what it gives is this times its gain. len(dst) must be len(freqs), and the way
// must sound, else Pressures panics. It allocates nothing.
func (s *System) Pressures(dst []complex128, i int, freqs []float64) {
	if len(dst) != len(freqs) {
		panic("sim: Pressures: dst and freqs differ in length")
	}
	sp := s.ways[i].speaker
	level := complex(s.level, 0)
	for k, f := range freqs {
		dst[k] = level * sp.radiator.Pressure(f) * sp.path.At(f)
	}
}

// rangeWarnings names the tables that freqs go beyond.
func (s *System) rangeWarnings(freqs []float64) []string {
	lo, hi := freqs[0], freqs[0]
	for _, f := range freqs {
		lo, hi = min(lo, f), max(hi, f)
	}
	var ws []string
	seen := map[string]bool{}
	for _, w := range s.ways {
		for _, t := range w.speaker.tables {
			if seen[t.Name()] {
				continue
			}
			seen[t.Name()] = true
			from, to := t.Range()
			const tell = "%s: the table %s at %s; from there to %s %s is carried on, which is invented"
			if lo < from {
				ws = append(ws, fmt.Sprintf(tell, t.Name(), "begins", hertz(from), hertz(lo), t.Beyond()))
			}
			if hi > to {
				ws = append(ws, fmt.Sprintf(tell, t.Name(), "ends", hertz(to), hertz(hi), t.Beyond()))
			}
		}
	}
	return ws
}

// hertz writes a frequency in Hz for a message.
func hertz(f float64) string { return quantity.Round(f, quantity.Hertz, 3) }

// at answers at the one frequency f in Hz: the ways' gains and pressures, the sum and the input impedance. The
// slices are new; p and sum are nil and 0 where there is no sound.
func (s *System) at(f float64) (*instant, error) {
	pt, err := s.circuit.At(complex(0, 2*math.Pi*f))
	if err != nil {
		return nil, err
	}
	in := &instant{h: pt.Gain, zin: pt.Zin}
	if !s.Sums() {
		return in, nil
	}
	in.p = make([]complex128, len(s.ways))
	for i := range s.ways {
		s.Pressures(in.p[i:i+1], i, []float64{f})
		in.p[i] *= pt.Gain[i]
		in.sum += in.p[i]
	}
	return in, nil
}

// An instant is a Response at one frequency.
type instant struct {
	h, p     []complex128
	sum, zin complex128
}

var _ circuit.OnePort = port{}
