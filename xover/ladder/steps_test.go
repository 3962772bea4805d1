package ladder

import (
	"fmt"
	"strings"
	"testing"
)

func TestSteps(t *testing.T) {
	for _, test := range []struct {
		name    string
		network Network
		steps   string
		parts   string
	}{
		{"a ladder", Network{Series(L(1)), Shunt(C(2)), Series(L(3)), Shunt(C(4))},
			"series L1, shunt C1, series L2, shunt C2", "L1=1 C1=2 L2=3 C2=4"},
		{"a chain", Network{Shunt(Chain(R(1), C(2)))}, "shunt R1 + C1", "R1=1 C1=2"},
		{"three beside each other", Network{Series(Beside(L(1), C(2), R(3)))}, "series L1 | C1 | R1", "L1=1 C1=2 R1=3"},
		{"parallel in series needs no brackets", Network{Shunt(Chain(R(1), Beside(C(2), L(3))))},
			"shunt R1 + C1 | L1", "R1=1 C1=2 L1=3"},
		{"series in parallel needs them", Network{Shunt(Beside(C(1), Chain(R(2), L(3))))},
			"shunt C1 | (R1 + L1)", "C1=1 R1=2 L1=3"},
		{"deeper", Network{Shunt(Chain(R(1), Beside(C(2), Chain(R(3), Beside(L(4), R(5)), C(6)))))},
			"shunt R1 + C1 | (R2 + L1 | R3 + C2)", "R1=1 C1=2 R2=3 L1=4 R3=5 C2=6"},
		{"nothing", nil, "", ""},
	} {
		steps, parts := test.network.Steps(new(Namer))
		if got := strings.Join(steps, ", "); got != test.steps {
			t.Errorf("%s: steps %q, want %q", test.name, got, test.steps)
		}
		var all []string
		for _, p := range parts {
			all = append(all, fmt.Sprintf("%s=%g", p.Name, p.Value))
			if p.Name[0] != letters[p.Kind] {
				t.Errorf("%s: %s is of kind %d", test.name, p.Name, p.Kind)
			}
		}
		if got := strings.Join(all, " "); got != test.parts {
			t.Errorf("%s: parts %q, want %q", test.name, got, test.parts)
		}
	}
}

// One Namer for a whole loudspeaker: no name comes twice.
func TestNamerGoesOn(t *testing.T) {
	var names Namer
	first, _ := Network{Series(L(1)), Shunt(C(2))}.Steps(&names)
	second, _ := Network{Series(C(3)), Shunt(L(4)), Shunt(R(5))}.Steps(&names)
	if got, want := fmt.Sprint(first, second), "[series L1 shunt C1] [series C2 shunt L2 shunt R1]"; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
	if got := names.Next(Inductor); got != "L3" {
		t.Errorf("next inductor is %s, want L3", got)
	}
}

func ExampleNetwork_Steps() {
	network := Network{Series(L(1e-3)), Shunt(C(15e-6)), Shunt(Chain(R(6.2), C(12e-6)))}
	steps, parts := network.Steps(new(Namer))
	fmt.Println(strings.Join(steps, "\n"))
	for _, p := range parts {
		fmt.Println(p.Name, p.Value)
	}
	// Output:
	// series L1
	// shunt C1
	// shunt R1 + C2
	// L1 0.001
	// C1 1.5e-05
	// R1 6.2
	// C2 1.2e-05
}
