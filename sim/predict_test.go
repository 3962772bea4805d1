package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"testing"

	"sixdown/xover"
)

// oneWay is a driver straight on the amplifier.
func oneWay(d xover.Driver) *xover.Design {
	return &xover.Design{Drivers: []xover.Driver{d}, Ways: []xover.Way{{Name: "only", Driver: d.Name}}}
}

// wooferA's impedance at resonance is Re·(1 + Qms/Qes) = 54.6 Ω, its coil left out, and Re at DC: R. H. Small,
// "Direct-Radiator Loudspeaker System Analysis", J. Audio Eng. Soc. 20(5), 383–395, 1972.
func TestDataSheetDriver(t *testing.T) {
	d := oneWay(xover.Driver{Name: "woofer", Re: 5.6, Fs: 35, Qms: 3.5, Qes: 0.4})
	d.Drive.Source = 0.4
	r := mustPredict(t, mustNew(t, d), 35, 0.001)
	nearC(t, "Zin at resonance", r.Zin[0], 54.6, 1e-12)
	near(t, "|Zin| near DC", cmplx.Abs(r.Zin[1]), 5.6, 1e-3)
	nearC(t, "gain at resonance", r.Ways[0].H[0], 54.6/55.0, 1e-12)
	nearC(t, "amplifier's terminals", r.Amp[0], 54.6/55.0, 1e-12)
	if r.Sum != nil || r.SumDelay != nil || r.Ways[0].P != nil {
		t.Error("a driver without sensitivity or response made a sound")
	}
}

// fs 35, Qts 0.36, Vas 60 l in 20 l: fc 70.000 Hz, Qtc 0.72, f3 68.769 Hz, derived from Small, "Closed-Box
// Loudspeaker Systems", Part I, J. Audio Eng. Soc. 20(10), 798–808, 1972.
func TestClosedBoxAtTheEar(t *testing.T) {
	const qts = 0.36
	d := oneWay(xover.Driver{
		Name: "woofer", Re: 5.6, Fs: 35, Qms: 10 * qts, Qes: qts / 0.9, Vas: 0.060,
		Sensitivity: 88, HasSensitivity: true, Box: xover.Box{Kind: xover.ClosedBox, Volume: 0.020},
	})
	r := mustPredict(t, mustNew(t, d), 68.769, 70, 7000)
	near(t, "level at f3", SPL(r.Sum[0]), 88-3.0103, 1e-4) // f3 is printed to 0.5 mHz
	// At fc the high-pass is j·Qtc.
	near(t, "level at fc", SPL(r.Sum[1]), 88+20*math.Log10(0.72), 1e-9)
	near(t, "phase at fc", PhaseDeg(r.Sum[1]), 90, 1e-9)
	near(t, "level far above", SPL(r.Sum[2]), 88, 1e-3) // within (fc/f)²
}

// Twice the voltage is 6.02 dB more, twice the distance 6.02 dB less, by hand.
func TestLevelAndDistance(t *testing.T) {
	level := func(v, m float64) float64 {
		d := oneWay(plainDriver("woofer", 8, 90))
		d.Drive.Level, d.Listen.Distance = v, m
		return SPL(mustPredict(t, mustNew(t, d), 1000).Sum[0])
	}
	near(t, "as the sensitivity says", level(2.83, 1), 90, 1e-12)
	near(t, "by default", level(0, 0), 90, 1e-12)
	near(t, "twice the voltage", level(5.66, 1), 90+20*math.Log10(2), 1e-12)
	near(t, "twice the distance", level(2.83, 2), 90-20*math.Log10(2), 1e-12)
}

