package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"
)

// noisyFile writes z at freqs as a table, |Z| and the angle with independent normal errors of the given size: of |Z|,
// and in rad.
func noisyFile(freqs []float64, z func(f float64) complex128, size float64, seed uint64) string {
	r := rand.New(rand.NewPCG(seed, 1))
	return impedanceFile(freqs, func(f float64) complex128 {
		return z(f) * cmplx.Rect(1+size*r.NormFloat64(), size*r.NormFloat64())
	})
}

func mustFit(t testing.TB, src string, set FitSettings) *Fit {
	t.Helper()
	return FitImpedance(mustImpedance(t, src), set)
}

// of returns a load's impedance at a frequency in Hz.
func of(l interface{ Impedance(complex128) complex128 }) func(f float64) complex128 {
	return func(f float64) complex128 { return l.Impedance(jw(f)) }
}

// ventedWoofer is driver A in a box of α = 1.4 that is tuned to 32 Hz with QL = 7, worked out by hand from Small,
// "Vented-Box Loudspeaker Systems" (1973): beside the motional branch stand Lceb = Lces/α = 45.473 mH, Cmep =
// 1/(ωb²·Lceb) = 543.97 µF and Rel = ωb·Lceb/QL = 1.30614 Ω, in series.
func ventedWoofer(f float64) complex128 {
	const lceb, cmep, rel = 45.473e-3, 543.97e-6, 1.30614
	s := jw(f)
	box := s*lceb + 1/(s*cmep) + rel
	return 5.6 + s*0.7e-3 + 1/(1.0/49+1/(s*63.662e-3)+s*324.806e-6+1/box)
}

// The check drivers (Small 1972; their branches are derived in datasheet_test.go), as tables of 500 rows with 0.5 %
// noise. The limits are the project's: Re and fs within 0.5 %, Q within 2 %. They are far above what the noise
// does, and the standard deviations that the fit states must cover it: 5 of them are exceeded once in a million.
func TestFitOfKnownDrivers(t *testing.T) {
	lossy := DataSheet{Re: 6.1, Le: 0.2e-3, LossR2: 8, LossL2: 0.5e-3, Fs: 48, Qms: 5, Qes: 0.6}
	tweeter := DataSheet{Re: 5.4, Le: 0.04e-3, Fs: 850, Qms: 3.1, Qes: 1.2}
	damped := DataSheet{Re: 5.4, Le: 0.04e-3, Fs: 1500, Qms: 0.5, Qes: 1.2} // a fluid in the gap: a mere shoulder
	for _, tt := range []struct {
		name  string
		sheet DataSheet
		coil  Coil
	}{
		{"A", wooferA, PlainCoil}, {"B", wooferB, PlainCoil}, {"lossy coil", lossy, OneLoss},
		{"tweeter", tweeter, PlainCoil}, {"damped tweeter", damped, PlainCoil},
	} {
		qts := tt.sheet.Qms * tt.sheet.Qes / (tt.sheet.Qms + tt.sheet.Qes)
		for seed := range uint64(4) {
			f := mustFit(t, noisyFile(grid(10, 20e3, 500), of(tt.sheet), 0.005, seed), FitSettings{})
			for _, q := range []struct {
				what string
				got  Estimate
				want float64
				rel  float64
			}{
				{"Re", f.Re, tt.sheet.Re, 0.005}, {"fs", f.Fs, tt.sheet.Fs, 0.005},
				{"Qms", f.Qms, tt.sheet.Qms, 0.02}, {"Qes", f.Qes, tt.sheet.Qes, 0.02}, {"Qts", f.Qts, qts, 0.02},
			} {
				near(t, tt.name+" "+q.what, q.got.Value, q.want, q.rel)
				if miss := math.Abs(q.got.Value - q.want); !(miss < 5*q.got.Sigma) {
					t.Errorf("%s %s: got %g ± %g, want %g", tt.name, q.what, q.got.Value, q.got.Sigma, q.want)
				}
			}
			if f.Coil != tt.coil || f.Box != nil || len(f.Extra) != 0 {
				t.Errorf("%s: coil %d, box %v and extra %v, want coil %d alone", tt.name, f.Coil, f.Box, f.Extra, tt.coil)
			}
			// Two independent errors of 0.5 % are √2·0.5 % in all; 500 of them have a mean square within 10 %.
			near(t, tt.name+" rms", f.RMSPercent, 0.5*math.Sqrt2, 0.1)
			if f.WorstPercent < f.RMSPercent || f.WorstPercent > 3.5 { // 5 σ, as above
				t.Errorf("%s: worst %g %%", tt.name, f.WorstPercent)
			}
		}
	}
}

