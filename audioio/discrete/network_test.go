package discrete_test

import (
	"bytes"
	"encoding/json"
	"math"
	"math/cmplx"
	"os"
	"os/exec"
	"testing"

	"sixdown/sim/circuit"
)

// A bench is a network under construction, with what is asked of it.
type bench struct {
	n    circuit.Netlist
	outs []circuit.Output
}

func newBench(source float64) *bench {
	return &bench{n: circuit.Netlist{Nodes: 2, Source: source}}
}

func (b *bench) node() int {
	b.n.Nodes++
	return b.n.Nodes - 1
}

func (b *bench) add(kind circuit.Kind, from, to int, value, loss float64) {
	b.n.Branches = append(b.n.Branches, circuit.Branch{Name: "part", Kind: kind, From: from, To: to, Value: value, Loss: loss})
}

func (b *bench) resistor(from, to int, ohm float64)    { b.add(circuit.Resistor, from, to, ohm, 0) }
func (b *bench) coil(from, to int, henry, dcr float64) { b.add(circuit.Inductor, from, to, henry, dcr) }
func (b *bench) capacitor(from, to int, farad, esr float64) {
	b.add(circuit.Capacitor, from, to, farad, esr)
}
func (b *bench) output(from int) {
	b.outs = append(b.outs, circuit.Output{From: from, To: circuit.Return})
}

func (b *bench) stateSpace(t testing.TB) *circuit.StateSpace {
	t.Helper()
	ss, err := circuit.NewStateSpace(&b.n, b.outs)
	if err != nil {
		t.Fatal(err)
	}
	return ss
}

// driver adds a moving-coil driver from hot to the return: Re + Le, a lossy coil, and its resonance, by
// R. H. Small, "Direct-Radiator Loudspeaker System Analysis", JAES 20(5), 1972.
func (b *bench) driver(hot int, re, le, r2, l2, fs, qms, qes float64) {
	w := 2 * math.Pi * fs
	coil, motion := b.node(), b.node()
	b.coil(hot, coil, le, re)
	b.resistor(coil, motion, r2)
	b.coil(coil, motion, l2, 0)
	b.resistor(motion, circuit.Return, re*qms/qes)
	b.capacitor(motion, circuit.Return, qes/(w*re), 0)
	b.coil(motion, circuit.Return, re/(w*qes), 0)
}

// threeWay is an invented three-way of 29 states with lossy parts, drivers and conditioning networks; its outputs
// are the amplifier's terminal and the three drivers.
func threeWay() *bench {
	const amp, ret = circuit.Amp, circuit.Return
	b := newBench(0.05)
	b.output(amp)

	l1, l2, zobel := b.node(), b.node(), b.node()
	b.coil(amp, l1, 5.1e-3, 0.3)
	b.capacitor(l1, ret, 120e-6, 0.02)
	b.coil(l1, l2, 2.3e-3, 0.2)
	b.capacitor(l2, ret, 33e-6, 0.02)
	b.resistor(l2, zobel, 7)
	b.capacitor(zobel, ret, 30e-6, 0.05)
	b.driver(l2, 6, 0.4e-3, 8, 1.2e-3, 38, 4, 0.4)
	b.output(l2)

	m1, m2, m3, m4 := b.node(), b.node(), b.node(), b.node()
	b.capacitor(amp, m1, 47e-6, 0.02)
	b.coil(m1, ret, 2.2e-3, 0.2)
	b.capacitor(m1, m2, 100e-6, 0.02)
	b.coil(m2, ret, 6e-3, 0.4)
	b.coil(m2, m3, 0.55e-3, 0.1)
	b.capacitor(m3, ret, 10e-6, 0.01)
	b.resistor(m3, m4, 1.2)
	b.driver(m4, 5.5, 0.1e-3, 4, 0.3e-3, 110, 3, 0.5)
	b.output(m4)

	h1, h2, h3, trap1, trap2 := b.node(), b.node(), b.node(), b.node(), b.node()
	b.capacitor(amp, h1, 5.6e-6, 0.01)
	b.coil(h1, ret, 0.29e-3, 0.1)
	b.capacitor(h1, h2, 12e-6, 0.01)
	b.coil(h2, ret, 0.8e-3, 0.15)
	b.resistor(h2, h3, 2)
	b.resistor(h3, ret, 10)
	b.resistor(h3, trap1, 5)
	b.coil(trap1, trap2, 2e-3, 0.3)
	b.capacitor(trap2, ret, 20e-6, 0.02)
	b.driver(h3, 5.4, 0.03e-3, 1, 0.02e-3, 850, 3.1, 1.2)
	b.output(h3)
	return b
}

