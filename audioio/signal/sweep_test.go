package signal_test

import (
	"math"
	"math/big"
	"testing"

	"sixdown/audioio/signal"
)

// A. Farina, 108th Conv. Audio Eng. Soc., 2000 (formulas from memory); figures derived
// from them for 20 Hz to 20 kHz in 10 s, so tol is half a unit of their last digit.
func TestSweepFigures(t *testing.T) {
	w, err := signal.NewSweep(48000, 20, 20000, 10, signal.SweepSettings{})
	if err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct {
		what           string
		got, want, tol float64
	}{
		{"frequency at 0 s", w.FrequencyAt(0), 20, 1e-12},
		{"frequency at 5 s", w.FrequencyAt(5), 632.4555, 0.5e-4},
		{"frequency at 10 s", w.FrequencyAt(10), 20000, 1e-8},
		{"lead of harmonic 1", w.HarmonicLead(1), 0, 0},
		{"lead of harmonic 2", w.HarmonicLead(2), 1.003433, 0.5e-6},
		{"lead of harmonic 3", w.HarmonicLead(3), 1.590404, 0.5e-6},
		{"lead of harmonic 4", w.HarmonicLead(4), 2.006867, 0.5e-6},
		{"lead of harmonic 5", w.HarmonicLead(5), 2.329900, 0.5e-6},
		{"L", w.HarmonicLead(2) / math.Ln2, 1.44764827, 0.5e-8},
	} {
		if !(math.Abs(tt.got-tt.want) <= tt.tol) {
			t.Errorf("%s: %v, want %v", tt.what, tt.got, tt.want)
		}
	}
	// 28924.0125 cycles in all (derived): so many rising zeros, the one
	// at the very beginning perhaps left out.
	x := make([]float64, w.Len())
	if _, err := w.ReadSamples(x); err != nil {
		t.Fatal(err)
	}
	rising := 0
	for i := 1; i < len(x); i++ {
		if x[i-1] <= 0 && x[i] > 0 {
			rising++
		}
	}
	if rising < 28924 || rising > 28925 {
		t.Errorf("%d rising zeros, want 28924 or 28925", rising)
	}
}

// From 20 Hz to 20·2^10 Hz in 300 s, L = 30/ln 2 s and at t = 30·m s the phase is
// (600/ln 2)·(2^m − 1) turns, computed here in 200 bits. A float64 holds so many turns
// (885 thousand) to 2^-34; the product of f1·L and the time's own rounding make it a few times that.
func TestSweepPhaseIsExact(t *testing.T) {
	const rate = 48000
	w, err := signal.NewSweep(rate, 20, 20480, 300, signal.SweepSettings{Peak: 1})
	if err != nil {
		t.Fatal(err)
	}
	x := make([]float64, w.Len())
	if _, err := w.ReadSamples(x); err != nil {
		t.Fatal(err)
	}
	// ln 2 to 50 digits, OEIS A002162.
	ln2, _, err := big.ParseFloat("0.69314718055994530941723212145817656807550013436026", 10, 200, big.ToNearestEven)
	if err != nil {
		t.Fatal(err)
	}
	for m := 1; m < 10; m++ {
		turns := new(big.Float).SetPrec(200).SetInt64(600 * (1<<m - 1))
		turns.Quo(turns, ln2)
		whole, _ := turns.Int(nil)
		part, _ := turns.Sub(turns, new(big.Float).SetInt(whole)).Float64()
		if got, want := x[30*m*rate], math.Sin(2*math.Pi*part); math.Abs(got-want) > 5e-9 {
			t.Errorf("after %d s: %v, want %v", 30*m, got, want)
		}
	}
}

func TestNewSweepRefuses(t *testing.T) {
	for name, tt := range map[string]struct {
		rate            int
		f1, f2, seconds float64
		s               signal.SweepSettings
	}{
		"from 0":          {48000, 0, 20000, 1, signal.SweepSettings{}},
		"falling":         {48000, 20000, 20, 1, signal.SweepSettings{}},
		"equal":           {48000, 20, 20, 1, signal.SweepSettings{}},
		"above half rate": {48000, 20, 24001, 1, signal.SweepSettings{}},
		"NaN":             {48000, math.NaN(), 20000, 1, signal.SweepSettings{}},
		"no time":         {48000, 20, 20000, 0, signal.SweepSettings{}},
		"endless":         {48000, 20, 20000, math.Inf(1), signal.SweepSettings{}},
		"edges too long":  {48000, 20, 20000, 1, signal.SweepSettings{RiseSeconds: 0.6, FallSeconds: 0.6}},
		"tail negative":   {48000, 20, 20000, 1, signal.SweepSettings{TailSeconds: -1}},
		"too loud":        {48000, 20, 20000, 1, signal.SweepSettings{Peak: 1.5}},
		"rate":            {10, 1, 2, 1, signal.SweepSettings{}},
	} {
		if w, err := signal.NewSweep(tt.rate, tt.f1, tt.f2, tt.seconds, tt.s); err == nil || w != nil {
			t.Errorf("%s: taken", name)
		}
	}
}