// A standard deviation is one: over many noises the estimates scatter by it. For 60 of them χ² has a standard
// deviation of √120, so 60 ± 44 is 4 of those.
func TestSigmaIsTheScatter(t *testing.T) {
	const tries = 60
	var re, fs, qms, qes, qts float64
	for seed := range uint64(tries) {
		f := mustFit(t, noisyFile(grid(10, 20e3, 200), of(wooferA), 0.005, 100+seed), FitSettings{Coil: PlainCoil})
		add := func(sum *float64, e Estimate, want float64) {
			d := (e.Value - want) / e.Sigma
			*sum += d * d
		}
		add(&re, f.Re, 5.6)
		add(&fs, f.Fs, 35)
		add(&qms, f.Qms, 3.5)
		add(&qes, f.Qes, 0.4)
		add(&qts, f.Qts, 3.5*0.4/3.9)
	}
	for what, sum := range map[string]float64{"Re": re, "fs": fs, "Qms": qms, "Qes": qes, "Qts": qts} {
		if math.Abs(sum-tries) > 44 {
			t.Errorf("%s: χ² is %.1f for %d tries", what, sum, tries)
		}
	}
}

// A vented box shows both its peaks, and its parameters.
func TestFitOfAVentedBox(t *testing.T) {
	for _, noise := range []float64{0, 0.005} {
		f := mustFit(t, noisyFile(grid(10, 20e3, 500), ventedWoofer, noise, 3), FitSettings{})
		if f.Box == nil {
			t.Fatalf("noise %g: no box was seen", noise)
		}
		rel := 1e-4 // five figures of Lceb and Cmep
		if noise > 0 {
			rel = 0.02 // the limit for Qs, as above
		}
		for _, q := range []struct {
			what      string
			got, want float64
		}{
			{"Re", f.Re.Value, 5.6}, {"fs", f.Fs.Value, 35}, {"Qms", f.Qms.Value, 3.5}, {"Qes", f.Qes.Value, 0.4},
			{"fb", f.Box.Fb.Value, 32}, {"α", f.Box.Alpha.Value, 1.4}, {"QL", f.Box.QL.Value, 7},
			// Roots of x² - x(fs²(1 + α) + fb²) + fs²·fb², by hand.
			{"fL", f.Box.Low, 18.6222}, {"fH", f.Box.High, 60.1433},
		} {
			near(t, fmt.Sprintf("noise %g: %s", noise, q.what), q.got, q.want, rel)
		}
		if len(f.Extra) > 0 {
			t.Errorf("noise %g: extra %v", noise, f.Extra)
		}
		// Between the peaks, at fb, |Z| has its valley, and the circuit has three of its turning points there.
		z := func(hz float64) float64 { return cmplx.Abs(f.Impedance(jw(hz))) }
		if !(z(18.6) > 2*z(32) && z(60) > 2*z(32) && z(10) < z(18.6) && z(300) < z(60)) {
			t.Errorf("the peaks are not there: %g, %g, %g, %g, %g Ω", z(10), z(18.6), z(32), z(60), z(300))
		}
	}
}

