package spread

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"

	"sixdown/sim"
)

// Settings are how Run builds. The zero value is a good one.
type Settings struct {
	Samples   int     // builds; 0: 20000
	Seed      uint64  // of the sequence
	PerOctave int     // frequencies an octave; 0: 12
	From, To  float64 // Hz, of the fans; 0: 20 Hz and 20 kHz
	LimitDB   float64 // dB; 0: the design's
	Workers   int     // goroutines; 0: as many as there are cores. It changes no digit of the result
	Progress  func(done float64)
}

// MaxSamples is the most builds that a Run makes: some hundred megabytes.
const MaxSamples = 200000

// A Result is what many builds of a design are like.
type Result struct {
	Freqs         []float64 // Hz
	Sum           *Fan      // dB SPL at the ear; nil without a sum
	Ways          []Fan     // dB SPL at the ear, or gain in dB of a way that makes no sound
	LimitDB       float64   // dB
	Band          [2]float64
	Yield         float64       // share of builds that stay within LimitDB over Band
	YieldSigma    float64       // standard error of Yield as if the builds were independent, which is more than it is
	WorstAt       float64       // Hz, where the most builds of those that fail are the farthest off; 0: none fails
	Sensitivities []Sensitivity // the strongest first
	Match         *Match        // nil if the design does not ask for one
	Samples       int           // builds made
	Interrupted   bool          // fewer than asked for
}

// A Fan is between which levels builds lie: quantiles at each frequency, by linear interpolation of the order statistics (type 7 of
// R. J. Hyndman and Y. Fan, "Sample Quantiles in Statistical Packages", American Statistician 50, 1996, 361–365).
type Fan struct {
	Name                    string
	Nominal                 []float64 // dB, each part at its nominal value
	P05, P25, P50, P75, P95 []float64 // dB
}

// A Match is how a left and a right loudspeaker built independently compare: the greatest difference of their sums over
// the band.
type Match struct {
	LimitDB float64
	Share   float64 // of pairs that stay within LimitDB
	P95DB   float64 // what 95 % of pairs stay within
}

// grid returns the frequencies that are looked at: those of the fans first, and behind them those of the band that are beyond, and
// its ends. judged are the indices of those in the band.
func (p *Problem) grid(s *Settings) (freqs []float64, fans int, judged []int) {
	steps := max(1, int(math.Round(float64(s.PerOctave)*math.Log2(s.To/s.From))))
	for i := range steps + 1 {
		freqs = append(freqs, s.From*math.Pow(s.To/s.From, float64(i)/float64(steps)))
	}
	fans = len(freqs)
	band := p.Band()
	// The band is judged at as many points where the fans do not go.
	more := max(1, int(math.Round(float64(s.PerOctave)*math.Log2(band[1]/band[0]))))
	for i := range more + 1 {
		if f := band[0] * math.Pow(band[1]/band[0], float64(i)/float64(more)); f < s.From*(1-1e-9) || f > s.To*(1+1e-9) {
			freqs = append(freqs, f)
		}
	}
	for _, f := range []float64{s.From, s.To, band[0], band[1]} {
		if k := slices.IndexFunc(freqs, func(g float64) bool { return math.Abs(g/f-1) < 1e-9 }); k < 0 {
			freqs = append(freqs, f)
		} else {
			freqs[k] = f
		}
	}
	for k, f := range freqs {
		if f >= band[0] && f <= band[1] {
			judged = append(judged, k)
		}
	}
	return freqs, fans, judged
}

func (s *Settings) complete(p *Problem) error {
	s.Samples = cmp.Or(s.Samples, 20000)
	s.PerOctave = cmp.Or(s.PerOctave, 12)
	s.From, s.To = cmp.Or(s.From, 20), cmp.Or(s.To, 20e3)
	s.LimitDB = cmp.Or(s.LimitDB, p.LimitDB())
	s.Workers = cmp.Or(s.Workers, runtime.GOMAXPROCS(0))
	switch {
	case s.Samples < 2 || s.Samples > MaxSamples:
		return fmt.Errorf("spread: %d samples; give 2 to %d", s.Samples, MaxSamples)
	case s.PerOctave < 1 || s.PerOctave > 96:
		return fmt.Errorf("spread: %d points an octave; give 1 to 96", s.PerOctave)
	case !(s.From > 0) || !(s.To > s.From) || math.IsInf(s.To, 1):
		return fmt.Errorf("spread: from %g to %g Hz; let them be positive and rise", s.From, s.To)
	case !(s.LimitDB > 0):
		return fmt.Errorf("spread: the limit is %g dB; give a positive number", s.LimitDB)
	}
	return nil
}

// mostLevels is how many levels a run may keep: about a gigabyte with what is made of them.
const mostLevels = 60e6

