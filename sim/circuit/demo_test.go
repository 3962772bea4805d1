package circuit_test

import (
	"math/cmplx"
	"os"
	"testing"

	"sixdown/sim"
	"sixdown/sim/circuit"
	"sixdown/xover"
)

// TestDemoAgainstReference holds whole designs, from the file on, against testdata/reference.py: the built-in example and
// the three-way. The reference gets the drivers as their equivalent circuits, the solver as impedances.
func TestDemoAgainstReference(t *testing.T) {
	freqs := logSpaced(10, 40e3, 120)
	var request jsonRequest
	var systems []*sim.System
	for _, path := range []string{"../../cmd/sixdown/internal/demo/harbour.toml", "../../audioio/testdata/breakwater.toml"} {
		src, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		d, _, err := xover.Parse(path, src)
		if err != nil {
			t.Fatal(err)
		}
		sys, err := sim.New(d, nil)
		if err != nil {
			t.Fatal(err)
		}
		n := testNetwork{name: d.Title, netlist: *expanded(sys.Netlist()), outs: sys.Outputs()}
		request.Networks = append(request.Networks, n.toJSON(freqs, nil))
		systems = append(systems, sys)
	}
	reply := askReference(t, request)
	for i, sys := range systems {
		r, err := sys.Predict(freqs)
		if err != nil {
			t.Fatal(err)
		}
		worst := 0.0
		compare := func(got complex128, want jsonComplex) {
			worst = max(worst, cmplx.Abs(got-want.value())/cmplx.Abs(want.value()))
		}
		for k := range freqs {
			for w := range r.Ways {
				compare(r.Ways[w].H[k], reply.Networks[i].Gain[w][k])
			}
			compare(r.Zin[k], reply.Networks[i].Zin[k])
			compare(r.Amp[k], reply.Networks[i].Amp[k])
		}
		t.Logf("%s: worst relative error %.1e", sys.Title(), worst)
		if !(worst <= agreement) {
			t.Errorf("%s: worst relative error %.1e, limit %.1e", sys.Title(), worst, agreement)
		}
	}
}

// expanded is the netlist, one without couplings, with its one-ports as their equivalent circuits.
func expanded(n *circuit.Netlist) *circuit.Netlist {
	e := &circuit.Netlist{Nodes: n.Nodes, Source: n.Source}
	for _, b := range n.Branches {
		if b.Kind != circuit.Port {
			e.Branches = append(e.Branches, b)
			continue
		}
		inner := map[int]int{1: b.From, 0: b.To}
		node := func(k int) int {
			if _, ok := inner[k]; !ok {
				inner[k] = e.Nodes
				e.Nodes++
			}
			return inner[k]
		}
		for _, x := range b.Port.Branches() {
			x.From, x.To = node(x.From), node(x.To)
			e.Branches = append(e.Branches, x)
		}
	}
	return e
}