// Each model of a coil is found where it is the true one.
func TestCoilIsChosenByTheData(t *testing.T) {
	body := DataSheet{Re: 5.6, Fs: 35, Qms: 3.5, Qes: 0.4}
	pair := func(f, r, l float64) complex128 {
		x := jw(f) * complex(l, 0)
		return x * complex(r, 0) / (x + complex(r, 0))
	}
	for _, tt := range []struct {
		name string
		coil Coil
		z    func(f float64) complex128
	}{
		{"none", NoCoil, func(f float64) complex128 { return 0 }},
		{"Le", PlainCoil, func(f float64) complex128 { return jw(f) * 0.7e-3 }},
		{"one pair", OneLoss, func(f float64) complex128 { return jw(f)*0.2e-3 + pair(f, 8, 0.5e-3) }},
		{"two pairs", TwoLosses, func(f float64) complex128 {
			return jw(f)*0.1e-3 + pair(f, 3, 0.6e-3) + pair(f, 20, 0.2e-3)
		}},
		{"semi-inductance", SemiInductance, of(Leach{K: 0.02, N: 0.7})},
	} {
		z := func(f float64) complex128 { return body.Impedance(jw(f)) + tt.z(f) }
		src := noisyFile(grid(10, 20e3, 500), z, 0.005, 9)
		if f := mustFit(t, src, FitSettings{}); f.Coil != tt.coil {
			t.Errorf("%s: coil %d was chosen, want %d", tt.name, f.Coil, tt.coil)
		}
		f := mustFit(t, src, FitSettings{Coil: tt.coil})
		if f.Coil != tt.coil {
			t.Errorf("%s: coil %d was asked for, got %d", tt.name, tt.coil, f.Coil)
		}
		near(t, tt.name+" Re", f.Re.Value, 5.6, 0.005)
	}
	f := mustFit(t, noisyFile(grid(10, 20e3, 500), func(f float64) complex128 {
		return body.Impedance(jw(f)) + Leach{K: 0.02, N: 0.7}.Impedance(jw(f))
	}, 0, 9), FitSettings{Coil: SemiInductance})
	near(t, "K", f.Semi.K, 0.02, 1e-6) // no noise: twelve figures were written
	near(t, "n", f.Semi.N, 0.7, 1e-6)
	if f.WorstPercent > 0.3 { // what the ladder is worth; the table itself is met exactly
		t.Errorf("the ladder is off by %g %%", f.WorstPercent)
	}
}

// A ripple from the cone's edge asks for a resonance of its own, and gets one; noise asks for none.
func TestExtraResonances(t *testing.T) {
	edge := func(f float64) complex128 { return 0.6 / (1 + 12i*complex(f/900-900/f, 0)) }
	dust := func(f float64) complex128 { return 0.9 / (1 + 8i*complex(f/4000-4000/f, 0)) }
	z := func(f float64) complex128 { return wooferA.Impedance(jw(f)) + edge(f) + dust(f) }
	f := mustFit(t, noisyFile(grid(10, 20e3, 500), z, 0.005, 5), FitSettings{})
	if len(f.Extra) != 2 {
		t.Fatalf("got %v", f.Extra)
	}
	for _, r := range f.Extra {
		want := Resonance{900, 0.6, 12}
		if r.Frequency > 2000 {
			want = Resonance{4000, 0.9, 8}
		}
		// A ripple of a tenth of |Z|, 16 rows wide: 0.5 % noise leaves some 2 % of it uncertain.
		near(t, "f", r.Frequency, want.Frequency, 0.01)
		near(t, "R", r.R, want.R, 0.1)
		near(t, "Q", r.Q, want.Q, 0.15)
	}
	near(t, "fs", f.Fs.Value, 35, 0.005)
}

