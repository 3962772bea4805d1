package audioio

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"math/cmplx"

	"sixdown/audioio/measure"
	"sixdown/audioio/signal"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
	"sixdown/sim/circuit"
)

// Limits say when a recording passes. A limit not above zero, and a floor not below it, takes the default.
type Limits struct {
	GainDB   float64 // dB; default 0.005 for tones of 24 bits and more, 0.02 for 16; 0.01 and the fit error for sweeps; 0.1 for noise
	PhaseDeg float64 // degrees; default 0.05, 0.2, 0.1 and the fit error, 1
	FloorDB  float64 // a point counts if its way is predicted above this, dB re the amplifier's terminals; default -60 for tones, -50 else
}

// A Point compares one way at one frequency. Gains are relative to the amplifier's terminals, wiring polarity
// included.
type Point struct {
	Way       string
	Hz        float64
	Predicted complex128
	Fitted    complex128 // Predicted with the circuits that stand for impedance tables in sound files; Predicted itself without tables
	Measured  complex128
	Counted   bool // its level is above the floor
}

// GainErrorDB is the measured level less that of Fitted, in dB: a recording is of the fitted circuits, so what they
// change is no error of it.
func (p *Point) GainErrorDB() float64 { return sim.DB(p.Measured) - sim.DB(p.Fitted) }

// PhaseErrorDeg is the measured phase less that of Fitted, in (-180, 180] degrees.
func (p *Point) PhaseErrorDeg() float64 { return sim.PhaseDeg(p.Measured / p.Fitted) }

// FitGainDB is the level of Fitted less that of Predicted, in dB: what the fits' errors make.
func (p *Point) FitGainDB() float64 { return sim.DB(p.Fitted) - sim.DB(p.Predicted) }

// FitPhaseDeg is the phase of Fitted less that of Predicted, in (-180, 180] degrees.
func (p *Point) FitPhaseDeg() float64 { return sim.PhaseDeg(p.Fitted / p.Predicted) }

// A Verification is what a recording says of a design.
type Verification struct {
	Points        []Point // way by way, in the order of the recording
	WorstGain     *Point  // the counted point with the largest gain error; nil if none counts
	WorstPhase    *Point
	WorstFitGain  *Point // the counted point where the fits' errors make most of a difference; nil without impedance tables
	WorstFitPhase *Point
	FitNotes      []string // what was fitted, and how near it is to its table
	LimitGainDB   float64
	LimitPhaseDeg float64
	FloorDB       float64
	Pass          bool
	Suspects      []Suspect // empty when it passes
	Warnings      []string  // about the file
}

// longest is the length of sweeps, noise and music that can be verified: they are taken as a whole.
const longest = 120 // s

// Verify reads a recording of sys and compares every way with the prediction, relative to channel 1, so that
// neither the level nor the source resistance matters. Where drivers are known by impedance tables, the recording is
// held against the circuits fitted to them, and what these change is told apart. Tones are measured by the sine fit of IEEE Std
// 1057, other signals by the ratio of the spectra of the whole record at 24 points an octave.
func Verify(ctx context.Context, sys *sim.System, rec *Recording, r io.ReadSeeker, lim Limits) (*Verification, error) {
	in, err := wavfile.NewReader(r)
	if err != nil {
		return nil, err
	}
	if err := rec.check(sys, in); err != nil {
		return nil, err
	}
	if rec.Turned {
		return nil, errors.New("verify: a control was turned while the file was made, so that no one setting predicts it; render it without --turning")
	}
	var m *measurement
	if rec.Signal == Tones {
		m, err = measureTones(ctx, rec, in)
	} else {
		m, err = measureWhole(ctx, rec, in)
	}
	if err != nil {
		return nil, err
	}
	hz, measured := m.hz, m.ways
	p, err := newPredictor(sys, hz)
	if err != nil {
		return nil, err
	}
	v := &Verification{Warnings: append(in.Warnings(), m.notes()...)}
	v.setLimits(lim, rec, in.Encoding().Bits())
	if err := p.sweep.Solve(); err != nil {
		return nil, err
	}
	tables, err := p.withTables(sys, hz)
	if err != nil {
		return nil, err
	}
	fitted, want := make([]complex128, len(hz)), make([]complex128, len(hz))
	for w, name := range rec.Ways {
		p.sweep.Gain(fitted, w)
		tables.Gain(want, w)
		for i, f := range hz {
			v.Points = append(v.Points, Point{
				Way: name, Hz: f, Predicted: want[i], Fitted: fitted[i], Measured: measured[w][i],
				Counted: sim.DB(fitted[i]) > v.FloorDB,
			})
		}
	}
	v.judge()
	if tables != p.sweep {
		v.judgeFits()
		v.FitNotes = sys.FitNotes()
	}
	if !v.Pass {
		v.Suspects, err = p.suspects(sys, v)
	}
	return v, err
}