// Run builds the design many times. ctx stops it early: the result is then of the builds made so far, Interrupted.
func (p *Problem) Run(ctx context.Context, s Settings) (*Result, error) {
	if err := s.complete(p); err != nil {
		return nil, err
	}
	freqs, fans, judged := p.grid(&s)
	if n := float64(s.Samples) * float64(len(freqs)) * float64(p.curves()); n > mostLevels {
		return nil, fmt.Errorf("spread: %d builds of %d curves at %d frequencies are %.0f million levels, and %.0f million are the most; give fewer builds or fewer points an octave", s.Samples, p.curves(), len(freqs), n/1e6, mostLevels/1e6)
	}
	lot, err := p.makeLot(ctx, &s, freqs)
	if err != nil {
		return nil, err
	}
	nominal, err := p.nominal(freqs)
	if err != nil {
		return nil, err
	}
	r := &Result{Freqs: freqs[:fans], LimitDB: s.LimitDB, Band: p.Band(), Samples: lot.made, Interrupted: lot.made < s.Samples}
	curves := make([]Fan, p.curves())
	lot.fans(curves, fans, s.Workers)
	for i := range curves {
		for _, power := range nominal[i][:fans] {
			curves[i].Nominal = append(curves[i].Nominal, decibels(power))
		}
	}
	names := p.sys.Names()
	if p.sys.Sums() {
		curves[0].Name = "sum"
		r.Sum, curves = &curves[0], curves[1:]
	}
	for i := range curves {
		curves[i].Name = names[i]
	}
	r.Ways = curves
	wanted, err := p.wanted(freqs, nominal, judged)
	if err != nil {
		return nil, err
	}
	r.Yield, r.WorstAt = lot.yield(wanted, judged, s.LimitDB)
	r.YieldSigma = math.Sqrt(r.Yield * (1 - r.Yield) / float64(lot.made))
	if r.Sensitivities, err = p.sensitivities(freqs, judged); err != nil {
		return nil, err
	}
	if m := p.design.Spread.MatchDB; m > 0 && lot.made >= 4 {
		r.Match = lot.match(judged, m, s.Seed)
	}
	return r, nil
}

// judgedCurves is how many curves a build is judged by: the sum, or the ways where there is none.
func (p *Problem) judgedCurves() int {
	if p.sys.Sums() {
		return 1
	}
	return p.curves()
}

// nominal returns the powers of the curves as designed.
func (p *Problem) nominal(freqs []float64) ([][]float32, error) {
	b, err := p.newBench(freqs)
	if err != nil {
		return nil, err
	}
	ones := make([]float64, len(p.parts))
	for i := range ones {
		ones[i] = 1
	}
	if err := b.build(ones); err != nil {
		return nil, err
	}
	b.measure()
	return b.power, nil
}

// wanted returns, for the curves that are judged, the power that a build should stay near: the nominal one or, where the
// design asks for it, the sum's aim about its level.
func (p *Problem) wanted(freqs []float64, nominal [][]float32, judged []int) ([][]float32, error) {
	nominal = nominal[:p.judgedCurves()]
	if !p.design.Spread.AboutLevel || !p.sys.Sums() {
		return nominal, nil
	}
	aim, err := sim.Aim(&p.design.Tune, freqs, p.open)
	if err != nil {
		return nil, fmt.Errorf("spread: %w", err)
	}
	level := p.design.Tune.Level
	if !p.design.Tune.HasLevel {
		level = 0
		for _, k := range judged {
			level += (decibels(nominal[0][k]) - aim[k]) / float64(len(judged))
		}
	}
	want := make([]float32, len(freqs))
	for k := range want {
		want[k] = float32(math.Pow(10, (level+aim[k])/10))
	}
	return [][]float32{want}, nil
}

// A lot is many builds, measured.
type lot struct {
	p     *Problem
	freqs []float64   // Hz
	n     int         // how many
	power [][]float32 // by curve: build by build, n powers each
	made  int         // the first so many builds
}

// batch is how many builds a goroutine makes before it looks up.
const batch = 64

// makeLot makes the builds.
func (p *Problem) makeLot(ctx context.Context, s *Settings, freqs []float64) (*lot, error) {
	l := &lot{p: p, freqs: freqs, n: len(freqs)}
	for range p.curves() {
		l.power = append(l.power, make([]float32, s.Samples*l.n))
	}
	sampler := NewSampler(len(p.parts), s.Seed)
	batches := (s.Samples + batch - 1) / batch
	done := make([]bool, batches)
	var next, finished atomic.Int64
	var telling sync.Mutex
	errs := make([]error, s.Workers)
	var wg sync.WaitGroup
	for w := range s.Workers {
		wg.Go(func() {
			b, err := p.newBench(freqs)
			if err != nil {
				errs[w] = err
				return
			}
			factors := make([]float64, len(p.parts))
			for i := int(next.Add(1)) - 1; i < batches && ctx.Err() == nil; i = int(next.Add(1)) - 1 {
				for build := i * batch; build < min((i+1)*batch, s.Samples); build++ {
					p.Factors(factors, sampler, build)
					if errs[w] = b.build(factors); errs[w] != nil {
						return
					}
					b.measure()
					for c := range l.power {
						copy(l.power[c][build*l.n:], b.power[c])
					}
				}
				done[i] = true
				if n := finished.Add(1); s.Progress != nil {
					telling.Lock()
					s.Progress(float64(n) / float64(batches))
					telling.Unlock()
				}
			}
		})
	}
	wg.Wait()
	if err := errors.Join(errs...); err != nil {
		return nil, fmt.Errorf("spread: %w", err)
	}
	whole := 0
	for whole < batches && done[whole] {
		whole++
	}
	l.made = min(whole*batch, s.Samples)
	if l.made < 2 {
		return nil, ctx.Err()
	}
	return l, nil
}