// rcLowPass is 1/(1 + jf/corner), and beside it its complement across the resistor.
func rcLowPass(corner float64) *bench {
	b := newBench(0)
	out := b.node()
	b.resistor(circuit.Amp, out, 1000)
	b.capacitor(out, circuit.Return, 1/(2*math.Pi*corner*1000), 0)
	b.output(out)
	b.outs = append(b.outs, circuit.Output{From: circuit.Amp, To: out})
	return b
}

// linkwitzRiley4 is a low-pass ladder into 8 Ω whose poles are all double: a squared second-order Butterworth (S. H. Linkwitz,
// JAES 24(1), 1976), by the continued fraction of (s² + √2 s + 1)².
func linkwitzRiley4(corner float64) *bench {
	w := 2 * math.Pi * corner
	b := newBench(0)
	mid, out := b.node(), b.node()
	b.coil(circuit.Amp, mid, 8/w*4*math.Sqrt2/3, 0)
	b.capacitor(mid, circuit.Return, 9*math.Sqrt2/8/(8*w), 0)
	b.coil(mid, out, 8/w*2*math.Sqrt2/3, 0)
	b.capacitor(out, circuit.Return, math.Sqrt2/4/(8*w), 0)
	b.resistor(out, circuit.Return, 8)
	b.output(out)
	return b
}

// decibels and degrees of a ratio.
func decibels(z complex128) float64 { return 20 * math.Log10(cmplx.Abs(z)) }
func degrees(z complex128) float64  { return cmplx.Phase(z) * 180 / math.Pi }

// buffers are count slices of n samples.
func buffers(count, n int) [][]float64 {
	b := make([][]float64, count)
	for i := range b {
		b[i] = make([]float64, n)
	}
	return b
}

// steadyGain feeds a sine of f Hz to a stepper for settle seconds and then correlates over whole periods: the complex gain of
// each output, by the definition of the steady state. rate·seconds·f must come out whole.
func steadyGain(process func(dst [][]float64, u []float64), outputs int, rate, f, settle, seconds float64) []complex128 {
	from := int(settle * rate)
	n := from + int(seconds*rate)
	u := make([]float64, n)
	for i := range u {
		u[i] = math.Sin(2 * math.Pi * math.Mod(f*float64(i)/rate, 1))
	}
	dst := buffers(outputs, n)
	process(dst, u)
	gain := make([]complex128, outputs)
	for k, y := range dst {
		sum := complex(0, 0)
		for i := from; i < n; i++ {
			sum += complex(y[i], 0) * cmplx.Rect(1, -2*math.Pi*math.Mod(f*float64(i)/rate, 1))
		}
		gain[k] = sum * complex(0, 2) / complex(float64(n-from), 0)
	}
	return gain
}

// askSciPy runs a Python script that reads request from standard input as JSON and writes reply. Without an interpreter that has
// scipy the test is skipped, but where CI is set it fails: there the second opinion is not optional.
func askSciPy(t *testing.T, script string, request, reply any) {
	t.Helper()
	python := ""
	for _, name := range []string{"python3", "/usr/bin/python3"} {
		if exec.Command(name, "-c", "import numpy, scipy.signal").Run() == nil {
			python = name
			break
		}
	}
	if python == "" {
		if os.Getenv("CI") != "" {
			t.Fatal("no python3 that can import scipy; install python3-scipy")
		}
		t.Skip("no python3 that can import scipy; install python3-scipy")
	}
	text, err := json.Marshal(request)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(python, "-c", script)
	cmd.Stdin = bytes.NewReader(text)
	var complaint bytes.Buffer
	cmd.Stderr = &complaint
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("python: %v\n%s", err, complaint.String())
	}
	if err := json.Unmarshal(out, reply); err != nil {
		t.Fatalf("python: %v", err)
	}
}