// check holds the recording against the design and the file.
func (rec *Recording) check(sys *sim.System, in *wavfile.Reader) error {
	names := sys.Names()
	same := len(names) == len(rec.Ways)
	for i := 0; same && i < len(names); i++ {
		same = names[i] == rec.Ways[i]
	}
	if !same {
		return fmt.Errorf("verify: the recording is of the ways %q, the design has %q; render the design again", rec.Ways, names)
	}
	f := in.Format()
	if f.NumChannels != 1+len(names) {
		return fmt.Errorf("verify: the file has %d channels; a recording of this design has %d: the amplifier's terminals and a way each", f.NumChannels, 1+len(names))
	}
	if f.SampleRate != rec.Rate {
		return fmt.Errorf("verify: the file's rate is %d Hz, its schedule's is %d Hz; give the two that were written together", f.SampleRate, rec.Rate)
	}
	if n := in.Frames(); n >= 0 && n < int64(rec.LengthSamples) {
		return fmt.Errorf("verify: the file ends after %d of %d frames; render it again", n, rec.LengthSamples)
	}
	if rec.Signal != Tones {
		return nil
	}
	return rec.Validate()
}

// A measurement is what a file says.
type measurement struct {
	hz   []float64
	ways [][]complex128 // way by way, over the amplifier's terminals

	clipped int     // samples at full scale
	rough   float64 // the most that is left of channel 1 beside a tone, of the tone's rms
	roughAt float64 // Hz
}

func newMeasurement(hz []float64, ways int) *measurement {
	m := &measurement{hz: hz}
	for range ways {
		m.ways = append(m.ways, make([]complex128, len(hz)))
	}
	return m
}

// fullScale is what a sample must reach to count as clipped: the last step of 16 bits.
const fullScale = 1 - 0x1p-15

// smooth is how much may be left beside a tone in channel 1, which holds nothing else: far above the steps of 16
// bits, far below what a cut, a shift into a tone's rise, or distortion leaves.
const smooth = 0.003

func (m *measurement) countClipped(ch [][]float64) {
	for _, c := range ch {
		for _, v := range c {
			if math.Abs(v) >= fullScale {
				m.clipped++
			}
		}
	}
}

// notes says what makes the file doubtful.
func (m *measurement) notes() []string {
	var n []string
	if m.clipped > 0 {
		n = append(n, fmt.Sprintf("%d samples are at full scale: it was clipped, and its levels are not to be trusted; record it again, quieter", m.clipped))
	}
	if m.rough > smooth {
		n = append(n, fmt.Sprintf("channel 1 is not the steady tone that the schedule says at %.4g Hz, by %.2g of it: the file was cut, shifted or changed; give it as it was rendered", m.roughAt, m.rough))
	}
	return n
}

