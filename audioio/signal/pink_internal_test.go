package signal

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"
)

// The filter against the law: power as 1/f, 3.0103 dB an octave, from 20 Hz to
// 20 kHz or 0.45 of the rate. No chance is in it, so ±0.3 dB, as the doc comment promises.
func TestPinkFilterFollowsTheLaw(t *testing.T) {
	for _, rate := range []int{8000, 44100, 48000, 88200, 96000, 192000, 384000} {
		p, err := NewPink(rate, 1, rand.NewPCG(1, 1), NoiseSettings{})
		if err != nil {
			t.Fatal(err)
		}
		lo, hi := math.Inf(1), math.Inf(-1)
		for f := 20.0; f <= min(20000, 0.45*float64(rate)); f *= 1.01 {
			z := cmplx.Rect(1, -2*math.Pi*f/float64(rate))
			h := complex(p.direct, 0)
			for i := range p.pole {
				h += complex(p.weight[i], 0) / (1 - complex(p.pole[i], 0)*z)
			}
			h *= 1 + pinkZeroA*z + pinkZeroB*z*z
			db := 20*math.Log10(cmplx.Abs(h)) + 10*math.Log10(f/1000)
			lo, hi = min(lo, db), max(hi, db)
		}
		t.Logf("%d Hz: ±%.3f dB", rate, (hi-lo)/2)
		if hi-lo > 0.6 {
			t.Errorf("%d Hz: from %.3f to %.3f dB", rate, lo, hi)
		}
	}
}
