package audioio

import (
	"fmt"
	"math"

	"sixdown/audioio/signal"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
	"sixdown/sim/circuit"
)

// Kind is what a recording holds.
type Kind string

// The kinds of recording.
const (
	Tones Kind = "tones" // steady tones one after another, by the schedule
	Sweep Kind = "sweep" // an exponential sweep
	Noise Kind = "noise" // pink or white noise
	Music Kind = "file"  // the user's own WAV
)

// A Recording describes a WAV file that Render wrote; it goes beside it as JSON. Channel 1 is the
// amplifier's terminals, channel 2 + i is Ways[i].
type Recording struct {
	Title  string   `json:"title"`
	Signal Kind     `json:"signal"`
	Ways   []string `json:"ways"`
	Bits   int      `json:"bits"`
	signal.Schedule
	// BandHz is where a sweep, noise or music can be measured, Hz; zeros for tones.
	BandHz [2]float64 `json:"band_hz"`
	// FitDB and FitDeg are how far the matched-pole model of a broad-band signal is off, at most, where a
	// gain is above -50 dB; zero for tones, whose model is exact.
	FitDB  float64 `json:"fit_error_db"`
	FitDeg float64 `json:"fit_error_deg"`
	// Turned says that a control was turned as the signal went on.
	Turned bool `json:"turned,omitempty"`
}

// Settings of a rendering. The zero value is good.
type Settings struct {
	Rate     int                   // Hz, of tones; 0: 48000
	Wav      wavfile.Settings      // zero: 24-bit PCM
	Progress func(done, total int) // called now and then; nil: nobody asks
}

func (s *Settings) rate() int {
	if s.Rate == 0 {
		return 48000
	}
	return s.Rate
}

func (s *Settings) bits() int {
	if s.Wav.Encoding == 0 {
		return wavfile.PCM24.Bits()
	}
	return s.Wav.Encoding.Bits()
}

// ceiling is how near to full scale the loudest channel comes.
const ceiling = 0.8

// equations are the network's differential equations, with the amplifier's terminals and then each way as
// outputs: the order of the channels.
func equations(sys *sim.System) (*circuit.StateSpace, error) {
	outs := append([]circuit.Output{{From: circuit.Amp, To: circuit.Return}}, sys.Outputs()...)
	ss, err := circuit.NewStateSpace(sys.Netlist(), outs)
	if err != nil {
		return nil, fmt.Errorf("render: %w", err)
	}
	return ss, nil
}

// settleTimes is how many of the slowest time constant a tone is given before it is measured: what is left of
// the beginning is then e^-20 of the tone, below what 24 bits show of a way 60 dB down.
const settleTimes = 20

// settleMost bounds the wait for networks that take their time, such as coupling capacitors into
// megohms: such slow modes are hardly stirred by a tone that rises gently.
const settleMost = 5 // s

func settleSeconds(ss *circuit.StateSpace) float64 {
	return math.Min(settleTimes*ss.SlowestTime(), settleMost)
}

// PeakVolts is the peak in V of a sine at the design's drive level.
func PeakVolts(sys *sim.System) float64 { return sys.Level() * math.Sqrt2 }