// measureTones fits the sines of the schedule.
func measureTones(ctx context.Context, rec *Recording, in *wavfile.Reader) (*measurement, error) {
	channels := 1 + len(rec.Ways)
	longest := 0
	hz := make([]float64, len(rec.Tones))
	for i, t := range rec.Tones {
		longest, hz[i] = max(longest, t.MeasureSamples), t.FrequencyHz
	}
	m := newMeasurement(hz, len(rec.Ways))
	window := grid(channels, longest)
	view := make([][]float64, channels)
	fits := make([]measure.Sine, channels)
	for i, t := range rec.Tones {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if err := in.SeekFrame(int64(t.MeasureStart())); err != nil {
			return nil, err
		}
		for c := range view {
			view[c] = window[c][:t.MeasureSamples]
		}
		if err := readFull(in, view); err != nil {
			return nil, err
		}
		if err := measure.FitSines(fits, view, t.FrequencyHz, float64(rec.Rate)); err != nil {
			return nil, err
		}
		m.countClipped(view)
		if r := fits[0].Residual * math.Sqrt2 / fits[0].Amplitude(); r > m.rough {
			m.rough, m.roughAt = r, t.FrequencyHz
		}
		for w := range m.ways {
			ratio, err := measure.Ratio(fits[1+w], fits[0])
			if err != nil {
				return nil, fmt.Errorf("verify: at %.5g Hz: %w", t.FrequencyHz, err)
			}
			m.ways[w][i] = ratio
		}
	}
	return m, nil
}

// perOctave is how many points an octave a broad-band recording is compared at.
const perOctave = 24

// shortestNoise is how long noise must be for its spectrum to be measured at all.
const shortestNoise = 2 // s

// measureWhole takes the spectra of a whole record.
func measureWhole(ctx context.Context, rec *Recording, in *wavfile.Reader) (*measurement, error) {
	switch {
	case rec.Signal == Music:
		return nil, errors.New("verify: music may leave whole bands silent and proves nothing there; verify tones, a sweep or noise")
	case rec.LengthSamples > longest*rec.Rate:
		return nil, fmt.Errorf("verify: the recording lasts %d s; up to %d s can be verified: render a shorter one, or tones", rec.LengthSamples/rec.Rate, longest)
	case rec.Signal == Noise && rec.LengthSamples < shortestNoise*rec.Rate:
		return nil, fmt.Errorf("verify: the noise lasts %.2g s, too little to measure it at 20 Hz; render %d s or more", float64(rec.LengthSamples)/float64(rec.Rate), shortestNoise)
	}
	top := math.Min(rec.BandHz[1], signal.MaxToneHz(rec.Rate))
	if !(rec.BandHz[0] > 0 && rec.BandHz[0] < top) {
		return nil, errors.New("verify: the recording does not say in which band it can be measured; render it anew")
	}
	ch := grid(1+len(rec.Ways), rec.LengthSamples)
	if err := readFull(in, ch); err != nil {
		return nil, err
	}
	var hz []float64
	for k := 0; ; k++ {
		f := rec.BandHz[0] * math.Exp2(float64(k)/perOctave)
		if f > top*(1+1e-9) {
			break
		}
		hz = append(hz, f)
	}
	m := newMeasurement(hz, len(rec.Ways))
	m.countClipped(ch)
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	return m, measure.Transfer(m.ways, ch[1:], ch[0], float64(rec.Rate), hz)
}

// readFull fills dst, one slice a channel.
func readFull(in *wavfile.Reader, dst [][]float64) error {
	rest := make([][]float64, len(dst))
	for done := 0; done < len(dst[0]); {
		for c := range dst {
			rest[c] = dst[c][done:]
		}
		n, err := in.ReadChannels(rest)
		if n == 0 && err == nil {
			err = io.ErrNoProgress
		}
		if errors.Is(err, io.EOF) {
			return errors.New("verify: the file ends before its schedule does; render it again")
		}
		if err != nil {
			return err
		}
		done += n
	}
	return nil
}

