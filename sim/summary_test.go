package sim

import (
	"fmt"
	"math"
	"testing"

	"sixdown/xover"
)

func mustSummary(t testing.TB, d *xover.Design, band [2]float64) *Summary {
	t.Helper()
	s, err := mustNew(t, d).Summary(band)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Where the ways of the alignments cross, how far below the sum and at what angle: S. Linkwitz (1976), numbers
// derived.
func TestCrossings(t *testing.T) {
	const fc = 2345.678 // on no grid
	for _, tt := range []struct {
		name         string
		g            []float64
		level, phase float64
	}{
		{"LR4", linkwitzRiley4, -20 * math.Log10(2), 0},
		{"B3", butterworth3, -10 * math.Log10(2), -90},
		{"B1", butterworth1, -10 * math.Log10(2), 90},
		{"B4", butterworth4, -20 * math.Log10(2), 0},
	} {
		s := mustSummary(t, twoWay(tt.g, fc, 8, false), [2]float64{})
		if len(s.Crossings) != 1 {
			t.Errorf("%s: %d crossings, want 1", tt.name, len(s.Crossings))
			continue
		}
		c := s.Crossings[0]
		if c.Low != "low" || c.High != "high" {
			t.Errorf("%s: from %q to %q, want from low to high", tt.name, c.Low, c.High)
		}
		near(t, tt.name+" frequency", c.Frequency, fc, 1e-9*fc)
		near(t, tt.name+" level", c.LevelDB, tt.level, 1e-8)
		near(t, tt.name+" phase", c.PhaseDeg, tt.phase, 1e-6)
	}
}

func TestCrossingsOfGains(t *testing.T) {
	d := twoWay(linkwitzRiley2, 1234.5, 8, false)
	d.Drivers[0].HasSensitivity, d.Drivers[1].HasSensitivity = false, false
	s := mustSummary(t, d, [2]float64{})
	if s.Sum != nil || len(s.Crossings) != 1 {
		t.Fatalf("sum %v, %d crossings; want none and 1", s.Sum, len(s.Crossings))
	}
	near(t, "frequency", s.Crossings[0].Frequency, 1234.5, 1e-6)
	near(t, "gain", s.Crossings[0].LevelDB, -20*math.Log10(2), 1e-8)
	near(t, "phase", math.Abs(s.Crossings[0].PhaseDeg), 180, 1e-6)
}

// A first-order three-way, its middle way a series LC: with fL = fM/√r and fH = fM·√r it crosses where the
// low-pass, and by symmetry the high-pass, is as loud as the middle. Two drivers side by side in the lowest way
// are no crossing.
func TestThreeWayCrossings(t *testing.T) {
	const load, fl, fh = 8, 400, 4000
	w := func(f float64) float64 { return 2 * math.Pi * f }
	d := &xover.Design{
		Parts: []xover.Part{
			coil("L1", load/w(fl), 0), coil("L1b", load/w(fl), 0), capacitor("C1", 1/(load*w(fl)), 0), coil("L2", load/w(fh), 0), capacitor("C2", 1/(load*w(fh)), 0),
		},
		Drivers: []xover.Driver{plainDriver("woofer", load, 84), plainDriver("woofer2", load, 84), plainDriver("mid", load, 90), plainDriver("tweeter", load, 90)},
		// The order in the file says nothing about which way is the lowest.
		Ways: []xover.Way{
			{Name: "high", Driver: "tweeter", Network: []xover.Step{series(leaf("C2"))}},
			{Name: "low", Driver: "woofer", Network: []xover.Step{series(leaf("L1"))}},
			{Name: "low2", Driver: "woofer2", Network: []xover.Step{series(leaf("L1b"))}},
			{Name: "mid", Driver: "mid", Network: []xover.Step{series(inSeries("C1", "L2"))}},
		},
	}
	d.Drivers[0].Sensitivity, d.Drivers[1].Sensitivity = 90, 90
	s := mustSummary(t, d, [2]float64{})
	if len(s.Crossings) != 2 {
		t.Fatalf("%d crossings, want 2: %+v", len(s.Crossings), s.Crossings)
	}
	// |1 + jx/xl|² = 1 + (x/xh - xl/x)²: (x/xl)² = (x/xh)² - 2·xl/xh + (xl/x)². With u = (x/xl)² and r = fh/fl,
	// and the ratio of lf to hf being 1/r: u·(1 - 1/r²) = 1/u - 2/r, so u = (-1/r + √(1/r² + 1 - 1/r²))/(1 -
	// 1/r²) = 1/(1 + 1/r).
	r := float64(fh) / fl
	want := fl * math.Sqrt(1/(1+1/r))
	near(t, "lower", s.Crossings[0].Frequency, want, 1e-9*want)
	upper := fl * fh / want // the network is its own mirror image about √(fl·fh)
	near(t, "upper", s.Crossings[1].Frequency, upper, 1e-9*upper)
	if a, b := s.Crossings[0], s.Crossings[1]; a.High != "mid" || b.Low != "mid" || b.High != "high" {
		t.Errorf("got %+v", s.Crossings)
	}
}

// A series resonance in front of a resistance has its least impedance, that resistance, at 1/(2π√(LC)) exactly.
func TestLowestImpedance(t *testing.T) {
	d := oneWay(plainDriver("woofer", 3, 90))
	d.Parts = []xover.Part{coil("L1", 0.5e-3, 0.2), capacitor("C1", 20e-6, 0)}
	d.Ways[0].Network = []xover.Step{series(leaf("L1")), series(leaf("C1"))}
	s := mustSummary(t, d, [2]float64{})
	f0 := 1 / (2 * math.Pi * math.Sqrt(0.5e-3*20e-6))
	near(t, "lowest", s.MinImpedance, 3.2, 1e-12)
	near(t, "where", s.MinImpedanceAt, f0, 1e-6*f0) // a minimum tells its place to half the digits
	if !(s.MinEPDR <= s.MinImpedance) || !(s.MinEPDRAt > 20) {
		t.Errorf("lowest EPDR is %g Ω at %g Hz", s.MinEPDR, s.MinEPDRAt)
	}
	// Falling to the edge of the band, the lowest is at the edge: R and C in series.
	d.Ways[0].Network = []xover.Step{series(leaf("C1"))}
	s = mustSummary(t, d, [2]float64{20, 5000})
	near(t, "at the edge", s.MinImpedanceAt, 5000, 1e-9)
	near(t, "at the edge", s.MinImpedance, math.Hypot(3, 1/(2*math.Pi*5000*20e-6)), 1e-9)
}

// EPDR of R and C in series, R = 3 Ω, from Benjamin's definition (see TestEPDR): its minimum, found here by a
// fine search over the angle.
func TestLowestEPDR(t *testing.T) {
	d := oneWay(plainDriver("woofer", 3, 90))
	d.Parts = []xover.Part{capacitor("C1", 20e-6, 0)}
	d.Ways[0].Network = []xover.Step{series(leaf("C1"))}
	s := mustSummary(t, d, [2]float64{})
	best, where := math.Inf(1), 0.0
	for i := 1; i < 200000; i++ {
		phi := float64(i) / 200000 * math.Pi / 2
		sn := math.Sin(math.Pi/6 + phi/3)
		if v := 3 / math.Cos(phi) / (8 * sn * sn * sn); v < best {
			best, where = v, 1/(2*math.Pi*20e-6*3*math.Tan(phi))
		}
	}
	near(t, "lowest", s.MinEPDR, best, 1e-8)
	near(t, "where", s.MinEPDRAt, where, 1e-4*where) // the search steps by 8 µrad
}

// The sum of fourth-order Butterworth ways rises by 3.01 dB at the crossover and is flat far from it (Linkwitz
// 1976; derived).
func TestSumSummary(t *testing.T) {
	const fc = 1000
	d := twoWay(butterworth4, fc, 8, false) // its tune band is fc/16 to 16·fc, so the grid has fc in it
	s := mustSummary(t, d, [2]float64{})
	near(t, "ripple of B4", s.Sum.RippleDB, 10*math.Log10(2), 1e-3) // at the ends of the band the sum is within 1e-4 dB of flat
	flat := mustSummary(t, twoWay(linkwitzRiley4, fc, 8, false), [2]float64{})
	near(t, "ripple of LR4", flat.Sum.RippleDB, 0, 1e-9)
	near(t, "rms of LR4", flat.Sum.RMSDB, 0, 1e-9)
	near(t, "level of LR4", flat.Sum.MeanSPL, 90, 1e-9)
	if flat.Sum.Low3DB != 0 || flat.Sum.High3DB != 0 {
		t.Errorf("a flat sum has its ends at %g and %g Hz", flat.Sum.Low3DB, flat.Sum.High3DB)
	}
}

// At an exact null the sum has no phase, and so no group delay.
func TestNoDelayAtANull(t *testing.T) {
	const fc = 2000
	s, err := New(twoWay(linkwitzRiley4, fc, 8, true), nil)
	if err != nil {
		t.Fatal(err)
	}
	r, err := s.Predict([]float64{fc, fc * 1.1})
	if err != nil {
		t.Fatal(err)
	}
	if !math.IsNaN(r.SumDelay[0]) || math.IsNaN(r.SumDelay[1]) {
		t.Errorf("delays %g, want none at the null and one beside it", r.SumDelay)
	}
}

// A null at the crossover is a dip, not an end of the range: a Linkwitz-Riley pair with one way reversed cancels at
// the crossover and is flat far from it (Linkwitz 1976).
func TestDipIsNoEnd(t *testing.T) {
	const fc = 2000
	s := mustSummary(t, twoWay(linkwitzRiley4, fc, 8, true), [2]float64{})
	if s.Sum.Low3DB != 0 || s.Sum.High3DB != 0 {
		t.Errorf("its ends are at %g and %g Hz, want none", s.Sum.Low3DB, s.Sum.High3DB)
	}
	// H_low - H_high of the fourth order is (1 - s⁴)/(s² + √2s + 1)²: 1/96 octave off, the most that the grid can miss
	// it by, |1 - s⁴| is 0.029 and the rest 1/2, so the dip is at least 36 dB.
	if !(s.Sum.DipDB > 36) {
		t.Errorf("the dip is %g dB, want a null", s.Sum.DipDB)
	}
	near(t, "place of the dip", s.Sum.DipAt, fc, fc*0.015) // the grid's spacing
	if flat := mustSummary(t, twoWay(linkwitzRiley4, fc, 8, false), [2]float64{}); flat.Sum.DipDB != 0 {
		t.Errorf("a flat sum has a dip of %g dB", flat.Sum.DipDB)
	}
}

// The ends of a second-order Butterworth high-pass and of a first-order low-pass are their corners, 3.01 dB
// down.
func TestEndsOfTheSum(t *testing.T) {
	drv := xover.Driver{Name: "woofer", Re: 8, Fs: 100, Qms: 2 * math.Sqrt2 / 2, Qes: 2 * math.Sqrt2 / 2, Sensitivity: 90, HasSensitivity: true}
	d := oneWay(drv) // Qts = √2/2: the driver itself is the high-pass, exactly
	d.Tune.Band = [2]float64{3000, 4000}
	s := mustSummary(t, d, [2]float64{})
	// The mean over the band lies (fs/f)⁴/2 below the asymptote, 1e-6 or so.
	near(t, "low end", s.Sum.Low3DB, 100, 1e-3)
	if s.Sum.High3DB != 0 {
		t.Errorf("upper end at %g Hz, want none", s.Sum.High3DB)
	}
	// R and L: the low-pass of first order, 3.01 dB down at R/(2πL).
	d = oneWay(plainDriver("woofer", 8, 90))
	d.Parts = []xover.Part{coil("L1", 8/(2*math.Pi*5000), 0)}
	d.Ways[0].Network = []xover.Step{series(leaf("L1"))}
	d.Tune.Band = [2]float64{20, 21}
	s = mustSummary(t, d, [2]float64{})
	near(t, "high end", s.Sum.High3DB, 5000, 1) // the mean lies (21/5000)² below the asymptote: 4e-5
}

// Two drivers as loud as each other, but for less than the lead that counts, do not cross, though the lead
// changes hands.
func TestNearlyEqualWaysDoNotCross(t *testing.T) {
	d := &xover.Design{
		Parts:   []xover.Part{coil("L1", 8/(2*math.Pi*60e3), 0)},
		Drivers: []xover.Driver{plainDriver("a", 8, 90), plainDriver("b", 8, 89.9)},
		// One pole at 60 kHz is 0.46 dB down at 20 kHz, by hand: b is ahead there by 0.36 dB.
		Ways: []xover.Way{{Name: "a", Driver: "a", Network: []xover.Step{series(leaf("L1"))}}, {Name: "b", Driver: "b"}},
	}
	if s := mustSummary(t, d, [2]float64{}); len(s.Crossings) != 0 {
		t.Errorf("got crossings %+v, want none", s.Crossings)
	}
	// At 30 kHz it is 0.97 dB down: there b has taken the lead, where a had lost 0.1 dB.
	s := mustSummary(t, d, [2]float64{20, 30e3})
	if len(s.Crossings) != 1 {
		t.Fatalf("got crossings %+v, want one", s.Crossings)
	}
	want := 60e3 * math.Sqrt(math.Pow(10, 0.01)-1)
	near(t, "frequency", s.Crossings[0].Frequency, want, 1e-6*want)
}

func TestSummaryChecksItsBand(t *testing.T) {
	s := mustNew(t, oneWay(plainDriver("woofer", 8, 90)))
	for _, band := range [][2]float64{{-1, 100}, {100, 100}, {200, 100}, {math.NaN(), 1}, {20, math.Inf(1)}} {
		if got, err := s.Summary(band); err == nil || got != nil {
			t.Errorf("%g: got %+v and error %v", band, got, err)
		}
	}
}

func ExampleSystem_Summary() {
	s, err := New(twoWay(linkwitzRiley4, 2200, 8, false), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	sum, err := s.Summary([2]float64{200, 20e3})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, c := range sum.Crossings {
		fmt.Printf("%s to %s at %.0f Hz, each %.2f dB re the sum\n", c.Low, c.High, c.Frequency, c.LevelDB)
	}
	// Output: low to high at 2200 Hz, each -6.02 dB re the sum
}

func ExampleSystem_Predict() {
	s, err := New(twoWay(linkwitzRiley4, 2200, 8, false), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	r, err := s.Predict([]float64{1100, 2200, 4400})
	if err != nil {
		fmt.Println(err)
		return
	}
	for i, f := range r.Freqs {
		fmt.Printf("%4.0f Hz: low %6.2f dB, high %6.2f dB, sum %.1f dB SPL\n", f, DB(r.Ways[0].H[i]), DB(r.Ways[1].H[i]), SPL(r.Sum[i]))
	}
	// Output:
	// 1100 Hz: low  -0.53 dB, high -24.61 dB, sum 90.0 dB SPL
	// 2200 Hz: low  -6.02 dB, high  -6.02 dB, sum 90.0 dB SPL
	// 4400 Hz: low -24.61 dB, high  -0.53 dB, sum 90.0 dB SPL
}

// The lowest impedance may lie in a dip between the grid's points that is not next to its lowest point: of two series traps, each
// as low as its resistance, the one of 3 Ω between two points and that of 3.2 Ω on one.
func TestLowestOfTwoDips(t *testing.T) {
	trap := func(n string, ohm, hz float64) []xover.Part {
		const q = 30
		w := 2 * math.Pi * hz
		return []xover.Part{resistor("R"+n, ohm), coil("L"+n, q*ohm/w, 0), capacitor("C"+n, 1/(q*ohm*w), 0)}
	}
	grid := logGrid([2]float64{20, 20e3})
	at := 0
	for grid[at] < 1000 {
		at++
	}
	between, on := math.Sqrt(grid[at]*grid[at+1]), grid[at+48*2]
	d := &xover.Design{
		Parts:   append(trap("1", 3, between), trap("2", 3.2, on)...),
		Drivers: []xover.Driver{plainDriver("d", 1e6, 88)},
		Ways:    []xover.Way{{Name: "a", Driver: "d", Network: []xover.Step{shunt(inSeries("R1", "L1", "C1")), shunt(inSeries("R2", "L2", "C2"))}}},
	}
	sum, err := mustNew(t, d).Summary([2]float64{})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(sum.MinImpedance-3) > 0.02 || math.Abs(sum.MinImpedanceAt/between-1) > 1e-3 { // the other trap lies across it
		t.Errorf("%g Ω at %g Hz, want 3 at %g", sum.MinImpedance, sum.MinImpedanceAt, between)
	}
}

// Two drivers of 6 Ω are 3 Ω side by side and 12 Ω one after the other.
func TestLoadImpedanceOfSeveral(t *testing.T) {
	for _, tt := range []struct {
		drivers *xover.Expr
		want    float64
	}{{inParallel("a", "b"), 3}, {inSeries("a", "b"), 12}} {
		d := &xover.Design{
			Parts:   []xover.Part{resistor("R1", 1)},
			Drivers: []xover.Driver{plainDriver("a", 6, 88), plainDriver("b", 6, 88)},
			Ways:    []xover.Way{{Name: "w", Driver: "a, b", Drivers: tt.drivers, Network: []xover.Step{series(leaf("R1"))}}},
		}
		if z := mustNew(t, d).LoadImpedance(0, tt.drivers, complex(0, 1000)); real(z) != tt.want || imag(z) != 0 {
			t.Errorf("%v: %v Ω, want %g", tt.drivers, z, tt.want)
		}
	}
}
