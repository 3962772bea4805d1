package spread

import (
	"context"
	"fmt"
	"math"
	"os"
	"reflect"
	"strings"
	"testing"

	"sixdown/sim"
	"sixdown/xover"
)

func problem(t testing.TB, name string, text []byte) *Problem {
	t.Helper()
	d, _, err := xover.Parse(name, text)
	if err != nil {
		t.Fatal(err)
	}
	sys, err := sim.New(d, nil)
	if err != nil {
		t.Fatal(err)
	}
	p, err := New(d, sys, nil)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func file(t testing.TB, path string) *Problem {
	t.Helper()
	src, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return problem(t, path, src)
}

// oneCoil is a coil before 8 Ω, its corner at 1 kHz.
const oneCoil = `[parts]
L1 = { value = "1.2732395447351628 mH", tol = "10 %%" }
[driver.d]
impedance = "8 ohm"
[[way]]
name = "low"
driver = "d"
network = ["series L1"]
[spread]
limit = "0.4 dB"
distribution = %q
[tune]
band = ["500 Hz", "2 kHz"]
`

// coilDB is the gain in dB of a coil of x times that value, at f in Hz: -10·lg(1 + (x·f/1 kHz)²).
func coilDB(x, f float64) float64 { return -10 * math.Log10(1+x*f*x*f/1e6) }

// The level falls as the coil grows, so the level's quantiles are the level at the coil's.
func TestFirstOrderQuantilesAreExact(t *testing.T) {
	// Quantiles of the standard normal distribution: M. Abramowitz and I. A. Stegun, "Handbook of Mathematical
	// Functions", 1964, table 26.5 and 26.6: 1.64485 at 0.95, 0.67449 at 0.75.
	for _, c := range []struct {
		normal bool
		at95   float64 // of the deviation, in tolerances
		at75   float64
	}{{false, 0.9, 0.5}, {true, 1.64485 / 3, 0.67449 / 3}} {
		p := problem(t, "coil", []byte(oneCoilText(c.normal)))
		r, err := p.Run(context.Background(), Settings{Samples: 20000, From: 250, To: 4000, PerOctave: 1})
		if err != nil {
			t.Fatal(err)
		}
		way := r.Ways[0]
		for k, f := range r.Freqs {
			for _, q := range []struct {
				name      string
				got, want float64
			}{
				{"p05", way.P05[k], coilDB(1+0.1*c.at95, f)},
				{"p25", way.P25[k], coilDB(1+0.1*c.at75, f)},
				{"p50", way.P50[k], coilDB(1, f)},
				{"p75", way.P75[k], coilDB(1-0.1*c.at75, f)},
				{"p95", way.P95[k], coilDB(1-0.1*c.at95, f)},
				{"nominal", way.Nominal[k], coilDB(1, f)},
			} {
				// One dimension is stratified to 1/16384 and better, the levels are stored to 1e-6, and the range is under 2 dB.
				if math.Abs(q.got-q.want) > 2e-4 {
					t.Errorf("normal %t, %g Hz: %s is %.5f dB, want %.5f", c.normal, f, q.name, q.got, q.want)
				}
			}
		}
		// A build passes if the level is near enough at the ends of the band, where it moves most: at 2 kHz.
		pass := func(limit float64) float64 {
			// The level at 2 kHz as a function of x is monotone; solve for x at ±limit by hand: x² = (10^(-g/10) - 1)/4.
			g := coilDB(1, 2000)
			most := math.Sqrt((math.Pow(10, -(g-limit)/10) - 1) / 4)
			least := math.Sqrt((math.Pow(10, -(g+limit)/10) - 1) / 4)
			cdf := func(x float64) float64 {
				d := (x - 1) / 0.1
				if c.normal {
					return 0.5 * math.Erfc(-3*d/math.Sqrt2)
				}
				return min(max((d+1)/2, 0), 1)
			}
			return cdf(most) - cdf(least)
		}
		if want := pass(0.4); math.Abs(r.Yield-want) > 3e-4 || want > 0.99 {
			t.Errorf("normal %t: yield %.5f, want %.5f", c.normal, r.Yield, want)
		}
		if r.WorstAt != 2000 {
			t.Errorf("builds fail at %g Hz, want 2000, where the level moves most", r.WorstAt)
		}
	}
}

func oneCoilText(normal bool) string {
	name := "uniform"
	if normal {
		name = "normal"
	}
	return fmt.Sprintf(oneCoil, name)
}

// A coil before a resistor: d(dB)/d(ln L) = -8.686·u²/(1 + u²), u = f over the corner; by hand. At 2 kHz u² = 4.
func TestSensitivityOfACoil(t *testing.T) {
	p := problem(t, "coil", []byte(oneCoilText(false)))
	r, err := p.Run(context.Background(), Settings{Samples: 2})
	if err != nil {
		t.Fatal(err)
	}
	want := Sensitivity{Part: "L1", Way: "low", DBPerPercent: -20 / math.Ln10 / 100 * 4 / 5, AtHz: 2000}
	got := r.Sensitivities[0]
	if math.Abs(got.DBPerPercent-want.DBPerPercent) > 1e-12 || got.AtHz != want.AtHz || got.Part != want.Part || got.Way != want.Way {
		t.Errorf("got %+v, want %+v", got, want)
	}
}

// Two loudspeakers whose one part deviates uniformly: the difference of deviations is triangular, so that a share 1 - (1 - d/2)² of
// pairs is within d tolerances of each other. In dB at 2 kHz it is a little bent, which the wide tolerance shows; 500 pairs.
func TestMatchOfACoil(t *testing.T) {
	text := oneCoilText(false)
	p := problem(t, "coil", []byte(text))
	slope := 20 / math.Ln10 * 4 / 5 // dB for a change of the coil by e
	const d = 0.5                   // tolerances
	p.design.Spread.MatchDB = d * 0.1 * slope
	r, err := p.Run(context.Background(), Settings{Samples: 20000})
	if err != nil {
		t.Fatal(err)
	}
	want := 1 - (1-d/2)*(1-d/2)
	// 10,000 pairs: a standard error of 0.005; and up to a tenth of the slope's change over the tolerance.
	if math.Abs(r.Match.Share-want) > 0.02 {
		t.Errorf("%.4f of pairs match, want %.4f", r.Match.Share, want)
	}
	// 95 % are within d with (1 - d/2)² = 0.05.
	if want := 2 * (1 - math.Sqrt(0.05)) * 0.1 * slope; math.Abs(r.Match.P95DB/want-1) > 0.02 {
		t.Errorf("95 %% are within %.4f dB, want %.4f", r.Match.P95DB, want)
	}
}

func TestSameOnOneCoreAndTwo(t *testing.T) {
	p := file(t, "../../audioio/testdata/breakwater.toml")
	p.design.Spread.MatchDB = 1
	run := func(workers int, seed uint64) *Result {
		r, err := p.Run(context.Background(), Settings{Samples: 1000, Workers: workers, Seed: seed})
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	one := run(1, 1)
	if two := run(2, 1); !reflect.DeepEqual(one, two) {
		t.Error("two goroutines give another result than one")
	}
	if other := run(1, 2); reflect.DeepEqual(one.Sum.P95, other.Sum.P95) {
		t.Error("another seed gives the same builds")
	}
}

func TestInterrupted(t *testing.T) {
	p := file(t, "../../audioio/testdata/breakwater.toml")
	ctx, cancel := context.WithCancel(context.Background())
	r, err := p.Run(ctx, Settings{Samples: 100000, Workers: 2, Progress: func(done float64) {
		if done > 0.01 {
			cancel()
		}
	}})
	if err != nil {
		t.Fatal(err)
	}
	if !r.Interrupted || r.Samples < 64 || r.Samples >= 100000 {
		t.Errorf("interrupted %t after %d builds", r.Interrupted, r.Samples)
	}
	if _, err := p.Run(ctx, Settings{}); err == nil {
		t.Error("a run that never began gives a result")
	}
}

// Each of the first base^k points lies in another of base^k equal strips of every axis: what makes the sequence even. Owen, 2017.
func TestSamplerIsEven(t *testing.T) {
	const dimensions = 40
	s := NewSampler(dimensions, 7)
	u := make([]float64, dimensions)
	for d, base := range primes(dimensions) {
		n := base
		for n*base <= 4000 {
			n *= base
		}
		seen := make([]bool, n)
		for i := range n {
			s.At(u, i)
			strip := int(u[d] * float64(n))
			if seen[strip] {
				t.Fatalf("axis %d: two of %d points are in strip %d", d, n, strip)
			}
			seen[strip] = true
		}
	}
	if got := primes(10); !reflect.DeepEqual(got, []int{2, 3, 5, 7, 11, 13, 17, 19, 23, 29}) {
		t.Errorf("primes: %v", got)
	}
}

// Halving the tolerance of the only part halves the range of x.
func TestTightenOneCoil(t *testing.T) {
	p := problem(t, "coil", []byte(oneCoilText(false)))
	as, each, err := p.Tighten(context.Background(), Settings{Samples: 8192}, 0.5)
	if err != nil {
		t.Fatal(err)
	}
	if len(each) != 1 || each[0].Part != "L1" || math.Abs(each[0].Tol-0.05) > 1e-15 {
		t.Fatalf("got %+v", each)
	}
	// Within ±5 % the level at 2 kHz moves by 0.34 dB, less than the limit: all builds pass.
	if !(as < 0.7) || each[0].Yield != 1 {
		t.Errorf("yield %g, and %g with a closer coil; want about 0.57 and 1", as, each[0].Yield)
	}
}

func TestBuildAllocatesNothing(t *testing.T) {
	p := file(t, "../../audioio/testdata/breakwater.toml")
	s := Settings{}
	if err := s.complete(p); err != nil {
		t.Fatal(err)
	}
	freqs, _, _ := p.grid(&s)
	b, err := p.newBench(freqs)
	if err != nil {
		t.Fatal(err)
	}
	sampler, factors := NewSampler(len(p.parts), 1), make([]float64, len(p.parts))
	i := 0
	if n := testing.AllocsPerRun(100, func() {
		p.Factors(factors, sampler, i)
		i++
		if err := b.build(factors); err != nil {
			t.Fatal(err)
		}
		b.measure()
	}); n != 0 {
		t.Errorf("a build allocates %g times", n)
	}
}

// BenchmarkSpread is 20,000 builds of a three-way at 120 frequencies and the ends of the band, with its quantiles.
func BenchmarkSpread(b *testing.B) {
	p := file(b, "../../audioio/testdata/breakwater.toml")
	for _, workers := range []int{1, 2} {
		b.Run(fmt.Sprintf("workers=%d", workers), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := p.Run(context.Background(), Settings{Samples: 20000, Workers: workers}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// The yield is over the band, wherever the fans end: a coil's builds are the farther apart the higher the frequency, up to 40 kHz.
func TestYieldBeyondTheFans(t *testing.T) {
	text := strings.Replace(fmt.Sprintf(oneCoil, "uniform"), `band = ["500 Hz", "2 kHz"]`, `band = ["500 Hz", "40 kHz"]`, 1)
	text = strings.Replace(text, `impedance = "8 ohm"`, "impedance = \"8 ohm\"\nsensitivity = \"88 dB\"", 1)
	p := problem(t, "t.toml", []byte(text))
	r, err := p.Run(context.Background(), Settings{Samples: 20000})
	if err != nil {
		t.Fatal(err)
	}
	// A build passes if its level at 40 kHz is within 0.4 dB: between the two values of the coil, by bisection of coilDB.
	edge := func(off float64) float64 {
		lo, hi := 0.5, 2.0
		for range 60 {
			if mid := (lo + hi) / 2; coilDB(mid, 40e3)-coilDB(1, 40e3) > off {
				lo = mid
			} else {
				hi = mid
			}
		}
		return lo
	}
	want := (min(edge(-0.4), 1.1) - max(edge(0.4), 0.9)) / 0.2
	if math.Abs(r.Yield-want) > 0.002 || r.Freqs[len(r.Freqs)-1] != 20e3 { // quasi-random, 20,000 builds
		t.Errorf("yield %g, want %g; the fans end at %g Hz", r.Yield, want, r.Freqs[len(r.Freqs)-1])
	}
}