// A driver 34.3 mm behind the origin is 100 µs late, 36° at 1 kHz, and 2.0343 m away: by hand.
func TestOffsetIsInThePhase(t *testing.T) {
	drv := plainDriver("woofer", 8, 90)
	drv.At = [3]float64{0, 0, -0.0343}
	d := oneWay(drv)
	d.Listen.Distance = 2
	r := mustPredict(t, mustNew(t, d), 1000)
	near(t, "phase", PhaseDeg(r.Sum[0]), -36, 1e-9)
	near(t, "level", SPL(r.Sum[0]), 90-20*math.Log10(2.0343), 1e-10)
	near(t, "delay", r.SumDelay[0], 100e-6, 1e-13)
	d.Air.SoundSpeed = 2 * 343
	near(t, "phase in faster air", PhaseDeg(mustPredict(t, mustNew(t, d), 1000).Sum[0]), -18, 1e-9)
}

// The lobes of two ways a wavelength apart at the crossover, from afar: S. Linkwitz (1976). In phase (LR4) the
// lobe is on the axis, with nulls at sinθ = λ/2d; in quadrature (third-order Butterworth) it is 3.01 dB up on
// the axis at sinθ = λ/4d toward the lagging way, and a null lies on the other side (derived).
func TestLobes(t *testing.T) {
	const fc, spacing, far = 1000, 0.343, 1e4
	sum := func(g []float64, sinTheta float64) float64 {
		d := twoWay(g, fc, 8, false)
		d.Drivers[0].At[1], d.Drivers[1].At[1] = -spacing/2, spacing/2
		d.Listen = xover.Listen{Distance: far * math.Sqrt(1-sinTheta*sinTheta), Height: far * sinTheta}
		return cmplx.Abs(mustPredict(t, mustNew(t, d), fc).Sum[0]) * far / (20e-6 * math.Pow(10, 90.0/20))
	}
	// Differences are in the far-field approximation: spacing/far, and a half of a half wave.
	near(t, "LR4 on the axis", sum(linkwitzRiley4, 0), 1, 1e-3)
	near(t, "LR4 null above", sum(linkwitzRiley4, 0.5), 0, 1e-3)
	near(t, "LR4 null below", sum(linkwitzRiley4, -0.5), 0, 1e-3)
	near(t, "B3 on the axis", sum(butterworth3, 0), 1, 1e-3)
	near(t, "B3 toward the high-pass, which lags", sum(butterworth3, 0.25), math.Sqrt2, 1e-3)
	near(t, "B3 null below", sum(butterworth3, -0.25), 0, 1e-3)
}

// Drivers measured from the listening place on one time base need no geometry: what the ear gets is what the
// files say, through the network.
func TestMeasuredDrivers(t *testing.T) {
	d := &xover.Design{
		Drive:  xover.Drive{Level: 28.3},
		Listen: xover.Listen{Distance: 1},
		Parts:  []xover.Part{resistor("R1", 8)},
		Drivers: []xover.Driver{
			{Name: "woofer", ImpedanceFile: "w.zma", ResponseFile: "w.frd", At: [3]float64{0, -0.1, -0.02}},
			{Name: "tweeter", Resistance: 6, ResponseFile: "t.frd", At: [3]float64{0.3, 0.2, 0.01}, HasMic: true, Mic: [3]float64{0, 0, 1}},
		},
		Ways: []xover.Way{
			{Name: "low", Driver: "woofer", Network: []xover.Step{series(leaf("R1"))}},
			{Name: "high", Driver: "tweeter", Reversed: true},
		},
	}
	s, err := New(d, files(map[string]string{
		"w.zma": "* in the box\n100 8 0\n1000 8 0\n10000 8 0\n",
		"w.frd": "0 0 0\n100 84 10\n1000 90 -30\n10000 70 -160\n",
		"t.frd": "100 60 170\n1000 84 90\n10000 90 20\n",
	}))
	if err != nil {
		t.Fatal(err)
	}
	if want := []string{"w.frd:1: the row at 0 Hz was passed over"}; !slices.Equal(s.Warnings(), want) {
		t.Errorf("warnings: got %q, want %q", s.Warnings(), want)
	}
	r := mustPredict(t, s, 1000)
	if len(r.Warnings) > 0 {
		t.Errorf("unexpected warnings %q", r.Warnings)
	}
	// The woofer has half the voltage; the level is ten times 2.83 V.
	low := cmplx.Rect(20e-6*math.Pow(10, (90+20.0)/20)/2, -30*math.Pi/180)
	high := -cmplx.Rect(20e-6*math.Pow(10, (84+20.0)/20), 90*math.Pi/180)
	nearC(t, "low", r.Ways[0].P[0], low, 1e-12)
	nearC(t, "high", r.Ways[1].P[0], high, 1e-12)
	nearC(t, "sum", r.Sum[0], low+high, 1e-12)
	nearC(t, "Zin", r.Zin[0], 16.0*6/(16+6), 1e-12)

	want := []string{
		"w.zma: the table begins at 100 Hz; below it the slope of its nearest third of an octave is carried on, which is invented",
		"w.zma: the table ends at 10.0 kHz; above it the slope of its nearest third of an octave is carried on, which is invented",
	}
	if r = mustPredict(t, s, 50, 20e3); len(r.Warnings) != 6 || !slices.Equal(r.Warnings[:2], want) {
		t.Errorf("warnings: got %q, want two for each of three tables, first %q", r.Warnings, want)
	}
}

