package signal

import (
	"fmt"
	"math"
)

// Schedule is the plan of a recording: steady tones one after another. It says
// where in a file each tone can be measured, and goes beside the file as JSON.
type Schedule struct {
	Rate              int     `json:"rate"`                 // Hz
	VoltsPerFullScale float64 `json:"volts_per_full_scale"` // V that a sample of 1 stands for
	Peak              float64 `json:"peak"`                 // amplitude of the tones, full scale 1
	LengthSamples     int     `json:"length_samples"`       // of the whole recording
	Tones             []Tone  `json:"tones"`                // in the order of time
}

// Tone is one steady tone. It begins at StartSample, rises over EdgeSamples,
// and has settled SettleSamples after its beginning (the rise included). There the
// measuring window begins, at a rising zero of the sine; it holds a whole number
// of Cycles in MeasureSamples. Then the tone falls over another EdgeSamples.
type Tone struct {
	FrequencyHz    float64 `json:"frequency_hz"` // Cycles·rate/MeasureSamples, exactly
	StartSample    int     `json:"start_sample"`
	EdgeSamples    int     `json:"edge_samples"`
	SettleSamples  int     `json:"settle_samples"`
	MeasureSamples int     `json:"measure_samples"`
	Cycles         int     `json:"cycles"`
}

// MeasureStart returns the first sample of the measuring window.
func (t Tone) MeasureStart() int { return t.StartSample + t.SettleSamples }

// End returns the sample after the tone's last.
func (t Tone) End() int { return t.MeasureStart() + t.MeasureSamples + t.EdgeSamples }

// ToneSettings shape a schedule. The zero value works.
type ToneSettings struct {
	Peak              float64 // amplitude of the tones, full scale 1; 0 is 0.5
	VoltsPerFullScale float64 // V; 0 is 1

	// Settle gives the time in s that the circuit needs to settle at a frequency
	// in Hz, after the tone's rise; nil is 0.1 s at every frequency.
	Settle func(hz float64) float64

	// MeasureSeconds is the shortest measuring window in s; 0 is 0.25, which
	// averages the rounding of a 16-bit file down by 20·log10(√12000) = 41 dB at 48 kHz.
	MeasureSeconds float64

	MinCycles   int     // fewest cycles in the window; 0 is 10
	EdgeSeconds float64 // length of rise and of fall in s; 0 is 10 ms or a cycle, whichever is longer
	LeadSeconds float64 // silence before the first tone in s; 0 is none
	GapSeconds  float64 // silence between tones in s; 0 is none
	TailSeconds float64 // silence after the last tone in s; 0 is none
}

// maxRelative is the highest frequency of a tone over the sample rate: above it
// a converter's filter, not the network, is measured.
const maxRelative = 0.45

// MaxToneHz returns the frequency in Hz that tones must stay below at a sample rate in Hz.
func MaxToneHz(rate int) float64 { return maxRelative * float64(rate) }

// maxTones bounds what a schedule read from a file can hold.
const maxTones = 100_000

// NewSchedule plans a tone near each of the frequencies, in their order.
//
// Each frequency is lowered by one or a few parts in MeasureSamples, so that a
// whole number of cycles fits a whole number of samples (coherent sampling): the
// measurement then needs no window and a sine fit's three terms are orthogonal.
// The two numbers are chosen with no common divisor, so that no two samples of the
// window fall on the same phase and rounding errors average out instead of
// repeating (IEEE Std 1057 and 1241 on choosing test frequencies). [Tone.FrequencyHz]
// is the frequency that is really there: compare with predictions at that one.
func NewSchedule(hz []float64, rate int, s ToneSettings) (*Schedule, error) {
	const where = "signal: tones"
	if err := checkRate(where, rate); err != nil {
		return nil, err
	}
	if len(hz) == 0 || len(hz) > maxTones {
		return nil, fmt.Errorf("%s: %d frequencies; give 1 to %d", where, len(hz), maxTones)
	}
	s, err := s.withDefaults()
	if err != nil {
		return nil, err
	}
	samples := func(seconds float64) int { return int(math.Ceil(seconds * float64(rate))) }
	plan := &Schedule{
		Rate: rate, VoltsPerFullScale: s.VoltsPerFullScale, Peak: s.Peak,
		Tones: make([]Tone, 0, len(hz)),
	}
	at := samples(s.LeadSeconds)
	for i, f := range hz {
		if !(f > 0 && f < MaxToneHz(rate)) {
			return nil, fmt.Errorf("%s: frequency %v Hz; at a sample rate of %d Hz give one above 0 and below %v Hz, or raise the rate",
				where, f, rate, MaxToneHz(rate))
		}
		if float64(s.MinCycles)/f > maxSeconds {
			return nil, fmt.Errorf("%s: %d cycles of %v Hz take more than a day; ask for fewer cycles or a higher frequency", where, s.MinCycles, f)
		}
		settle := s.Settle(f)
		if err := checkSeconds(where, fmt.Sprintf("the settling time at %v Hz", f), settle); err != nil {
			return nil, err
		}
		rise := s.EdgeSeconds
		if rise == 0 {
			rise = max(0.01, 1/f)
		}
		t := coherent(f, rate, s.MeasureSeconds, s.MinCycles)
		if i > 0 {
			at += samples(s.GapSeconds)
		}
		t.StartSample = at
		t.EdgeSamples = samples(rise)
		t.SettleSamples = t.EdgeSamples + samples(settle)
		plan.Tones = append(plan.Tones, t)
		if at = t.End(); at > maxSeconds*rate {
			return nil, fmt.Errorf("%s: the tones up to %v Hz take more than a day; ask for fewer, higher, or shorter ones", where, f)
		}
	}
	plan.LengthSamples = at + samples(s.TailSeconds)
	return plan, nil
}

