package signal

import "math"

// Band is a third-octave band.
type Band struct {
	Hz      float64 // exact mid-band frequency, 1000·10^(k/10) Hz
	Nominal float64 // the rounded frequency that names it, Hz
}

// ThirdOctaves returns the bands whose nominal frequencies lie from the one
// frequency to the other, both in Hz and included, rising; ThirdOctaves(20, 20000)
// has 31. Nominal frequencies outside 1 Hz to 1 MHz are left out.
//
// Exact frequencies are those of IEC 61260-1, base ten: G^(k/3) with
// G = 10^(3/10), from 1 kHz. Nominal ones are the R10 series of ISO 3 as ISO 266 takes it up.
func ThirdOctaves(from, to float64) []Band {
	// R10 as rounded by ISO 266, one decade.
	r10 := [10]float64{1, 1.25, 1.6, 2, 2.5, 3.15, 4, 5, 6.3, 8}
	var bands []Band
	for k := 0; k <= 60; k++ { // 1 Hz to 1 MHz
		// Products of tenths and powers of ten are rounded once more, so that
		// 31.5 is the number 31.5 and compares equal to it.
		nominal := math.Round(r10[k%10]*math.Pow10(k/10)*100) / 100
		if nominal >= from && nominal <= to {
			bands = append(bands, Band{Hz: 1000 * math.Pow(10, float64(k-30)/10), Nominal: nominal})
		}
	}
	return bands
}
