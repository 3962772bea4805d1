package cli

import (
	"encoding/json"
	"math"
	"strings"
	"testing"
)

// lr4Pair is a Linkwitz-Riley pair of order 4 at 1 kHz into 8 Ω, drivers equally sensitive and flat. The values
// follow from the squared Butterworth's continued fraction: L = g·R/ω, C = g/(ω·R) with g = 4√2/3, 9√2/8, 2√2/3,
// √2/4, derived by hand; mirrored for the high-pass.
func lr4Pair() string {
	const r, w = 8, 2 * math.Pi * 1000
	g := []float64{4 * math.Sqrt2 / 3, 9 * math.Sqrt2 / 8, 2 * math.Sqrt2 / 3, math.Sqrt2 / 4}
	part := func(name string, v float64) string {
		text, err := json.Marshal(v)
		if err != nil {
			panic(err) // a finite number can always be encoded
		}
		unit := " H"
		if name[0] == 'C' {
			unit = " F"
		}
		return name + ` = "` + string(text) + unit + `"` + "\n"
	}
	return "title = \"Pair\"\n[parts]\n" +
		part("L1", g[0]*r/w) + part("C1", g[1]/(r*w)) + part("L2", g[2]*r/w) + part("C2", g[3]/(r*w)) +
		part("C3", 1/(g[0]*r*w)) + part("L3", r/(g[1]*w)) + part("C4", 1/(g[2]*r*w)) + part("L4", r/(g[3]*w)) + `
[driver.woofer]
impedance = "8 ohm"
sensitivity = "88 dB"
[driver.tweeter]
impedance = "8 ohm"
sensitivity = "88 dB"
[[way]]
name = "low"
driver = "woofer"
network = ["series L1", "shunt C1", "series L2", "shunt C2"]
[[way]]
name = "high"
driver = "tweeter"
network = ["series C3", "shunt L3", "series C4", "shunt L4"]
`
}

// TestPredictJSON holds the whole document against closed forms of a Linkwitz-Riley pair: at the crossover both
// ways are 6.02 dB down and turned by half a turn; the sum is an all-pass of second order with Q = 1/√2, flat at
// the drivers' sensitivity (S. H. Linkwitz, JAES 24(1), 1976), whose delay is 2√2/ω0 far below and √2·2/ω0 at
// the crossover: τ(ω) = 2·(ω0/Q)·(ω0² + ω²)/((ω0² - ω²)² + (ω0·ω/Q)²), derived by hand.
func TestPredictJSON(t *testing.T) {
	design := writeFile(t, "pair.toml", lr4Pair())
	var doc struct {
		Title       string    `json:"title"`
		FrequencyHz []float64 `json:"frequency_hz"`
		Ways        []struct {
			Name, Driver string
			GainDB       []float64 `json:"gain_db"`
			PhaseDeg     []float64 `json:"phase_deg"`
			SPLDB        []float64 `json:"spl_db"`
			SPLPhaseDeg  []float64 `json:"spl_phase_deg"`
		} `json:"ways"`
		Sum struct {
			SPLDB        []float64 `json:"spl_db"`
			SPLPhaseDeg  []float64 `json:"spl_phase_deg"`
			GroupDelayMS []float64 `json:"group_delay_ms"`
		} `json:"sum"`
		Input struct {
			ImpedanceOhm []float64 `json:"impedance_ohm"`
			PhaseDeg     []float64 `json:"phase_deg"`
			EPDROhm      []float64 `json:"epdr_ohm"`
		} `json:"input"`
		Summary struct {
			Crossings []struct {
				Low, High   string
				FrequencyHz float64 `json:"frequency_hz"`
				LevelDB     float64 `json:"level_db"`
				PhaseDeg    float64 `json:"phase_deg"`
			} `json:"crossings"`
			Sum struct {
				RippleDB float64  `json:"ripple_db"`
				Low3DBHz *float64 `json:"low_3db_hz"`
			} `json:"sum"`
		} `json:"summary"`
		Warnings []string `json:"warnings"`
	}
	runJSON(t, &doc, "predict", design, "--at", "10 Hz, 1 kHz, 3 kHz")
	if doc.Title != "Pair" || len(doc.FrequencyHz) != 3 || len(doc.Ways) != 2 || doc.Warnings == nil || len(doc.Warnings) != 0 {
		t.Fatalf("%+v", doc)
	}
	near := func(what string, got, want, tolerance float64) {
		t.Helper()
		if !(math.Abs(got-want) <= tolerance) {
			t.Errorf("%s is %.12g, want %.12g", what, got, want)
		}
	}
	const exact = 1e-9 // dB, degrees, Ω: rounding alone
	for i, w := range doc.Ways {
		if want := []string{"low woofer", "high tweeter"}[i]; w.Name+" "+w.Driver != want {
			t.Errorf("way %d is %s %s, want %s", i, w.Name, w.Driver, want)
		}
		near("gain at the crossover", w.GainDB[1], 20*math.Log10(0.5), exact)
		near("SPL at the crossover", w.SPLDB[1], 88+20*math.Log10(0.5), exact)
		near("phase at the crossover", math.Abs(w.PhaseDeg[1]), 180, exact)
		near("SPL phase at the crossover", math.Abs(w.SPLPhaseDeg[1]), 180, exact)
	}
	for k, f := range doc.FrequencyHz {
		near("sum", doc.Sum.SPLDB[k], 88, exact)
		const w0, q = 2 * math.Pi * 1000, math.Sqrt2 / 2
		w := 2 * math.Pi * f
		delay := 2 * (w0 / q) * (w0*w0 + w*w) / (math.Pow(w0*w0-w*w, 2) + math.Pow(w0*w/q, 2))
		near("delay in ms", doc.Sum.GroupDelayMS[k], 1000*delay, 1e-6) // a central difference
	}
	// At the crossover the two ways' admittances are conjugate: the load is real. It is 2R, as 1/Re(Y) = |H|²/R
	// of each lossless ladder, and |H|² is a quarter.
	near("load", doc.Input.ImpedanceOhm[1], 16, exact)
	near("its angle", doc.Input.PhaseDeg[1], 0, exact)
	near("its EPDR", doc.Input.EPDROhm[1], 16, exact)
	if len(doc.Summary.Crossings) != 1 {
		t.Fatalf("%d crossings", len(doc.Summary.Crossings))
	}
	c := doc.Summary.Crossings[0]
	if c.Low != "low" || c.High != "high" {
		t.Errorf("crossing of %s and %s", c.Low, c.High)
	}
	near("crossing", c.FrequencyHz, 1000, 1e-6)
	near("level there", c.LevelDB, 20*math.Log10(0.5), 1e-8)
	near("phase there", c.PhaseDeg, 0, exact)
	near("ripple", doc.Summary.Sum.RippleDB, 0, exact)
	if doc.Summary.Sum.Low3DBHz != nil {
		t.Errorf("a flat sum is 3 dB down at %g Hz", *doc.Summary.Sum.Low3DBHz)
	}
}