// Tables as the trade has them: coarse, in equal steps of frequency, beginning above or in the resonance, or of a
// resistor.
func TestFitOfOtherTables(t *testing.T) {
	linear := make([]float64, 9000)
	for i := range linear {
		linear[i] = 10 + 2.2*float64(i)
	}
	for _, tt := range []struct {
		name  string
		freqs []float64
		fs    bool // the table shows it
	}{
		{"third-octaves", grid(20, 20e3, 31), true},
		{"equal steps", linear, true},
		{"from just below the resonance", grid(30, 20e3, 300), true},
		{"from above the resonance", grid(45, 20e3, 300), true},
		{"far above the resonance", grid(2e3, 20e3, 100), false},
		{"one decade", grid(10, 100, 60), true},
	} {
		f := mustFit(t, noisyFile(tt.freqs, of(wooferA), 0.005, 2), FitSettings{})
		near(t, tt.name+": rms", f.RMSPercent, 0.5*math.Sqrt2, 0.25) // 31 rows scatter by a sixth; nearby rows, averaged, by less
		if tt.fs {
			for _, q := range []struct {
				what string
				got  Estimate
				want float64
			}{{"Re", f.Re, 5.6}, {"fs", f.Fs, 35}, {"Qms", f.Qms, 3.5}, {"Qes", f.Qes, 0.4}} {
				if !(math.Abs(q.got.Value-q.want) < 5*q.got.Sigma+0.002*q.want) {
					t.Errorf("%s: %s is %g ± %g, want %g", tt.name, q.what, q.got.Value, q.got.Sigma, q.want)
				}
			}
		}
	}
	f := mustFit(t, "10 8 0\n100 8 0\n1000 8 0\n", FitSettings{})
	if es := f.Elements(); len(es) != 1 || f.Fs.Value != 0 {
		t.Errorf("a resistor is %v", es)
	}
	near(t, "a resistor", f.Re.Value, 8, 1e-9)
}

// However few the rows, there is a circuit, and what it says of them is finite. One row of 8 Ω at +30° is a
// resistance at best, off by the angle: |e^(-jπ/6) - 1| = 2·sin(π/12) = 51.8 %.
func TestFitOfFewRows(t *testing.T) {
	rows := []Row{{Frequency: 10, Value: 8, PhaseDeg: 30}, {Frequency: 100, Value: 9}, {Frequency: 1000, Value: 8}, {Frequency: 3000, Value: 11, PhaseDeg: 20}}
	for n := 1; n <= len(rows); n++ {
		z, err := NewImpedanceTable(&Table{Name: "w.zma", HasPhase: true, Rows: rows[:n]})
		if err != nil {
			t.Fatal(err)
		}
		f := z.Fit()
		if len(z.Elements()) == 0 || math.IsNaN(f.RMSPercent+f.WorstPercent+f.Re.Sigma+f.Fs.Sigma) {
			t.Errorf("%d rows: %+v", n, f)
		}
		if n == 1 {
			near(t, "one row", f.RMSPercent, 51.8, 1e-3)
		}
	}
}

// Whatever it was fitted to, the circuit is passive, it is the impedance that it says it is, and its error is
// what the fit says.
func TestFittedCircuit(t *testing.T) {
	wild := func(f float64) complex128 { // not a driver at all: its angle turns to and fro, past 90°
		return cmplx.Rect(8+3*math.Sin(f), 2*math.Sin(math.Log(f)*3))
	}
	for name, z := range map[string]func(f float64) complex128{
		"A": of(wooferA), "box": ventedWoofer, "semi-inductance": of(Leach{K: 0.02, N: 0.6}), "wild": wild,
		"capacitor": func(f float64) complex128 { return 2 + 1/(jw(f)*10e-6) },
	} {
		table := mustImpedance(t, noisyFile(grid(10, 20e3, 200), z, 0.005, 11))
		f := table.Fit()
		es := table.Elements()
		for _, e := range es {
			if !(e.Value > 0) || math.IsInf(e.Value, 0) {
				t.Errorf("%s: %s is %g", name, e.Name, e.Value)
			}
		}
		worst := 0.0
		for _, hz := range table.freqs {
			nearC(t, fmt.Sprintf("%s at %g Hz", name, hz), f.Impedance(jw(hz)), nodal(t, es, jw(hz)), 1e-5) // nodal equations lose digits where neighbouring admittances differ by 1e8
			worst = max(worst, 100*cmplx.Abs(f.Impedance(jw(hz))/table.Impedance(jw(hz))-1))
		}
		near(t, name+": worst", f.WorstPercent, worst, 1e-12)
		if s := f.Impedance(0); real(s) <= 0 || imag(s) != 0 {
			t.Errorf("%s: %g Ω at DC", name, s)
		}
	}
}

