package sim

import (
	"slices"
	"strings"
	"testing"

	"sixdown/sim/circuit"
	"sixdown/xover"
)

// branchText writes branches and the nodes they lie between, as one would read them aloud.
func branchText(n *circuit.Netlist) []string {
	var out []string
	for _, b := range n.Branches {
		out = append(out, b.Name+": "+n.NodeNames[b.From]+" - "+n.NodeNames[b.To])
	}
	return out
}

// The arrangement language, step by step; what is wanted is read off the language's definition.
func TestFlatten(t *testing.T) {
	parts := []xover.Part{
		coil("L1", 1e-3, 0.3), coil("L2", 2e-3, 0.4), capacitor("C1", 1e-6, 0.01), capacitor("C2", 2e-6, 0),
		resistor("R1", 1), resistor("R2", 2),
	}
	drivers := []xover.Driver{plainDriver("woofer", 8, 90), plainDriver("tweeter", 6, 90)}
	low := func(steps ...xover.Step) []xover.Way {
		return []xover.Way{{Name: "low", Driver: "woofer", Network: steps}}
	}
	for name, tt := range map[string]struct {
		ways []xover.Way
		want []string
		outs []circuit.Output
	}{
		"nothing": {low(), []string{"woofer: amp - 0"}, []circuit.Output{{From: 1, To: 0}}},
		"ladder": {
			low(series(leaf("L1")), shunt(leaf("C1")), series(leaf("L2")), shunt(inSeries("R1", "C2"))),
			[]string{"L1: amp - low.1", "C1: low.1 - 0", "L2: low.1 - low.2", "R1: low.2 - low.2 behind R1", "C2: low.2 behind R1 - 0", "woofer: low.2 - 0"},
			[]circuit.Output{{From: 3, To: 0}},
		},
		"trap": {
			low(series(inParallel("L1", "C1", "R1"))),
			[]string{"L1: amp - low.1", "C1: amp - low.1", "R1: amp - low.1", "woofer: low.1 - 0"},
			[]circuit.Output{{From: 2, To: 0}},
		},
		"brackets": {
			low(series(&xover.Expr{Op: xover.InParallel, Args: []*xover.Expr{inSeries("L1", "R1"), leaf("C1")}})),
			[]string{"L1: amp - amp behind L1", "R1: amp behind L1 - low.1", "C1: amp - low.1", "woofer: low.1 - 0"},
			[]circuit.Output{{From: 2, To: 0}},
		},
		"mark, bridge, driver elsewhere, reversed": {
			[]xover.Way{{Name: "low", Driver: "woofer", Reversed: true, Network: []xover.Step{
				series(leaf("L1")), mark("a"), series(leaf("L2")), mark("b"), between(leaf("C1"), "amp", "b"), between(leaf("R1"), "b", "0"),
				{Op: xover.DriverPlace, From: "b", To: "a"},
			}}},
			[]string{"L1: amp - low.a", "L2: low.a - low.b", "C1: amp - low.b", "R1: low.b - 0", "woofer: low.b - low.a"},
			[]circuit.Output{{From: 2, To: 3}},
		},
		"series crossover, a node of another way, named before that way": {
			[]xover.Way{
				{Name: "low", Driver: "woofer", Network: []xover.Step{
					between(leaf("C1"), "amp", "high.mid"), {Op: xover.DriverPlace, From: "amp", To: "high.mid"},
				}},
				{Name: "high", Driver: "tweeter", Network: []xover.Step{
					between(leaf("L1"), "mid", "0"), {Op: xover.DriverPlace, From: "mid", To: "0"},
				}},
			},
			[]string{"C1: amp - high.mid", "woofer: amp - high.mid", "L1: high.mid - 0", "tweeter: high.mid - 0"},
			[]circuit.Output{{From: 1, To: 2}, {From: 2, To: 0}},
		},
		"a mark at the amplifier": {
			low(mark("in"), series(leaf("L1")), between(leaf("R1"), "in", "0")),
			[]string{"L1: amp - low.1", "R1: amp - 0", "woofer: low.1 - 0"},
			[]circuit.Output{{From: 2, To: 0}},
		},
	} {
		s, err := New(&xover.Design{Parts: parts, Drivers: drivers, Ways: tt.ways}, nil)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if got := branchText(s.Netlist()); !slices.Equal(got, tt.want) {
			t.Errorf("%s: got\n%s\nwant\n%s", name, strings.Join(got, "\n"), strings.Join(tt.want, "\n"))
		}
		if !slices.Equal(s.Outputs(), tt.outs) {
			t.Errorf("%s: got outputs %v, want %v", name, s.Outputs(), tt.outs)
		}
	}
}