// TestPredictNeverSaysNaN asks for answers that have no number: a level of zero volts, an open load.
func TestPredictNeverSaysNaN(t *testing.T) {
	design := writeFile(t, "off.toml", `
[parts]
P1 = { value = "1 kohm", taper = "linear" }
[tone]
source = "0 ohm"
network = ["P1 from 0 to amp wiper out"]
[control.gain]
part = "P1"
at = 0
`)
	for _, form := range []string{"--json", "--csv"} {
		stdout, stderr, code := run("", "predict", design, "--at", "1kHz", form)
		if code != exitDone || stderr != "" {
			t.Fatalf("exit code %d, %s", code, stderr)
		}
		for _, word := range []string{"NaN", "Inf", "nan", "inf"} {
			if strings.Contains(stdout, word) {
				t.Errorf("%s says %s: %s", form, word, stdout)
			}
		}
		want := `"gain_db":[null]`
		if form == "--csv" {
			want = "\r\n1000,,,1000,0,1000\r\n"
		}
		if !strings.Contains(stdout, want) {
			t.Errorf("%s does not say %s: %s", form, want, stdout)
		}
	}
}

// TestEvenGrid: both ends are there, the steps are equal in log frequency, and there are as many as asked for or
// a few more.
func TestEvenGrid(t *testing.T) {
	for _, c := range []struct {
		name      string
		from, to  float64
		perOctave int
		want      int
	}{
		{"a whole number of octaves", 100, 1600, 12, 4*12 + 1},
		{"10 octaves less a little", 20, 20e3, 24, 241}, // log2(1000) = 9.966; 24 times that is 239.2: 240 steps
		{"less than one step", 1000, 1001, 1, 2},
	} {
		t.Run(c.name, func(t *testing.T) {
			g := gridOptions{from: c.from, to: c.to, perOctave: c.perOctave}
			freqs := g.even()
			if len(freqs) != c.want || freqs[0] != c.from || freqs[len(freqs)-1] != c.to {
				t.Fatalf("%d points from %v to %v", len(freqs), freqs[0], freqs[len(freqs)-1])
			}
			step := freqs[1] / freqs[0]
			if step > math.Exp2(1/float64(c.perOctave))*(1+1e-12) {
				t.Errorf("a step is a factor of %v", step)
			}
			for i := 1; i < len(freqs); i++ {
				if math.Abs(freqs[i]/freqs[i-1]/step-1) > 1e-12 {
					t.Errorf("step %d is a factor of %v, the first is %v", i, freqs[i]/freqs[i-1], step)
				}
			}
		})
	}
}