func (s ToneSettings) withDefaults() (ToneSettings, error) {
	const where = "signal: tones"
	var err error
	if s.Peak, err = peakOr(where, s.Peak, 0.5); err != nil {
		return s, err
	}
	if s.VoltsPerFullScale == 0 {
		s.VoltsPerFullScale = 1
	}
	if !(s.VoltsPerFullScale > 0) || math.IsInf(s.VoltsPerFullScale, 0) {
		return s, fmt.Errorf("%s: full scale is %v V; give a voltage above 0", where, s.VoltsPerFullScale)
	}
	if s.Settle == nil {
		s.Settle = func(float64) float64 { return 0.1 }
	}
	if s.MeasureSeconds == 0 {
		s.MeasureSeconds = 0.25
	}
	if s.MinCycles == 0 {
		s.MinCycles = 10
	}
	if s.MinCycles < 1 || s.MinCycles > 1_000_000 {
		return s, fmt.Errorf("%s: at least %d cycles; give 1 to a million", where, s.MinCycles)
	}
	for _, t := range []struct {
		what    string
		seconds float64
	}{
		{"the measuring window", s.MeasureSeconds}, {"the edge", s.EdgeSeconds},
		{"the lead", s.LeadSeconds}, {"the gap", s.GapSeconds}, {"the tail", s.TailSeconds},
	} {
		if err := checkSeconds(where, t.what, t.seconds); err != nil {
			return s, err
		}
	}
	return s, nil
}

// coherent returns a tone's frequency, cycles and window length.
func coherent(f float64, rate int, seconds float64, minCycles int) Tone {
	r := float64(rate)
	cycles := max(int(math.Ceil(seconds*f)), minCycles)
	// Rounding up keeps the frequency at or below f, and so below the limit.
	n := int(math.Ceil(float64(cycles) * r / f))
	for gcd(cycles, n) != 1 {
		n++
	}
	return Tone{FrequencyHz: float64(cycles) * r / float64(n), MeasureSamples: n, Cycles: cycles}
}

func gcd(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// Validate checks a schedule that came from outside: numbers in range, tones in
// order of time and not over one another, frequencies that agree with cycles
// and windows.
func (s *Schedule) Validate() error {
	const where = "signal: schedule"
	if err := checkRate(where, s.Rate); err != nil {
		return err
	}
	if !(s.VoltsPerFullScale > 0) || math.IsInf(s.VoltsPerFullScale, 0) {
		return fmt.Errorf("%s: volts_per_full_scale is %v; it must be above 0", where, s.VoltsPerFullScale)
	}
	if !(s.Peak > 0 && s.Peak <= 1) {
		return fmt.Errorf("%s: peak is %v; it must be above 0 and at most 1", where, s.Peak)
	}
	if len(s.Tones) == 0 || len(s.Tones) > maxTones {
		return fmt.Errorf("%s: there are %d tones; it must be 1 to %d", where, len(s.Tones), maxTones)
	}
	limit := maxSeconds * s.Rate
	if s.LengthSamples > limit+limit {
		return fmt.Errorf("%s: length_samples is %d; it must be at most %d", where, s.LengthSamples, limit+limit)
	}
	before := 0
	for i, t := range s.Tones {
		for _, n := range []int{t.StartSample, t.EdgeSamples, t.SettleSamples, t.MeasureSamples} {
			if n < 0 || n > limit {
				return fmt.Errorf("%s: tone %d has a length of %d samples; it must be 0 to %d", where, i+1, n, limit)
			}
		}
		switch want := float64(t.Cycles) * float64(s.Rate) / float64(t.MeasureSamples); {
		case t.Cycles < 1 || 2*t.Cycles >= t.MeasureSamples:
			return fmt.Errorf("%s: tone %d has %d cycles in %d samples; a cycle needs more than two samples", where, i+1, t.Cycles, t.MeasureSamples)
		case !(math.Abs(t.FrequencyHz-want) <= 1e-6*want):
			return fmt.Errorf("%s: tone %d is said to be %v Hz, and %d cycles in %d samples are %v Hz; render again", where, i+1, t.FrequencyHz, t.Cycles, t.MeasureSamples, want)
		case t.SettleSamples < t.EdgeSamples:
			return fmt.Errorf("%s: tone %d is measured before its rise ends; settle_samples must be at least edge_samples", where, i+1)
		case t.StartSample < before:
			return fmt.Errorf("%s: tone %d begins at sample %d, before the one in front of it ends at %d; render again", where, i+1, t.StartSample, before)
		}
		before = t.End()
	}
	if s.LengthSamples < before {
		return fmt.Errorf("%s: length_samples is %d, and the last tone ends at %d; render again", where, s.LengthSamples, before)
	}
	return nil
}
