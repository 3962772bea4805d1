package sim

import (
	"errors"
	"math"

	"sixdown/sim/circuit"
)

// A Noise is the thermal noise at the output of a tone network from 20 Hz to 20 kHz. Amplifiers are taken to make none.
type Noise struct {
	Kelvin    float64
	Freqs     []float64 // Hz
	Density   []float64 // V²/Hz, at each of Freqs
	Flat      float64   // V rms
	AWeighted float64   // V rms, by the weighting A of IEC 61672-1
}

// noisePerOctave points of the grid make trapezia of a density that bends with networks of resistors and capacitors to 1e-4.
const noisePerOctave = 48

// Noise returns the thermal noise at a temperature in kelvin. It fails for a loudspeaker, of which it says nothing of use.
func (s *System) Noise(kelvin float64) (*Noise, error) {
	if s.tone == nil {
		return nil, errors.New("noise: it is worth knowing of tone networks alone; give a design with [tone]")
	}
	n := &Noise{Kelvin: kelvin}
	steps := int(math.Ceil(noisePerOctave * math.Log2(1000)))
	for i := range steps + 1 {
		n.Freqs = append(n.Freqs, 20*math.Pow(1000, float64(i)/float64(steps)))
	}
	var err error
	if n.Density, err = circuit.Noise(&s.net, s.outs[0], n.Freqs, kelvin); err != nil {
		return nil, err
	}
	flat, weighted := 0.0, 0.0
	for i := range steps {
		width := (n.Freqs[i+1] - n.Freqs[i]) / 2
		for _, k := range [2]int{i, i + 1} {
			flat += n.Density[k] * width
			weighted += n.Density[k] * width * math.Pow(10, AWeightingDB(n.Freqs[k])/10)
		}
	}
	n.Flat, n.AWeighted = math.Sqrt(flat), math.Sqrt(weighted)
	return n, nil
}

// AWeightingDB returns the weighting A in dB at f in Hz, 0 dB at 1 kHz: IEC 61672-1:2013, annex E, with its pole frequencies
// (from memory).
func AWeightingDB(f float64) float64 {
	const f1, f2, f3, f4 = 20.598997, 107.65265, 737.86223, 12194.217 // Hz
	gain := func(f float64) float64 {
		q := f * f
		return f4 * f4 * q * q / ((q + f1*f1) * math.Sqrt((q+f2*f2)*(q+f3*f3)) * (q + f4*f4))
	}
	return 20 * math.Log10(gain(f)/gain(1000))
}