func TestNoSumWithoutEveryWay(t *testing.T) {
	d := twoWay(linkwitzRiley4, 1000, 8, false)
	d.Drivers[1].HasSensitivity = false
	s := mustNew(t, d)
	r := mustPredict(t, s, 1000)
	if r.Sum != nil || r.SumDelay != nil || r.Ways[0].P == nil || r.Ways[1].P != nil {
		t.Error("want pressures of the woofer alone and no sum")
	}
	if want := []string{`driver "tweeter": it has neither response nor sensitivity, so no sum is given; give one of them`}; !slices.Equal(s.Warnings(), want) {
		t.Errorf("warnings: got %q, want %q", s.Warnings(), want)
	}
}

func TestPredictChecksFrequencies(t *testing.T) {
	s := mustNew(t, oneWay(plainDriver("woofer", 8, 90)))
	for _, f := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if r, err := s.Predict([]float64{1000, f}); err == nil || r != nil {
			t.Errorf("%g Hz: got %v and error %v", f, r, err)
		}
	}
	r, err := s.Predict(nil)
	if err != nil || len(r.Ways) != 1 || len(r.Sum) != 0 {
		t.Errorf("no frequencies: got %+v and error %v, want an empty response", r, err)
	}
}

// A long grid is cut up for the cores; every digit must be as if it had not been.
func TestLongSweepsAreTheSame(t *testing.T) {
	s := mustNew(t, twoWay(linkwitzRiley4, 2000, 8, false))
	freqs := make([]float64, 3*chunk)
	for i := range freqs {
		freqs[i] = 20 * math.Pow(1000, float64(i)/float64(len(freqs)-1))
	}
	long := mustPredict(t, s, freqs...)
	for lo := 0; lo < len(freqs); lo += 1000 {
		hi := min(lo+1000, len(freqs))
		short := mustPredict(t, s, freqs[lo:hi]...)
		if !slices.Equal(long.Sum[lo:hi], short.Sum) || !slices.Equal(long.Zin[lo:hi], short.Zin) || !slices.Equal(long.Amp[lo:hi], short.Amp) ||
			!slices.Equal(long.SumDelay[lo:hi], short.SumDelay) || !slices.Equal(long.Ways[1].P[lo:hi], short.Ways[1].P) || !slices.Equal(long.Ways[0].H[lo:hi], short.Ways[0].H) {
			t.Fatalf("points %d to %d differ", lo, hi)
		}
	}
}

func TestPressures(t *testing.T) {
	d := twoWay(linkwitzRiley4, 2000, 8, false)
	d.Drivers[0] = xover.Driver{Name: "woofer", Re: 6, Le: 0.3e-3, Fs: 40, Qms: 4, Qes: 0.5, Sensitivity: 88, HasSensitivity: true}
	s := mustNew(t, d)
	freqs := logGrid([2]float64{20, 20e3})
	r := mustPredict(t, s, freqs...)
	air := make([]complex128, len(freqs))
	for i := range r.Ways {
		if n := testing.AllocsPerRun(10, func() { s.Pressures(air, i, freqs) }); n != 0 {
			t.Errorf("%v allocations", n)
		}
		for k := range freqs {
			nearC(t, fmt.Sprintf("way %d at %g Hz", i, freqs[k]), air[k]*r.Ways[i].H[k], r.Ways[i].P[k], 1e-14)
		}
	}
}