func TestFlattenValues(t *testing.T) {
	follows := coil("L2", 0, 0.5)
	follows.Same = "L1"
	d := &xover.Design{
		Drive:   xover.Drive{Level: 2.83, Source: 0.05},
		Parts:   []xover.Part{coil("L1", 1e-3, 0.3), follows, capacitor("C1", 1e-6, 0.01), resistor("R1", 3)},
		Drivers: []xover.Driver{plainDriver("woofer", 8, 90), plainDriver("tweeter", 6, 90)},
		Ways: []xover.Way{
			{Name: "low", Driver: "woofer", Network: []xover.Step{series(leaf("L1")), {Op: xover.Couple, A: "L1", B: "L2", K: -0.02}}},
			{Name: "high", Driver: "tweeter", Network: []xover.Step{series(leaf("C1")), shunt(leaf("L2")), series(leaf("R1"))}},
		},
	}
	s := mustNew(t, d)
	n := s.Netlist()
	if n.Source != 0.05 {
		t.Errorf("source is %g Ω, want 0.05 Ω", n.Source)
	}
	for part, want := range map[string]circuit.Branch{
		"L1": {Kind: circuit.Inductor, Value: 1e-3, Loss: 0.3},
		"L2": {Kind: circuit.Inductor, Value: 1e-3, Loss: 0.5},
		"C1": {Kind: circuit.Capacitor, Value: 1e-6, Loss: 0.01},
		"R1": {Kind: circuit.Resistor, Value: 3},
	} {
		bs := s.PartBranches(part)
		if len(bs) != 1 {
			t.Errorf("%s: %d branches, want 1", part, len(bs))
			continue
		}
		b := n.Branches[bs[0]]
		if b.Name != part || b.Kind != want.Kind || b.Value != want.Value || b.Loss != want.Loss {
			t.Errorf("%s: got %+v, want %+v", part, b, want)
		}
	}
	want := []circuit.Coupling{{A: s.PartBranches("L1")[0], B: s.PartBranches("L2")[0], K: -0.02}}
	if !slices.Equal(n.Couplings, want) {
		t.Errorf("couplings: got %v, want %v", n.Couplings, want)
	}
	if got := n.Branches[s.DriverBranches(1)[0]].Name; got != "tweeter" {
		t.Errorf("the second way's driver branch is called %q", got)
	}
	if !slices.Equal(s.Names(), []string{"low", "high"}) {
		t.Errorf("names are %q", s.Names())
	}
	if s.PartBranches("X") != nil {
		t.Error("a part that is not there has branches")
	}
	n.Branches[0].Value = 99
	if s.Netlist().Branches[0].Value == 99 {
		t.Error("Netlist gave away the system's own branches")
	}
}

