package circuit_test

import "sixdown/sim/circuit"

// sheetDriver is a driver as a data sheet describes it, by its electrical equivalent circuit:
// Re + s·Le + (R2 ∥ s·L2) + (Res ∥ s·Lces ∥ 1/s·Cmes); R. H. Small, "Direct-Radiator Loudspeaker System Analysis",
// JAES 20(5), 1972. A zero Le, L2 or Res leaves that section out.
//
// Impedance and Branches are written apart on purpose, and testdata/reference.py expands the same five sections on
// its own.
type sheetDriver struct {
	Re   float64 `json:"re"`   // Ω
	Le   float64 `json:"le"`   // H
	R2   float64 `json:"r2"`   // Ω
	L2   float64 `json:"l2"`   // H
	Res  float64 `json:"res"`  // Ω
	Lces float64 `json:"lces"` // H
	Cmes float64 `json:"cmes"` // F
}

var _ circuit.OnePort = (*sheetDriver)(nil)

func (d *sheetDriver) Impedance(s complex128) complex128 {
	real1 := func(x float64) complex128 { return complex(x, 0) }
	z := real1(d.Re) + s*real1(d.Le)
	if d.L2 > 0 {
		z += real1(d.R2) * s * real1(d.L2) / (real1(d.R2) + s*real1(d.L2))
	}
	if d.Res > 0 {
		z += 1 / (1/real1(d.Res) + 1/(s*real1(d.Lces)) + s*real1(d.Cmes))
	}
	return z
}

func (d *sheetDriver) Branches() []circuit.Branch {
	var list []circuit.Branch
	next := 2 // the first inner node
	here := 1
	section := func(last bool, parts ...circuit.Branch) {
		there := next
		if last {
			there = 0
		} else {
			next++
		}
		for _, p := range parts {
			p.From, p.To = here, there
			list = append(list, p)
		}
		here = there
	}
	section(d.Le == 0 && d.L2 == 0 && d.Res == 0, circuit.Branch{Name: "Re", Kind: circuit.Resistor, Value: d.Re})
	if d.Le > 0 {
		section(d.L2 == 0 && d.Res == 0, circuit.Branch{Name: "Le", Kind: circuit.Inductor, Value: d.Le})
	}
	if d.L2 > 0 {
		section(d.Res == 0,
			circuit.Branch{Name: "R2", Kind: circuit.Resistor, Value: d.R2},
			circuit.Branch{Name: "L2", Kind: circuit.Inductor, Value: d.L2})
	}
	if d.Res > 0 {
		section(true,
			circuit.Branch{Name: "Res", Kind: circuit.Resistor, Value: d.Res},
			circuit.Branch{Name: "Lces", Kind: circuit.Inductor, Value: d.Lces},
			circuit.Branch{Name: "Cmes", Kind: circuit.Capacitor, Value: d.Cmes})
	}
	return list
}
