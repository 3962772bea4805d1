package discrete_test

import (
	"fmt"
	"math"

	"sixdown/audioio/discrete"
	"sixdown/sim/circuit"
)

// A resistor and a capacitor with a corner at 1 kHz: half the power, and an eighth of a turn late, at the corner.
func ExampleNewMatched() {
	n := &circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
		{Name: "R1", Kind: circuit.Resistor, From: circuit.Amp, To: 2, Value: 1000},
		{Name: "C1", Kind: circuit.Capacitor, From: 2, To: circuit.Return, Value: 1 / (2 * math.Pi * 1000 * 1000)},
	}}
	ss, err := circuit.NewStateSpace(n, []circuit.Output{{From: 2, To: circuit.Return}})
	if err != nil {
		fmt.Println(err)
		return
	}
	m, err := discrete.NewMatched(ss, 48000, discrete.Settings{})
	if err != nil {
		fmt.Println(err)
		return
	}
	gain := make([]complex128, 1)
	m.Gain(gain, 1000)
	fmt.Printf("%.2f dB, %.1f degrees\n", decibels(gain[0]), degrees(gain[0]))
	// Output: -3.01 dB, -45.0 degrees
}

// A tone through the same at 10 kHz, stepped so that the steady state at 10 kHz is exact: 1/(1 + 10j), -20.04 dB.
func ExampleNewTrapezoid() {
	n := &circuit.Netlist{Nodes: 3, Branches: []circuit.Branch{
		{Name: "R1", Kind: circuit.Resistor, From: circuit.Amp, To: 2, Value: 1000},
		{Name: "C1", Kind: circuit.Capacitor, From: 2, To: circuit.Return, Value: 1 / (2 * math.Pi * 1000 * 1000)},
	}}
	ss, err := circuit.NewStateSpace(n, []circuit.Output{{From: 2, To: circuit.Return}})
	if err != nil {
		fmt.Println(err)
		return
	}
	z, err := discrete.NewTrapezoid(ss, 48000, 10000)
	if err != nil {
		fmt.Println(err)
		return
	}
	u := make([]float64, 480) // 10 ms, more than 60 time constants
	for i := range u {
		u[i] = math.Sin(2 * math.Pi * 10000 * float64(i) / 48000)
	}
	y := [][]float64{make([]float64, len(u))}
	z.Process(y, u)
	sum := 0.0
	for _, v := range y[0][240:] { // whole periods
		sum += v * v
	}
	fmt.Printf("%.2f dB\n", 10*math.Log10(sum/240/0.5))
	// Output: -20.04 dB
}