func (v *Verification) setLimits(lim Limits, rec *Recording, bits int) {
	v.LimitGainDB, v.LimitPhaseDeg, v.FloorDB = 0.005, 0.05, -60
	if bits < 24 {
		v.LimitGainDB, v.LimitPhaseDeg = 0.02, 0.2
	}
	switch rec.Signal {
	case Sweep:
		v.FloorDB = -50
		v.LimitGainDB = math.Max(v.LimitGainDB, 0.01) + rec.FitDB
		v.LimitPhaseDeg = math.Max(v.LimitPhaseDeg, 0.1) + rec.FitDeg
	case Noise: // its spectrum has weak places, where the file's own rounding is heard
		v.FloorDB, v.LimitGainDB, v.LimitPhaseDeg = -50, 0.1, 1
	}
	if lim.GainDB > 0 {
		v.LimitGainDB = lim.GainDB
	}
	if lim.PhaseDeg > 0 {
		v.LimitPhaseDeg = lim.PhaseDeg
	}
	if lim.FloorDB < 0 {
		v.FloorDB = lim.FloorDB
	}
}

// judge finds the worst of the points that count. A file in which none counts proves nothing: it fails.
func (v *Verification) judge() {
	v.Pass = false
	for i := range v.Points {
		p := &v.Points[i]
		if !p.Counted {
			continue
		}
		if v.WorstGain == nil || worse(p.GainErrorDB(), v.WorstGain.GainErrorDB()) {
			v.WorstGain = p
		}
		if v.WorstPhase == nil || worse(p.PhaseErrorDeg(), v.WorstPhase.PhaseErrorDeg()) {
			v.WorstPhase = p
		}
	}
	if v.WorstGain != nil {
		v.Pass = math.Abs(v.WorstGain.GainErrorDB()) <= v.LimitGainDB && math.Abs(v.WorstPhase.PhaseErrorDeg()) <= v.LimitPhaseDeg
	}
}

// judgeFits finds where the fits' errors make most of a difference.
func (v *Verification) judgeFits() {
	for i := range v.Points {
		p := &v.Points[i]
		if !p.Counted {
			continue
		}
		if v.WorstFitGain == nil || worse(p.FitGainDB(), v.WorstFitGain.FitGainDB()) {
			v.WorstFitGain = p
		}
		if v.WorstFitPhase == nil || worse(p.FitPhaseDeg(), v.WorstFitPhase.FitPhaseDeg()) {
			v.WorstFitPhase = p
		}
	}
}

// worse compares magnitudes; what is no number is worst.
func worse(a, b float64) bool { return math.Abs(a) > math.Abs(b) || math.IsNaN(a) && !math.IsNaN(b) }

// A predictor is the network between the amplifier's terminals and the drivers, on the recording's grid.
// Impedance tables are represented by the circuits fitted to them, as in the recording.
type predictor struct {
	net   *circuit.Netlist
	sweep *circuit.Sweep
	n     int // frequencies
}

func newPredictor(sys *sim.System, hz []float64) (*predictor, error) {
	net := sys.FittedNetlist()
	s, err := sweepOf(net, sys, hz)
	if err != nil {
		return nil, err
	}
	return &predictor{net, s, len(hz)}, nil
}

// withTables returns a solved sweep of the network with the impedance tables themselves; p's own if there are none.
func (p *predictor) withTables(sys *sim.System, hz []float64) (*circuit.Sweep, error) {
	if len(sys.Fits()) == 0 {
		return p.sweep, nil
	}
	s, err := sweepOf(sys.Netlist(), sys, hz)
	if err != nil {
		return nil, err
	}
	return s, s.Solve()
}

// sweepOf compiles the network with an ideal source: gains are then relative to the terminals.
func sweepOf(net *circuit.Netlist, sys *sim.System, hz []float64) (*circuit.Sweep, error) {
	net.Source = 0
	c, err := circuit.Compile(net, sys.Outputs())
	if err != nil {
		return nil, err
	}
	return c.NewSweep(hz)
}

// logRatio is ln(a/b): its real part in nepers, its imaginary part in radians.
func logRatio(a, b complex128) complex128 { return cmplx.Log(a / b) }
