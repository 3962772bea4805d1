package sim

import (
	"cmp"
	"fmt"
	"math"
	"runtime"
	"sync"
	"sync/atomic"

	"sixdown/sim/circuit"
	"sixdown/sim/field"
	"sixdown/xover/quantity"
)

// chunk is how many frequencies are worth a goroutine of their own; a chunk is some milliseconds of work.
const chunk = 2048

// nudge is the relative step up and down of a frequency between which a group delay is taken. The central
// difference is off by nudge²·(ωτ)‴/6 or so, some 1e-9 at crossover-like slopes, and rounding adds about
// 1e-15/(nudge·ωτ).
const nudge = 1e-5

// Predict answers at freqs, in Hz, each > 0 and finite, in any order, for the ear where the design has it; it
// keeps a copy. Long grids are shared among the machine's cores, which changes no digit of the answer.
func (s *System) Predict(freqs []float64) (*Response, error) {
	return s.PredictAt(freqs, field.Angle{})
}

// PredictAt is Predict with the ear turned by angle from where the design has it.
func (s *System) PredictAt(freqs []float64, angle field.Angle) (*Response, error) {
	rs, err := s.Field(freqs, []field.Angle{angle})
	if err != nil {
		return nil, err
	}
	return rs[0], nil
}

// Field is Predict with the ear turned by each of angles in turn, a Response for each. The circuit is solved
// once, and the answers share what does not depend on the ear: Freqs, Amp, Zin and the ways' H. Angles must be
// finite, and none may put the ear where a driver is.
//
// A driver whose response was measured is taken to radiate alike to all sides, which a warning in the Response
// says where it matters; one from the data sheet has its diaphragm's directivity and, where the design has a
// baffle, its edges.
func (s *System) Field(freqs []float64, angles []field.Angle) ([]*Response, error) {
	for _, f := range freqs {
		if !(f > 0) || math.IsInf(f, 1) {
			return nil, fmt.Errorf("predict: a frequency is %g Hz; give positive ones", f)
		}
	}
	q, err := s.solve(freqs)
	if err != nil {
		return nil, err
	}
	rs, airs := make([]*Response, len(angles)), make([][]air, len(angles))
	err = share(len(angles), func(i int) (err error) {
		airs[i], err = s.airs(angles[i])
		rs[i] = s.newResponse(q, angles[i])
		return err
	})
	if err != nil {
		return nil, err
	}
	chunks := (len(freqs) + chunk - 1) / chunk
	return rs, share(len(angles)*chunks, func(task int) error {
		i, c := task/chunks, task%chunks
		s.hear(rs[i], q, airs[i], c*len(freqs)/chunks, (c+1)*len(freqs)/chunks)
		return nil
	})
}

// share calls do for 0 … n-1, on as many goroutines as there are cores, and returns the error of the lowest
// that fails.
func share(n int, do func(task int) error) error {
	errs := make([]error, n)
	var next atomic.Int64
	work := func() {
		for task := int(next.Add(1)) - 1; task < n; task = int(next.Add(1)) - 1 {
			errs[task] = do(task)
		}
	}
	var wg sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), n) - 1 {
		wg.Go(work)
	}
	work()
	wg.Wait()
	return cmp.Or(errs...)
}

// Sounds reports whether the driver of way i has an acoustic output; of several, each of them.
func (s *System) Sounds(i int) bool {
	if s.tone != nil {
		return false
	}
	for _, u := range s.unitsOf(i) {
		if u.speaker.radiator == nil {
			return false
		}
	}
	return true
}

// Sums reports whether every way has one, so that there is a sum.
func (s *System) Sums() bool {
	for i := range s.ways {
		if !s.Sounds(i) {
			return false
		}
	}
	return s.tone == nil
}

// Pressures stores in dst[k] the pressure in Pa rms at the ear, where the design has it, that way i gives at freqs[k], in Hz, for a gain
// of 1 at the drive's level; so what it gives is this times its gain. len(dst) must be len(freqs), and the way
// must sound, else Pressures panics. It allocates nothing.
func (s *System) Pressures(dst []complex128, i int, freqs []float64) {
	if len(dst) != len(freqs) {
		panic("sim: Pressures: dst and freqs differ in length")
	}
	clear(dst)
	for u := s.ways[i].first; u < s.ways[i].past; u++ {
		for k, f := range freqs {
			dst[k] += s.pressure(u, f) * s.straight[u].factor(f)
		}
	}
}

// pressure returns what unit u gives to the air at f in Hz, in Pa rms, for a gain of 1 of its way at the drive's level.
func (s *System) pressure(u int, f float64) complex128 {
	unit := &s.units[u]
	return complex(s.level, 0) * unit.share(complex(0, 2*math.Pi*f)) * unit.speaker.radiator.Pressure(f)
}

// rangeWarnings names the tables that freqs go beyond.
func (s *System) rangeWarnings(freqs []float64) []string {
	lo, hi := freqs[0], freqs[0]
	for _, f := range freqs {
		lo, hi = min(lo, f), max(hi, f)
	}
	var ws []string
	seen := map[string]bool{}
	for _, u := range s.units {
		for _, t := range u.speaker.tables {
			if seen[t.Name()] {
				continue
			}
			seen[t.Name()] = true
			from, to := t.Range()
			// How far freqs go is left out: of several predictions, each would have a sentence of its own.
			const tell = "%s: the table %s at %s; %s it %s is carried on, which is invented"
			if lo < from {
				ws = append(ws, fmt.Sprintf(tell, t.Name(), "begins", hertz(from), "below", t.Beyond()))
			}
			if hi > to {
				ws = append(ws, fmt.Sprintf(tell, t.Name(), "ends", hertz(to), "above", t.Beyond()))
			}
		}
	}
	return ws
}

// angleWarnings names the drivers whose responses do not say all of the ear's angle.
func (s *System) angleWarnings(angle field.Angle) []string {
	l := s.listener
	l.Angle = angle
	var ws []string
	seen := map[string]bool{}
	for _, u := range s.units {
		sp := u.speaker
		if !sp.measured || seen[sp.name] {
			continue
		}
		seen[sp.name] = true
		if sp.around == nil && angle != (field.Angle{}) {
			ws = append(ws, fmt.Sprintf("driver %q: its response was measured at one angle and is taken to be the same at all others, which is invented", sp.name))
		}
		for _, what := range sp.invented(l.Ear()) {
			ws = append(ws, fmt.Sprintf("driver %q: %s, which is invented", sp.name, what))
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