// The derivatives against differences: half the step between, so that the error is (h²/6) of a third derivative
// that is of the size of |Z| times the largest Q cubed.
func TestFitDerivatives(t *testing.T) {
	const h = 1e-5
	for _, coil := range []Coil{NoCoil, PlainCoil, OneLoss, TwoLosses, SemiInductance} {
		for _, b := range []body{still, single, vented} {
			m := &model{coil: coil, body: b, extras: 1}
			r := rand.New(rand.NewPCG(1, uint64(coil)))
			for k := range m.size() {
				m.p = append(m.p, r.NormFloat64())
				if k >= m.bodyAt() && (k-m.bodyAt())%3 == 0 {
					m.p[k] += 5 // a resonance near the frequency below
				}
			}
			n := m.size()
			v, d, none := make([]float64, n), make([]complex128, n), make([]complex128, n)
			const w = 200
			m.values(v)
			z := m.impedance(v, w, d)
			nearC(t, "the circuit", m.circuit(v).Impedance(complex(0, w)), z, 1e-2) // the semi-inductance's ladder
			for k := range n {
				p := m.p[k]
				m.p[k] = p + h
				m.values(v)
				up := m.impedance(v, w, none)
				m.p[k] = p - h
				m.values(v)
				down := m.impedance(v, w, none)
				m.p[k] = p
				if diff := (up - down) / (2 * h); cmplx.Abs(diff-d[k]) > 1e-7*cmplx.Abs(z)+1e-6*cmplx.Abs(diff) {
					t.Errorf("coil %d, body %d, unknown %d: derivative %g, difference %g", coil, b, k, d[k], diff)
				}
			}
		}
	}
}

// FuzzFit: from any table that can be read comes a circuit of positive, finite elements.
func FuzzFit(f *testing.F) {
	f.Add([]byte(impedanceFile(grid(10, 20e3, 40), ventedWoofer)))
	f.Add([]byte("20 8 0\n30 9 10\n40 1e-9 -170\n"))
	f.Add([]byte("1e-300 1 1\n1 1 1\n1e9 1e8 90\n"))
	f.Add([]byte("1 1 0\n1.000002 1e8 0\n1.000004 1 0\n"))
	f.Fuzz(func(t *testing.T, src []byte) {
		if len(src) > 3000 {
			return
		}
		rows, err := ReadTable("f", strings.NewReader(string(src)))
		if err != nil {
			return
		}
		table, err := NewImpedanceTable(rows)
		if err != nil {
			return
		}
		for _, e := range table.Elements() {
			if !(e.Value > 0) || math.IsInf(e.Value, 0) {
				t.Errorf("%s is %g", e.Name, e.Value)
			}
		}
	})
}

func BenchmarkFit(b *testing.B) {
	edge := func(f float64) complex128 { return 0.6 / (1 + 12i*complex(f/900-900/f, 0)) }
	for name, z := range map[string]func(f float64) complex128{
		"woofer": of(wooferA), "vented": ventedWoofer,
		"edge": func(f float64) complex128 {
			return wooferB.Impedance(jw(f)) + Leach{K: 0.01, N: 0.7}.Impedance(jw(f)) + edge(f)
		},
	} {
		b.Run(name+"/rows=500", func(b *testing.B) {
			table := mustImpedance(b, noisyFile(grid(10, 20e3, 500), z, 0.005, 1))
			b.ReportAllocs()
			for b.Loop() {
				if f := FitImpedance(table, FitSettings{}); f.RMSPercent > 1 {
					b.Fatalf("off by %g %%", f.RMSPercent)
				}
			}
		})
	}
}

// A value whose standard deviation is more than half of it is a guess, and so is one without any.
func TestTold(t *testing.T) {
	for _, tt := range []struct {
		e    Estimate
		want bool
	}{
		{Estimate{100, 2}, true}, {Estimate{1, 0.5}, true}, {Estimate{1, 0.51}, false}, {Estimate{1000, 11627}, false},
		{Estimate{}, false}, {Estimate{5, math.Inf(1)}, false}, {Estimate{5, math.NaN()}, false},
	} {
		if got := tt.e.Told(); got != tt.want {
			t.Errorf("%v: %t", tt.e, got)
		}
	}
}