// Factors stores in dst, by part, what a build's parts are of their nominal values.
func (p *Problem) Factors(dst []float64, s *Sampler, build int) {
	s.At(dst, build)
	for i := range dst {
		dst[i] = 1 + deviation(dst[i], p.parts[i].Tol, p.design.Spread.Normal)
	}
}

// fans fills the quantiles of the first count frequencies.
func (l *lot) fans(curves []Fan, count, workers int) {
	for c := range curves {
		f := &curves[c]
		for _, q := range []*[]float64{&f.P05, &f.P25, &f.P50, &f.P75, &f.P95} {
			*q = make([]float64, count)
		}
	}
	var next atomic.Int64
	var wg sync.WaitGroup
	for range workers {
		wg.Go(func() {
			column, spare := make([]uint32, l.made), make([]uint32, l.made)
			for task := int(next.Add(1)) - 1; task < count*len(curves); task = int(next.Add(1)) - 1 {
				c, k := task/count, task%count
				for i := range column {
					column[i] = math.Float32bits(l.power[c][i*l.n+k])
				}
				sortBits(column, spare)
				level := func(i int) float64 { return decibels(math.Float32frombits(column[i])) }
				f := &curves[c]
				f.P05[k], f.P25[k], f.P50[k] = quantile(l.made, level, 0.05), quantile(l.made, level, 0.25), quantile(l.made, level, 0.5)
				f.P75[k], f.P95[k] = quantile(l.made, level, 0.75), quantile(l.made, level, 0.95)
			}
		})
	}
	wg.Wait()
}

// quantile returns the p-quantile of n values, of which value gives the one of each rank.
func quantile(n int, value func(rank int) float64, p float64) float64 {
	at := p * float64(n-1)
	i := min(int(at), n-2)
	lo, hi := value(i), value(i+1)
	return lo + (at-float64(i))*(hi-lo)
}

// sortBits sorts the bits of floating-point numbers that are not negative, which rise as the numbers do: by their digits to
// the base 2048, the lowest first. spare has the same length.
func sortBits(bits, spare []uint32) {
	for shift := 0; shift < 32; shift += 11 {
		var first [2048]int
		for _, b := range bits {
			first[b>>shift&2047]++
		}
		sum := 0
		for d, n := range first {
			first[d] = sum
			sum += n
		}
		for _, b := range bits {
			d := b >> shift & 2047
			spare[first[d]] = b
			first[d]++
		}
		bits, spare = spare, bits
	}
	copy(spare, bits) // three passes end in the other
}

// yield returns the share of builds whose judged curves stay within limit of what is wanted, and where those that do not are
// most often the farthest off.
func (l *lot) yield(wanted [][]float32, judged []int, limit float64) (share, worstAt float64) {
	pass := 0
	fails := make([]int, l.n)
	for i := range l.made {
		far, at := float32(1), 0
		for c, want := range wanted {
			row := l.power[c][i*l.n : (i+1)*l.n]
			for _, k := range judged {
				if d := max(row[k]/want[k], want[k]/row[k]); d > far {
					far, at = d, k
				}
			}
		}
		if decibels(far) <= limit {
			pass++
		} else {
			fails[at]++
		}
	}
	most := 0
	for k, n := range fails {
		if n > fails[most] {
			most = k
		}
	}
	if pass < l.made {
		worstAt = l.freqs[most]
	}
	return float64(pass) / float64(l.made), worstAt
}

// match compares each build of one half with a build of the other, drawn by lot, since neighbours in a quasi-random sequence
// are not independent.
func (l *lot) match(judged []int, limit float64, seed uint64) *Match {
	half := l.made / 2
	partner := rand.New(rand.NewPCG(seed, 0x1e57)).Perm(half) // any second word
	differences := make([]float64, half)
	m := &Match{LimitDB: limit}
	for i := range half {
		far := float32(1)
		for c := range l.p.judgedCurves() {
			a, b := l.power[c][i*l.n:(i+1)*l.n], l.power[c][(half+partner[i])*l.n:(half+partner[i]+1)*l.n]
			for _, k := range judged {
				far = max(far, a[k]/b[k], b[k]/a[k])
			}
		}
		differences[i] = decibels(far)
		if differences[i] <= limit {
			m.Share += 1 / float64(half)
		}
	}
	slices.Sort(differences)
	m.P95DB = quantile(half, func(i int) float64 { return differences[i] }, 0.95)
	return m
}
