package driver

import (
	"bytes"
	"encoding/json"
	"math"
	"os"
	"os/exec"
	"testing"
)

// A magnitude is what testdata/minimumphase.py takes: Gaussian bumps in log frequency and a high-pass.
type magnitude struct {
	Bumps  [][3]float64 `json:"bumps"` // dB, Hz, octaves
	Order  float64      `json:"order"`
	Corner float64      `json:"corner"` // Hz
	Hz     []float64    `json:"hz"`
}

// at returns |H|.
func (m *magnitude) at(f float64) complex128 {
	db := -10 * m.Order * math.Log10(1+m.Corner*m.Corner/(f*f))
	for _, b := range m.Bumps {
		u := math.Log2(f/b[1]) / b[2]
		db += b[0] * math.Exp(-u*u/2)
	}
	return complex(math.Pow(10, db/20), 0)
}

// askPhase returns the minimum phase in degrees by SciPy's quadrature and by its Hilbert transform, the latter of the
// bumps alone. Without an interpreter that has SciPy the test is skipped, but in a continuous-integration run (CI set)
// it fails.
func askPhase(t *testing.T, m magnitude) (bode, hilbert []float64) {
	t.Helper()
	python := ""
	for _, name := range []string{"python3", "/usr/bin/python3"} {
		if exec.Command(name, "-c", "import numpy, scipy").Run() == nil {
			python = name
			break
		}
	}
	if python == "" {
		if os.Getenv("CI") != "" {
			t.Fatal("there is no python3 that can import scipy; install python3-scipy")
		}
		t.Skip("there is no python3 that can import scipy")
	}
	text, err := json.Marshal(m)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(python, "../../testdata/minimumphase.py")
	cmd.Stdin = bytes.NewReader(text)
	var out, complaint bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &complaint
	if err := cmd.Run(); err != nil {
		t.Fatalf("minimumphase.py: %v\n%s", err, complaint.String())
	}
	var answer struct{ Bode, Hilbert []float64 }
	if err := json.Unmarshal(out.Bytes(), &answer); err != nil {
		t.Fatalf("minimumphase.py: %v", err)
	}
	if len(answer.Bode) != len(m.Hz) || len(answer.Hilbert) != len(m.Hz) {
		t.Fatalf("minimumphase.py gave %d and %d angles for %d frequencies", len(answer.Bode), len(answer.Hilbert), len(m.Hz))
	}
	return answer.Bode, answer.Hilbert
}

// SciPy has two roads to the phase of levels that no network has: peaks, a dip and a skirt of 9 dB an octave. The bumps end
// far from the table's ends, where the fit of the skirts is for networks. What is left is Akima's curve between 400 rows
// and a little of that fit: 0.05°.
func TestMinimumPhaseAgreesWithScipy(t *testing.T) {
	hz := grid(40, 10e3, 60)
	for name, m := range map[string]magnitude{
		"one bump":          {Bumps: [][3]float64{{6, 1000, 0.5}}, Corner: 100, Hz: hz},
		"peaks and a dip":   {Bumps: [][3]float64{{8, 300, 0.3}, {-10, 1000, 0.25}, {5, 3000, 0.4}}, Corner: 100, Hz: hz},
		"9 dB an octave":    {Order: 1.5, Corner: 100, Hz: hz},
		"bump on the skirt": {Bumps: [][3]float64{{4, 300, 0.4}}, Order: 2.5, Corner: 150, Hz: hz},
	} {
		bode, hilbert := askPhase(t, m)
		r := mustMinimum(t, levelFile(grid(20, 20e3, 400), m.at))
		for i, f := range hz {
			_, rad := r.phase.polar(f)
			got := rad * 180 / math.Pi
			if math.Abs(got-bode[i]) > 0.05 {
				t.Errorf("%s at %.1f Hz: %.4f°, by quadrature %.4f°", name, f, got, bode[i])
			}
			// A linear grid of 0.5 Hz to 500 kHz cuts the transform off; it repeats itself there.
			if m.Order == 0 && math.Abs(got-hilbert[i]) > 0.06 {
				t.Errorf("%s at %.1f Hz: %.4f°, by Hilbert's transform %.4f°", name, f, got, hilbert[i])
			}
		}
	}
}
