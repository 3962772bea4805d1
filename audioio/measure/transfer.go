package measure

import (
	"fmt"
	"math"
	"math/cmplx"
)

// floorPower is the least that the reference's power |X|² must be at a frequency that is
// asked for, over that of a white signal of the same energy: −40 dB. An exponential
// sweep over three decades lies 8 dB below at its top; 40 dB below, the rounding of
// a 16-bit file (−92 dB) already counts 0.02 dB.
const floorPower = 1e-4

func errNothingAt(hz float64) error {
	return fmt.Errorf("measure: transfer: the reference has almost nothing at %v Hz; ask inside the range of the sweep", hz)
}

// Transfer stores in dst[k][i] the transfer function outs[k]/ref at hz[i]: the
// ratio of the two spectra, each taken over the whole record. All records have
// the same length and len(dst) = len(outs), len(dst[k]) = len(hz), else Transfer panics.
//
// For a linear system whose response has died away before the record ends, the
// ratio is exact, whatever the signal, and at any frequency; so let the record run on
// for some of the slowest time constants after the sweep. A record cut off earlier
// is wrong by about what was cut off. Noise counts over the whole record: where that
// matters, or where distortion does, window the impulse response, [NewImpulse].
//
// A frequency around which the reference has almost nothing (below −40 dB re white
// of the same energy) is an error. Noise has chance dips a fraction of a hertz wide; there the
// neighbours help out, see atDip.
func Transfer(dst [][]complex128, outs [][]float64, ref []float64, rate float64, hz []float64) error {
	if len(dst) != len(outs) {
		panic(fmt.Sprintf("measure: %d results for %d channels", len(dst), len(outs)))
	}
	for k := range outs {
		if len(outs[k]) != len(ref) || len(dst[k]) != len(hz) {
			panic("measure: channels or results of different lengths")
		}
	}
	if err := checkFrequencies(hz, rate); err != nil {
		return err
	}
	energy, err := energyOf(ref)
	if err != nil {
		return err
	}
	for k := range outs {
		if _, err := energyOf(outs[k]); err != nil {
			return fmt.Errorf("%w (channel %d after the reference)", err, k+1)
		}
	}
	x := make([]complex128, len(hz))
	spectra(append([][]complex128{x}, dst...), append([][]float64{ref}, outs...), rate, hz)
	floor := energy * floorPower
	for i := range hz {
		if !(power(x[i]) > floor) {
			if err := atDip(dst, i, outs, ref, rate, hz[i], floor); err != nil {
				return err
			}
			continue
		}
		for k := range dst {
			dst[k][i] /= x[i]
		}
	}
	return nil
}

func power(x complex128) float64 { return real(x)*real(x) + imag(x)*imag(x) }

// atDip stores in dst[k][i] the transfer function at hz where the reference happens to
// have next to nothing: Σ Y·X*/Σ|X|² over hz and two frequencies to either
// side, one over the record's length apart, at which a record's spectrum is
// independent (the H1 estimate: J. S. Bendat, A. G. Piersol, "Random Data", Wiley,
// 4th ed. 2010). Between them a response that has died away within the record hardly
// changes. Where all of them have nothing the frequency lies outside the signal.
func atDip(dst [][]complex128, i int, outs [][]float64, ref []float64, rate, hz, floor float64) error {
	const around = 5
	near := make([]float64, around)
	for j := range near {
		near[j] = hz + float64(j-around/2)*rate/float64(len(ref))
	}
	x := make([]complex128, around)
	spectra([][]complex128{x}, [][]float64{ref}, rate, near)
	sum := 0.0
	for _, v := range x {
		sum += power(v)
	}
	if !(sum > around*floor) {
		return errNothingAt(hz)
	}
	y := make([]complex128, around)
	for k := range outs {
		spectra([][]complex128{y}, [][]float64{outs[k]}, rate, near)
		dst[k][i] = 0
		for j := range y {
			dst[k][i] += y[j] * cmplx.Conj(x[j]) / complex(sum, 0)
		}
	}
	return nil
}

func checkFrequencies(hz []float64, rate float64) error {
	if !(rate > 0) || math.IsInf(rate, 0) {
		return fmt.Errorf("measure: transfer: the sample rate is %v Hz; give one above 0", rate)
	}
	for _, f := range hz {
		if !(f > 0 && f < rate/2) {
			return fmt.Errorf("measure: transfer: frequency %v Hz; at a sample rate of %v Hz give one above 0 and below half of it", f, rate)
		}
	}
	return nil
}

// energyOf returns Σx², or an error where a sample is not finite.
func energyOf(x []float64) (float64, error) {
	sum := 0.0
	for _, v := range x {
		sum += v * v
	}
	if math.IsNaN(sum) || math.IsInf(sum, 0) {
		return 0, fmt.Errorf("measure: transfer: the record holds samples that are not finite; record it again")
	}
	return sum, nil
}
