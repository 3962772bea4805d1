package circuit_test

import (
	"encoding/json"
	"fmt"
	"math"
	"os"

	"sixdown/sim/circuit"
)

// jsonNetwork is a netlist as testdata/reference.py, testdata/batched.py and testdata/*.json hold it.
type jsonNetwork struct {
	Name        string         `json:"name"`
	Nodes       int            `json:"nodes"`
	Source      float64        `json:"source_ohm"`
	Branches    []jsonBranch   `json:"branches"`
	Couplings   []jsonCoupling `json:"couplings,omitempty"`
	Outputs     []jsonOutput   `json:"outputs"`
	FrequencyHz []float64      `json:"frequency_hz,omitempty"`
	S           [][2]float64   `json:"s,omitempty"` // rad/s, real and imaginary parts
}

type jsonBranch struct {
	Name   string       `json:"name,omitempty"`
	Kind   string       `json:"kind"` // R, L, C or driver
	From   int          `json:"from"`
	To     int          `json:"to"`
	Value  float64      `json:"value"`          // Ω, H or F
	Loss   float64      `json:"loss,omitempty"` // Ω
	Driver *sheetDriver `json:"driver,omitempty"`
}

type jsonCoupling struct {
	A int     `json:"a"`
	B int     `json:"b"`
	K float64 `json:"k"`
}

type jsonOutput struct {
	From int `json:"from"`
	To   int `json:"to"`
}

// A testNetwork is a netlist with what is asked of it.
type testNetwork struct {
	name    string
	netlist circuit.Netlist
	outs    []circuit.Output
}

// toJSON is t for the reference, to be answered at freqs (Hz) and at the points s (rad/s).
// Ports must be sheetDrivers.
func (t *testNetwork) toJSON(freqs []float64, s []complex128) jsonNetwork {
	j := jsonNetwork{Name: t.name, Nodes: t.netlist.Nodes, Source: t.netlist.Source, FrequencyHz: freqs}
	kinds := map[circuit.Kind]string{circuit.Resistor: "R", circuit.Inductor: "L", circuit.Capacitor: "C", circuit.Port: "driver"}
	for _, b := range t.netlist.Branches {
		jb := jsonBranch{Name: b.Name, Kind: kinds[b.Kind], From: b.From, To: b.To, Value: b.Value, Loss: b.Loss}
		if b.Kind == circuit.Port {
			jb.Driver = b.Port.(*sheetDriver)
		}
		j.Branches = append(j.Branches, jb)
	}
	for _, c := range t.netlist.Couplings {
		j.Couplings = append(j.Couplings, jsonCoupling(c))
	}
	for _, o := range t.outs {
		j.Outputs = append(j.Outputs, jsonOutput(o))
	}
	for _, p := range s {
		j.S = append(j.S, [2]float64{real(p), imag(p)})
	}
	return j
}

// network is the netlist that j holds.
func (j *jsonNetwork) network() (*testNetwork, error) {
	t := &testNetwork{name: j.Name, netlist: circuit.Netlist{Nodes: j.Nodes, Source: j.Source}}
	kinds := map[string]circuit.Kind{"R": circuit.Resistor, "L": circuit.Inductor, "C": circuit.Capacitor, "driver": circuit.Port}
	for _, jb := range j.Branches {
		kind, known := kinds[jb.Kind]
		if !known || (kind == circuit.Port) != (jb.Driver != nil) {
			return nil, fmt.Errorf("%s: branch %s: kind is %q; give R, L, C or driver", j.Name, jb.Name, jb.Kind)
		}
		b := circuit.Branch{Name: jb.Name, Kind: kind, From: jb.From, To: jb.To, Value: jb.Value, Loss: jb.Loss}
		if jb.Driver != nil {
			b.Port = jb.Driver
		}
		t.netlist.Branches = append(t.netlist.Branches, b)
	}
	for _, c := range j.Couplings {
		t.netlist.Couplings = append(t.netlist.Couplings, circuit.Coupling(c))
	}
	for _, o := range j.Outputs {
		t.outs = append(t.outs, circuit.Output(o))
	}
	return t, nil
}

// loadThreeWay reads the invented three-way of 38 branches that the derivatives and the benchmarks use.
func loadThreeWay() (*testNetwork, error) {
	text, err := os.ReadFile("../../testdata/three-way-38.json")
	if err != nil {
		return nil, err
	}
	var j jsonNetwork
	if err := json.Unmarshal(text, &j); err != nil {
		return nil, fmt.Errorf("three-way-38.json: %w", err)
	}
	return j.network()
}

// logSpaced is n frequencies from lo to hi, both included, evenly spaced in their logarithm.
func logSpaced(lo, hi float64, n int) []float64 {
	f := make([]float64, n)
	for i := range f {
		f[i] = lo * math.Pow(hi/lo, float64(i)/float64(n-1))
	}
	return f
}