func TestNewErrors(t *testing.T) {
	base := func() *xover.Design {
		return &xover.Design{
			Parts:   []xover.Part{coil("L1", 1e-3, 0.3), coil("L2", 1e-3, 0), resistor("R1", 1), pot("P1", 100)},
			Drivers: []xover.Driver{plainDriver("woofer", 8, 90)},
			Ways:    []xover.Way{{Name: "low", Driver: "woofer"}},
		}
	}
	steps := func(st ...xover.Step) func(*xover.Design) {
		return func(d *xover.Design) { d.Ways[0].Network = st }
	}
	drv := func(change func(*xover.Driver)) func(*xover.Design) {
		return func(d *xover.Design) { change(&d.Drivers[0]) }
	}
	loop := func(d *xover.Design) {
		d.Parts[0].Same, d.Parts[1].Same = "L2", "L1"
		d.Ways[0].Network = []xover.Step{series(leaf("L1"))}
	}
	for name, tt := range map[string]struct {
		change func(*xover.Design)
		want   string
	}{
		"nothing to do":    {func(d *xover.Design) { d.Ways = nil }, `design: it has neither ways nor a tone network; give one`},
		"both":             {func(d *xover.Design) { d.Tone = &xover.Tone{} }, `design: it has both ways and a tone network; make two designs of it`},
		"no driver":        {func(d *xover.Design) { d.Ways[0].Driver = "tweeter" }, `way "low": driver "tweeter" is not defined; define it under [driver.tweeter]`},
		"no part":          {steps(series(leaf("L9"))), `way "low": part "L9" is not defined; define it under [parts]`},
		"no expression":    {steps(series(nil)), `way "low": a step names no part; name one`},
		"bad operation":    {steps(xover.Step{Op: 99}), `way "low": step 1 has the unknown operation 99; use those of package xover`},
		"bad expression":   {steps(series(&xover.Expr{Op: 99})), `way "low": an expression has the unknown operation 99; use those of package xover`},
		"mark twice":       {steps(mark("a"), mark("a")), `way "low": mark a: the name is given twice; choose another`},
		"values in a ring": {loop, `part "L1": it follows "L2", which leads nowhere; name a part that has a value`},
		"couple a resistor": {steps(series(leaf("L1")), shunt(leaf("R1")), xover.Step{Op: xover.Couple, A: "L1", B: "R1", K: 0.1}),
			`way "low": couple L1 R1: R1 is no coil that is placed just once; couple two such coils`},
		"couple an absent coil": {steps(series(leaf("L1")), xover.Step{Op: xover.Couple, A: "L1", B: "L2", K: 0.1}),
			`way "low": couple L1 L2: L2 is no coil that is placed just once; couple two such coils`},
		"wiper of a resistor": {steps(series(leaf("L1")), mark("a"), xover.Step{Op: xover.Between, Expr: leaf("R1"), From: "a", To: "0", Wiper: "b"}),
			`way "low": R1 has a wiper but is no potentiometer; give it a taper`},
		"wiper of two": {steps(series(leaf("L1")), mark("a"), xover.Step{Op: xover.Between, Expr: inSeries("P1", "R1"), From: "a", To: "0", Wiper: "b"}),
			`way "low": a wiper is named for more than one part; name it for a potentiometer alone`},
		"no impedance":     {drv(func(d *xover.Driver) { d.Resistance = 0 }), `driver "woofer": nothing is said of its impedance; give impedance or re`},
		"half a resonance": {drv(func(d *xover.Driver) { d.Fs = 40 }), `driver "woofer": fs is given without qms or qes; give all three`},
		"half a box": {drv(func(d *xover.Driver) { d.Fs, d.Qms, d.Qes, d.Box.Kind = 40, 3, 0.4, xover.ClosedBox }),
			`driver "woofer": a closed box needs vas and the box's volume; give both`},
		"vented box": {drv(func(d *xover.Driver) { d.Fs, d.Qms, d.Qes, d.Box.Kind = 40, 3, 0.4, xover.VentedBox }),
			`driver "woofer": a vented box needs vas, the box's volume and its tuning; give all three`},
		"fs without re": {drv(func(d *xover.Driver) { d.Fs, d.Qms, d.Qes = 40, 3, 0.4 }), `driver "woofer": fs is given without re; give re too`},
		"no out": {func(d *xover.Design) { d.Ways, d.Tone = nil, &xover.Tone{Network: []xover.Step{series(leaf("R1"))}} },
			`tone network: no node is called out; add "mark out" where the load is connected`},
		"in the ear": {drv(func(d *xover.Driver) { d.At = [3]float64{0, 0, 1} }), `driver "woofer": it stands where the ear is; move one of them`},
		"in the microphone": {drv(func(d *xover.Driver) { d.ResponseFile, d.HasMic = "w.frd", true }),
			`driver "woofer": its microphone stands at its acoustic centre; correct mic or at`},
		"no opener": {drv(func(d *xover.Driver) { d.ResponseFile = "w.frd" }), `driver "woofer": w.frd: there is no way to open files here; give a way`},
	} {
		d := base()
		tt.change(d)
		s, err := New(d, nil)
		if err == nil || err.Error() != tt.want {
			t.Errorf("%s: got error %v, want %s", name, err, tt.want)
		}
		if s != nil {
			t.Errorf("%s: a system came with the error", name)
		}
	}
	d := base()
	d.Drivers[0].ImpedanceFile, d.Drivers[0].Resistance = "bad.zma", 0
	for src, want := range map[string]string{
		"20 8 0\n30 x 0":         `driver "woofer": bad.zma:2: column 2 is "x", which is no number; give a number such as 6.25`,
		"20 0 0\n30 8 0\n40 8 0": `driver "woofer": bad.zma:1: the impedance is 0 ohm; give its magnitude in ohm, above 0`,
	} {
		if _, err := New(d, files(map[string]string{"bad.zma": src})); err == nil || err.Error() != want {
			t.Errorf("got error %v, want %s", err, want)
		}
	}
	if _, err := New(d, files(nil)); err == nil || !strings.HasPrefix(err.Error(), `driver "woofer": open bad.zma: `) {
		t.Errorf("a missing file: got error %v", err)
	}
	// A node that only one part touches and that nothing drives is the circuit's to refuse.
	d = base()
	d.Ways[0].Network = []xover.Step{between(leaf("R1"), "x", "y")}
	if _, err := New(d, nil); err == nil {
		t.Error("a part between two nodes that nothing drives was accepted")
	}
}
