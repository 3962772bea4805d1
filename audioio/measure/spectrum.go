package measure

import (
	"math"
	"runtime"
	"sync"
)

// spectrumBlock is the length of the stretches in which a record is summed. One
// table of the basis serves all of them.
const spectrumBlock = 512

// spectra stores in dst[k][i] the spectrum Σ_n records[k][n]·e^(−j2π·hz[i]·n/rate)
// of each record at each frequency. The records have the same length.
//
// The sum is taken at the very frequency. A fast transform has it only at its
// bins; between bins it must be interpolated, and since the spectrum of a
// record turns by one cycle of phase every two bins or so, the nearest bin or a
// straight line is wrong by far more than what is to be measured. The sum costs
// two products a sample, channel and frequency, shared out over the processors.
func spectra(dst [][]complex128, records [][]float64, rate float64, hz []float64) {
	workers := min(runtime.GOMAXPROCS(0), len(hz))
	var wg sync.WaitGroup
	for w := range workers {
		wg.Go(func() {
			var c, s [spectrumBlock]float64
			for i := w; i < len(hz); i += workers {
				nu := hz[i] / rate
				basis(c[:], s[:], nu, 0)
				for k, x := range records {
					dst[k][i] = spectrumAt(x, nu, &c, &s)
				}
			}
		})
	}
	wg.Wait()
}

// spectrumAt returns the spectrum of x at nu cycles a sample; c and s are the
// basis over one block.
func spectrumAt(x []float64, nu float64, c, s *[spectrumBlock]float64) complex128 {
	var sum complex128
	for from := 0; from < len(x); from += spectrumBlock {
		block := x[from:min(from+spectrumBlock, len(x))]
		var re, im float64
		if len(block) == spectrumBlock {
			// Two sums each, so that an addition need not wait for the last one.
			var re1, im1 float64
			b := (*[spectrumBlock]float64)(block)
			for i := 0; i < spectrumBlock; i += 2 {
				re += b[i] * c[i]
				im += b[i] * s[i]
				re1 += b[i+1] * c[i+1]
				im1 += b[i+1] * s[i+1]
			}
			re += re1
			im += im1
		} else {
			for i, v := range block {
				re += v * c[i]
				im += v * s[i]
			}
		}
		turns := nu * float64(from)
		y, z := math.Sincos(2 * math.Pi * (turns - math.Floor(turns)))
		sum += complex(re, -im) * complex(z, -y)
	}
	return sum
}
