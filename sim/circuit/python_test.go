package circuit_test

import (
	"bytes"
	"encoding/json"
	"os"
	"os/exec"
	"testing"
)

// A jsonRequest is what testdata/reference.py reads.
type jsonRequest struct {
	Networks   []jsonNetwork   `json:"networks,omitempty"`
	Alignments []jsonAlignment `json:"alignments,omitempty"`
}

// jsonAlignment asks scipy.signal for an analogue filter.
type jsonAlignment struct {
	Shape       string    `json:"shape"` // butterworth, linkwitz-riley, bessel or chebyshev
	Order       int       `json:"order"` // poles
	Norm        string    `json:"norm,omitempty"`
	RippleDB    float64   `json:"ripple_db,omitempty"`
	HighPass    bool      `json:"high_pass"`
	Hz          float64   `json:"hz"`
	FrequencyHz []float64 `json:"frequency_hz"`
}

// A jsonReply is what testdata/reference.py writes.
type jsonReply struct {
	ExtendedEps float64         `json:"extended_eps"`
	Networks    []jsonSolution  `json:"networks"`
	Alignments  []jsonAlignedTo `json:"alignments"`
}

// A jsonSolution is all about one network; the outer index of a table is the output, the branch or the node, the inner
// one the frequency. The senses are defined at the head of reference.py.
type jsonSolution struct {
	Gain               [][]jsonComplex `json:"gain"`
	GainSense          [][]float64     `json:"gain_sense"`
	Amp                []jsonComplex   `json:"amp"`
	Zin                []jsonComplex   `json:"zin"`
	ZinSense           []float64       `json:"zin_sense"`
	BranchVoltage      [][]jsonComplex `json:"branch_voltage"`
	BranchVoltageSense [][]float64     `json:"branch_voltage_sense"`
	BranchCurrent      [][]jsonComplex `json:"branch_current"`
	BranchCurrentSense [][]float64     `json:"branch_current_sense"`
	NodeMagnitude      [][]float64     `json:"node_magnitude"`
	Condition          []float64       `json:"condition"`
	Doubt              float64         `json:"doubt"` // relative, of gains and Zin: the last step of refinement
	At                 struct {
		Gain [][]jsonComplex `json:"gain"`
		Amp  []jsonComplex   `json:"amp"`
		Zin  []jsonComplex   `json:"zin"`
	} `json:"at"`
}

// gainsAndZin is the gains of all outputs at frequency f, then the input impedance.
func (r *jsonSolution) gainsAndZin(f int) []complex128 {
	var list []complex128
	for _, g := range r.Gain {
		list = append(list, g[f].value())
	}
	return append(list, r.Zin[f].value())
}

// jsonAlignedTo is what scipy.signal makes of a jsonAlignment.
type jsonAlignedTo struct {
	Denominator      []float64     `json:"denominator"` // highest power first, 1 at the end
	Gain             []jsonComplex `json:"gain"`
	GainByPolynomial []jsonComplex `json:"gain_by_polynomial"`
}

type jsonComplex [2]float64

func (c jsonComplex) value() complex128 { return complex(c[0], c[1]) }

// askReference has testdata/reference.py answer request. Without an interpreter that has scipy the test is skipped,
// but in a continuous-integration run (CI set) it fails: there the second opinion is not optional.
func askReference(t *testing.T, request jsonRequest) *jsonReply {
	t.Helper()
	python := ""
	for _, name := range []string{"python3", "/usr/bin/python3"} {
		if exec.Command(name, "-c", "import numpy, scipy").Run() == nil {
			python = name
			break
		}
	}
	if python == "" {
		skipUnlessCI(t, "no python3 that can import numpy and scipy; install python3-scipy")
	}
	text, err := json.Marshal(request)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(python, "../../testdata/reference.py")
	cmd.Stdin = bytes.NewReader(text)
	var out, complaint bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &complaint
	if err := cmd.Run(); err != nil {
		t.Fatalf("reference.py: %v\n%s", err, complaint.String())
	}
	reply := new(jsonReply)
	if err := json.Unmarshal(out.Bytes(), reply); err != nil {
		t.Fatalf("reference.py: %v", err)
	}
	if len(reply.Networks) != len(request.Networks) || len(reply.Alignments) != len(request.Alignments) {
		t.Fatalf("reference.py answered %d networks and %d alignments of %d and %d",
			len(reply.Networks), len(reply.Alignments), len(request.Networks), len(request.Alignments))
	}
	if len(request.Networks) > 0 && reply.ExtendedEps > 1e-18 {
		skipUnlessCI(t, "numpy has no extended precision on this machine, so the reference is no better than what it checks")
	}
	return reply
}

// skipUnlessCI skips the test for the want of something outside this project.
func skipUnlessCI(t *testing.T, why string) {
	t.Helper()
	if os.Getenv("CI") != "" {
		t.Fatal(why)
	}
	t.Skip(why)
}