func TestPhaseHelpers(t *testing.T) {
	negativeZero := math.Copysign(0, -1)
	for z, want := range map[complex128]float64{
		1: 0, -1: 180, complex(-1, negativeZero): 180, 1i: 90, -1i: -90, 0: 0, 1 - 1i: -45,
	} {
		near(t, fmt.Sprintf("phase of %g", z), PhaseDeg(z), want, 1e-13)
	}
	if !math.IsInf(DB(0), -1) || !math.IsInf(SPL(0), -1) {
		t.Error("the level of nothing is not -Inf")
	}
	near(t, "DB(10)", DB(10), 20, 1e-13)
	near(t, "SPL(1 Pa)", SPL(1i), 93.979, 1e-3) // 20·lg(1/20e-6) = 93.9794
	var z []complex128
	for i := range 50 {
		z = append(z, cmplx.Rect(1, -0.5*float64(i)))
	}
	for i, d := range UnwrappedDeg(z) {
		near(t, "unwrapped", d, -0.5*float64(i)*180/math.Pi, 1e-10)
	}
	if DBs(nil) != nil {
		t.Error("levels of nothing are something")
	}
	near(t, "magnitude", Magnitudes([]complex128{3 + 4i})[0], 5, 1e-15)
	near(t, "EPDR", EPDRs([]complex128{8})[0], 8, 1e-14)
}

// A plain three-way with data-sheet drivers, invented, for the benchmark.
func benchDesign() *xover.Design {
	sheet := func(name string, re, le, fs, spl float64) xover.Driver {
		return xover.Driver{Name: name, Re: re, Le: le, Fs: fs, Qms: 3, Qes: 0.6, Sensitivity: spl, HasSensitivity: true}
	}
	return &xover.Design{
		Drive: xover.Drive{Source: 0.05},
		Parts: []xover.Part{
			coil("L1", 3e-3, 0.3), capacitor("C1", 50e-6, 0.02), resistor("R1", 7), capacitor("C2", 33e-6, 0),
			capacitor("C3", 47e-6, 0.02), coil("L2", 2e-3, 0.3), coil("L3", 0.4e-3, 0.2), capacitor("C4", 6.8e-6, 0), resistor("R2", 3),
			capacitor("C5", 4.7e-6, 0), coil("L4", 0.25e-3, 0.2), resistor("R3", 4), resistor("R4", 12),
		},
		Drivers: []xover.Driver{sheet("woofer", 6, 0.7e-3, 30, 90), sheet("mid", 5.5, 0.2e-3, 110, 90), sheet("tweeter", 4.8, 0.03e-3, 750, 92)},
		Ways: []xover.Way{
			{Name: "low", Driver: "woofer", Network: []xover.Step{series(leaf("L1")), shunt(leaf("C1")), shunt(inSeries("R1", "C2"))}},
			{Name: "mid", Driver: "mid", Reversed: true, Network: []xover.Step{series(leaf("C3")), shunt(leaf("L2")), series(leaf("L3")), shunt(leaf("C4")), series(leaf("R2"))}},
			{Name: "high", Driver: "tweeter", Network: []xover.Step{series(leaf("C5")), shunt(leaf("L4")), series(leaf("R3")), shunt(leaf("R4"))}},
		},
	}
}

func BenchmarkPredict(b *testing.B) {
	s := mustNew(b, benchDesign())
	for _, n := range []int{240, 480, 8192} {
		freqs := make([]float64, n)
		for i := range freqs {
			freqs[i] = 20 * math.Pow(1000, float64(i)/float64(n-1))
		}
		b.Run(fmt.Sprintf("points=%d", n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := s.Predict(freqs); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n), "ns/point")
		})
	}
}
