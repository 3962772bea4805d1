package measure_test

import (
	"fmt"
	"math"
	"math/cmplx"

	"sixdown/audioio/measure"
)

// Two channels of a steady tone: the second has half the level and lags by 45 degrees.
func ExampleFitSines() {
	ref, out := make([]float64, 480), make([]float64, 480)
	for n := range ref {
		phase := 2 * math.Pi * 1000 * float64(n) / 48000
		ref[n] = 0.8 * math.Cos(phase)
		out[n] = 0.4 * math.Cos(phase-math.Pi/4)
	}
	var s [2]measure.Sine
	if err := measure.FitSines(s[:], [][]float64{ref, out}, 1000, 48000); err != nil {
		fmt.Println(err)
		return
	}
	h, err := measure.Ratio(s[1], s[0])
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.2f dB, %.1f°\n", 20*math.Log10(cmplx.Abs(h)), cmplx.Phase(h)*180/math.Pi)
	// Output:
	// -6.02 dB, -45.0°
}

// Any signal gives the transfer function, between the bins of a fast transform, too. Here it is an
// impulse, and the system halves and is 12 samples late, a quarter of a millisecond.
func ExampleTransfer() {
	ref, out := make([]float64, 100), make([]float64, 100)
	ref[0], out[12] = 1, 0.5
	h := [][]complex128{make([]complex128, 1)}
	if err := measure.Transfer(h, [][]float64{out}, ref, 48000, []float64{500}); err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.2f dB, %.1f°\n", 20*math.Log10(cmplx.Abs(h[0][0])), cmplx.Phase(h[0][0])*180/math.Pi)
	// Output:
	// -6.02 dB, -45.0°
}
