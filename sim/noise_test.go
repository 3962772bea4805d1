package sim

import (
	"encoding/json"
	"math"
	"os"
	"os/exec"
	"strings"
	"testing"

	"sixdown/sim/circuit"
	"sixdown/xover"
	"sixdown/xover/tone"
)

// IEC 61672-1, table 3, rounded to 0.1 dB (from memory).
func TestAWeighting(t *testing.T) {
	for f, want := range map[float64]float64{20: -50.5, 31.5: -39.4, 63: -26.2, 100: -19.1, 250: -8.6, 500: -3.2, 1000: 0, 2000: 1.2, 4000: 1.0, 8000: -1.1, 10000: -2.5, 16000: -6.6, 20000: -9.3} {
		// The table is for the exact base-ten frequencies; 31.5, 63 and so on are their names.
		exact := 1000 * math.Pow(10, math.Round(10*math.Log10(f/1000))/10)
		near(t, "A", AWeightingDB(exact), want, 0.06)
	}
}

// The stack and the bridge against SciPy: nodal equations of conductances and susceptances, and for each resistor the voltage that a
// current through it makes at the output.
func TestNoiseAgainstSciPy(t *testing.T) {
	python := "/usr/bin/python3"
	if err := exec.Command(python, "-c", "import scipy.linalg").Run(); err != nil {
		if os.Getenv("CI") != "" {
			t.Fatal("python3-scipy is missing")
		}
		t.Skip("python3-scipy is missing")
	}
	const script = `
import json, sys
import numpy as np
from scipy import linalg
answers = []
for p in json.load(sys.stdin):
    density = []
    for f in p["freqs"]:
        y = np.zeros((p["nodes"], p["nodes"]), complex)
        for kind, a, b, v in p["branches"]:
            g = 1 / v if kind == "R" else 2j * np.pi * f * v
            y[a, a] += g; y[b, b] += g; y[a, b] -= g; y[b, a] -= g
        z = linalg.inv(y[1:, 1:])
        total = 0
        for kind, a, b, v in p["branches"]:
            if kind == "R":
                i = np.zeros(p["nodes"]); i[a] += 1; i[b] -= 1
                total += 4 * 1.380649e-23 * p["kelvin"] / v * abs((z @ i[1:])[p["out"] - 1]) ** 2
        density.append(total)
    answers.append(density)
json.dump(answers, sys.stdout)
`
	type problem struct {
		Freqs    []float64 `json:"freqs"`
		Nodes    int       `json:"nodes"`
		Branches [][4]any  `json:"branches"`
		Out      int       `json:"out"`
		Kelvin   float64   `json:"kelvin"`
	}
	var asked []problem
	var got [][]float64
	for _, k := range []tone.Kind{tone.BassMiddleTreble, tone.BassTreble, tone.Blend} {
		for _, at := range []float64{0.2, 0.5, 0.9} {
			s, _ := template(t, k, func(d *xover.Design) {
				for i := range d.Controls {
					d.Controls[i].At = at
				}
			})
			n, err := s.Noise(293.15)
			if err != nil {
				t.Fatal(err)
			}
			p := problem{Kelvin: 293.15, Nodes: s.net.Nodes, Out: s.outs[0].From}
			var some []float64
			for i := 0; i < len(n.Freqs); i += 60 {
				p.Freqs, some = append(p.Freqs, n.Freqs[i]), append(some, n.Density[i])
			}
			p.Branches = append(p.Branches, [4]any{"R", circuit.Amp, circuit.Return, s.net.Source})
			for _, b := range s.net.Branches {
				p.Branches = append(p.Branches, [4]any{[...]string{"R", "L", "C"}[b.Kind], b.From, b.To, b.Value})
			}
			asked, got = append(asked, p), append(got, some)
		}
	}
	text, err := json.Marshal(asked)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(python, "-c", script)
	cmd.Stdin = strings.NewReader(string(text))
	out, err := cmd.Output()
	if err != nil {
		t.Fatal(err)
	}
	var want [][]float64
	if err := json.Unmarshal(out, &want); err != nil {
		t.Fatal(err)
	}
	for i := range want {
		for j := range want[i] {
			if math.Abs(got[i][j]/want[i][j]-1) > 1e-9 {
				t.Errorf("network %d at %g Hz: %g V²/Hz, SciPy %g", i, asked[i].Freqs[j], got[i][j], want[i][j])
			}
		}
	}
}

// White noise of a plain resistance over the band is 4kTR·(20 kHz - 20 Hz), and A-weighted it is what the weighting leaves of that.
func TestTotalsOfNoise(t *testing.T) {
	s, _ := template(t, tone.LowPass, nil)
	n, err := s.Noise(300)
	if err != nil {
		t.Fatal(err)
	}
	// The source, R1 and the whole of P1's used track into C1 beside the load: 4kT·Re Z at the output, by hand.
	sum := 0.0
	at := func(f float64) float64 {
		r := complex(1e3+4.7e3, 0) // P1 stands at 0
		y := 1/r + 1/complex(1e6, 0) + complex(0, 2*math.Pi*f*2.2e-9)
		return 4 * 1.380649e-23 * 300 * real(1/y)
	}
	const steps = 20000
	for i := range steps {
		f := 20 + (float64(i)+0.5)*(20e3-20)/steps
		sum += at(f) * (20e3 - 20) / steps
	}
	near(t, "flat, as a share", n.Flat/math.Sqrt(sum), 1, 1e-4)
	if !(n.AWeighted > 0.7*n.Flat && n.AWeighted < n.Flat) { // A takes some 2 dB of white noise up to 20 kHz
		t.Errorf("A-weighted %g V of %g", n.AWeighted, n.Flat)
	}
	d := twoMeasured()
	modelled(d)
	d.Drivers[0] = d.Drivers[1]
	d.Drivers[0].Name = "woofer"
	if _, err := mustNew(t, d).Noise(300); err == nil {
		t.Error("a loudspeaker has noise")
	}
}
