package signal_test

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"

	"sixdown/audioio/signal"
)

// The crest factor is the one asked for. Over n independent samples the mean
// square spreads by less than √(2/n) of itself (pink: its slowest tenth of the
// power has some 4·T independent values, 0.1·√(2/(4·T))): 0.02 dB white, 0.12 dB pink, at four deviations.
func TestNoiseCrest(t *testing.T) {
	const seconds = 60
	for _, crest := range []float64{2, 3, 4, 5} {
		s := signal.NoiseSettings{Peak: 0.7, Crest: crest}
		for name, tt := range map[string]struct {
			src   signal.Source
			tolDB float64
		}{
			"white": {must[*signal.White](t)(signal.NewWhite(48000, seconds, rand.NewPCG(3, 4), s)), 0.02},
			"pink":  {must[*signal.Pink](t)(signal.NewPink(48000, seconds, rand.NewPCG(3, 4), s)), 0.12},
		} {
			x := make([]float64, tt.src.Len())
			if _, err := tt.src.ReadSamples(x); err != nil {
				t.Fatal(err)
			}
			square, top := 0.0, 0.0
			for _, v := range x {
				square += v * v
				top = max(top, math.Abs(v))
			}
			rms := math.Sqrt(square / float64(len(x)))
			if top > 0.7 {
				t.Errorf("%s: peak %v above 0.7", name, top)
			}
			if d := 20 * math.Log10(0.7/rms/crest); !(math.Abs(d) <= tt.tolDB) {
				t.Errorf("%s: crest %v asked, off by %.3f dB", name, crest, d)
			}
		}
	}
}

// White: samples are independent, so every autocorrelation is 0 within 4.5/√n.
func TestWhiteIsWhite(t *testing.T) {
	const n = 48000 * 20
	src := must[*signal.White](t)(signal.NewWhite(48000, 20, rand.NewPCG(5, 6), signal.NoiseSettings{EdgeSeconds: 1e-5}))
	x := make([]float64, n)
	if _, err := src.ReadSamples(x); err != nil {
		t.Fatal(err)
	}
	var r [200]float64
	for lag := range r {
		for i := lag; i < n; i++ {
			r[lag] += x[i] * x[i-lag]
		}
	}
	for lag := 1; lag < len(r); lag++ {
		if c := r[lag] / r[0]; math.Abs(c) > 4.5/math.Sqrt(n) {
			t.Errorf("autocorrelation %.5f at lag %d", c, lag)
		}
	}
}

// Pink noise has the same power in every third octave (its definition: power per
// hertz as 1/f). Measured by averaged periodograms over 400 s: a band of width B has 2·B·T
// degrees of freedom, so the lowest spreads by 4.34·√(2/(2·4.6·400)) = 0.10 dB and
// the rest less. ±0.5 dB is what is promised.
func TestPinkIsPink(t *testing.T) {
	for _, tt := range []struct {
		rate    int
		seconds float64
		crest   float64
	}{{48000, 400, 4}, {44100, 60, 2}, {96000, 60, 4}} {
		const n = 1 << 16
		src := must[*signal.Pink](t)(signal.NewPink(tt.rate, tt.seconds, rand.NewPCG(7, 8), signal.NoiseSettings{Crest: tt.crest}))
		fft := fourier.NewFFT(n)
		x, window := make([]float64, n), make([]float64, n)
		for i := range window {
			window[i] = 0.5 - 0.5*math.Cos(2*math.Pi*float64(i)/n)
		}
		power := make([]float64, n/2+1)
		var c []complex128
		for range src.Len() / n {
			if _, err := src.ReadSamples(x); err != nil {
				t.Fatal(err)
			}
			for i := range x {
				x[i] *= window[i]
			}
			c = fft.Coefficients(c, x)
			for i, v := range c {
				power[i] += real(v * cmplx.Conj(v))
			}
		}
		bands := signal.ThirdOctaves(20, min(20000, 0.42*float64(tt.rate)))
		level := make([]float64, len(bands))
		mean := 0.0
		for k, b := range bands {
			// f·S(f), averaged over the bins of the band, is free of the raggedness of few bins.
			lo, hi := b.Hz*math.Pow(10, -0.05), b.Hz*math.Pow(10, 0.05)
			sum, bins := 0.0, 0.0
			for i := range power {
				if f := float64(i) * float64(tt.rate) / n; f >= lo && f < hi {
					sum += power[i] * f
					bins++
				}
			}
			level[k] = 10 * math.Log10(sum/bins)
			mean += level[k] / float64(len(bands))
		}
		worst := 0.0
		for k, b := range bands {
			// Chance adds to what the spectrum is off by: four deviations.
			chance := 4 * 4.34 / math.Sqrt(0.23*b.Hz*tt.seconds)
			d := level[k] - mean
			worst = max(worst, math.Abs(d))
			if !(math.Abs(d) <= 0.3+chance) {
				t.Errorf("%d Hz: the band at %v Hz is off by %.2f dB", tt.rate, b.Nominal, d)
			}
		}
		t.Logf("%d Hz, crest %v: third octaves within %.2f dB", tt.rate, tt.crest, worst)
		if tt.seconds >= 400 && worst > 0.5 {
			t.Errorf("%d Hz: off by %.2f dB", tt.rate, worst)
		}
	}
}

func TestNoiseRefuses(t *testing.T) {
	for name, tt := range map[string]struct {
		rate    int
		seconds float64
		src     rand.Source
		s       signal.NoiseSettings
	}{
		"rate":           {0, 1, rand.NewPCG(1, 1), signal.NoiseSettings{}},
		"no time":        {48000, 0, rand.NewPCG(1, 1), signal.NoiseSettings{}},
		"time NaN":       {48000, math.NaN(), rand.NewPCG(1, 1), signal.NoiseSettings{}},
		"crest too low":  {48000, 1, rand.NewPCG(1, 1), signal.NoiseSettings{Crest: 1.9}},
		"crest too high": {48000, 1, rand.NewPCG(1, 1), signal.NoiseSettings{Crest: 9}},
		"too loud":       {48000, 1, rand.NewPCG(1, 1), signal.NoiseSettings{Peak: 2}},
		"edges too long": {48000, 1, rand.NewPCG(1, 1), signal.NoiseSettings{EdgeSeconds: 0.6}},
		"no randomness":  {48000, 1, nil, signal.NoiseSettings{}},
	} {
		if w, err := signal.NewWhite(tt.rate, tt.seconds, tt.src, tt.s); err == nil || w != nil {
			t.Errorf("%s: white taken", name)
		}
		if p, err := signal.NewPink(tt.rate, tt.seconds, tt.src, tt.s); err == nil || p != nil {
			t.Errorf("%s: pink taken", name)
		}
	}
}
