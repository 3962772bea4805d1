package xover

import "testing"

// TestStepText writes arrangements out; the texts are the grammar of the package comment, applied by hand.
func TestStepText(t *testing.T) {
	a, b, c := leaf("A"), leaf("B"), leaf("C")
	pot := between(leaf("P1"), "a", "0")
	pot.Wiper = "b"
	for _, test := range []struct {
		step Step
		want string
	}{
		{series(a), "series A"},
		{shunt(inSeries(a, b)), "shunt A + B"},
		{shunt(inSeries(a, inParallel(b, c))), "shunt A + B | C"},
		{shunt(inParallel(inSeries(a, b), c)), "shunt (A + B) | C"},
		{shunt(inSeries(inSeries(a, b), c)), "shunt (A + B) + C"},
		{shunt(inParallel(a, inParallel(b, c))), "shunt A | (B | C)"},
		{mark("x"), "mark x"},
		{between(inSeries(a, b), "amp", "low.x"), "A + B from amp to low.x"},
		{pot, "P1 from a to 0 wiper b"},
		{driverAt("x", "0"), "driver from x to 0"},
		{Step{Op: Couple, A: "L1", B: "L2", K: -0.02}, "couple L1 L2 -0.02"},
	} {
		if got := test.step.String(); got != test.want {
			t.Errorf("got %q, want %q", got, test.want)
		}
	}
}

// TestStepTextReadsBack reads what the good files' steps are written as.
func TestStepTextReadsBack(t *testing.T) {
	for _, path := range goodFiles(t) {
		d := parseGood(t, path)
		checkStepsReadBack(t, d)
	}
}

// checkStepsReadBack parses each step's own text again, among the parts of its design.
func checkStepsReadBack(t *testing.T, d *Design) {
	t.Helper()
	networks := [][]Step{}
	for _, w := range d.Ways {
		networks = append(networks, w.Network)
	}
	if d.Tone != nil {
		networks = append(networks, d.Tone.Network)
	}
	p := &parser{design: d, where: newLocator(nil), partAt: map[string]int{}}
	for i, part := range d.Parts {
		p.partAt[part.Name] = i
	}
	for _, network := range networks {
		again := make([]Step, 0, len(network))
		for _, step := range network {
			s, ok := p.step(&node{text: step.String(), inside: -1}, d.Tone == nil)
			if !ok {
				t.Fatalf("%q cannot be read: %v", step, p.errors)
			}
			again = append(again, s)
		}
		checkNetwork(t, again, stepsWithoutPositions(network)...)
	}
}
