package driver

import "math"

// A DataSheet is the moving-coil driver of the small-signal theory: a voice coil in series with the motional
// branch, in which the moving mass shows as a capacitor, the suspension as a coil and its friction as a
// resistor, all three in parallel.
//
// R. H. Small, "Direct-Radiator Loudspeaker System Analysis", J. Audio Eng. Soc. 20(5), 383–395, 1972.
type DataSheet struct {
	Re     float64 // Ω, DC resistance of the voice coil; > 0
	Le     float64 // H, inductance in series with Re; ≥ 0
	LossR2 float64 // Ω, in parallel with LossL2 and in series with Re and Le: losses in the pole piece; 0: none
	LossL2 float64 // H
	Fs     float64 // Hz, resonance; 0: no motional branch
	Qms    float64 // mechanical Q at Fs
	Qes    float64 // electrical Q at Fs, from Re
	Vent   Vent    // of InVentedBox; the zero Vent: none
}

// InClosedBox returns the same driver on a closed box of net volume vb, vas being the driver's compliance as
// a volume, in the same unit. The air spring adds to the suspension, so the resonance and both Qs rise by
// √(1 + vas/vb); losses in the box are left out.
//
// R. H. Small, "Closed-Box Loudspeaker Systems", Part I, J. Audio Eng. Soc. 20(10), 798–808, 1972.
func (d DataSheet) InClosedBox(vas, vb float64) DataSheet {
	k := math.Sqrt(1 + vas/vb)
	d.Fs *= k
	d.Qms *= k
	d.Qes *= k
	return d
}

// Motional returns the motional branch: res in Ω, lces in H and cmes in F, in parallel. All are 0 if the
// sheet gives no Fs.
func (d DataSheet) Motional() (res, lces, cmes float64) {
	if d.Fs == 0 {
		return 0, 0, 0
	}
	w := 2 * math.Pi * d.Fs
	return d.Re * d.Qms / d.Qes, d.Re / (w * d.Qes), d.Qes / (w * d.Re)
}

// coil returns the impedance of the blocked voice coil, Re + sLe + R2 ∥ sL2.
func (d DataSheet) coil(s complex128) complex128 {
	z := complex(d.Re, 0) + s*complex(d.Le, 0)
	if d.LossR2 > 0 && d.LossL2 > 0 {
		r, x := complex(d.LossR2, 0), s*complex(d.LossL2, 0)
		z += r * x / (r + x)
	}
	return z
}

// motion returns the impedance num/den of the motional branch, with the box's branch beside it, and out/den, the
// part of num/den that shows the air that goes out: all of it but for a vented box. They are polynomials, not
// sums of admittances, so that neither s = 0 nor a resonance without losses needs a special case.
func (d DataSheet) motion(s complex128) (num, out, den complex128) {
	if d.Fs == 0 {
		return 0, 0, 1
	}
	res, lces, cmes := d.Motional()
	x := s * complex(lces, 0)
	den = 1 + x*complex(1/res, 0) + x*s*complex(cmes, 0)
	if d.Vent.Alpha == 0 {
		return x, x, den
	}
	all, air := d.Vent.box(s)
	return x * all, x * air, den*all + complex(d.Vent.Alpha, 0)*air
}

// Impedance returns the impedance at s.
func (d DataSheet) Impedance(s complex128) complex128 {
	num, _, den := d.motion(s)
	return d.coil(s) + num/den
}

// Elements returns Re, then Le, then the loss pair, then the motional branch and the box's, leaving out what is 0.
func (d DataSheet) Elements() []Element {
	type group []Element
	chain := []group{{{Name: "Re", Kind: Resistor, Value: d.Re}}}
	if d.Le > 0 {
		chain = append(chain, group{{Name: "Le", Kind: Inductor, Value: d.Le}})
	}
	if d.LossR2 > 0 && d.LossL2 > 0 {
		chain = append(chain, group{
			{Name: "R2", Kind: Resistor, Value: d.LossR2},
			{Name: "L2", Kind: Inductor, Value: d.LossL2},
		})
	}
	if d.Fs > 0 {
		res, lces, cmes := d.Motional()
		chain = append(chain, group{
			{Name: "Res", Kind: Resistor, Value: res},
			{Name: "Lces", Kind: Inductor, Value: lces},
			{Name: "Cmes", Kind: Capacitor, Value: cmes},
		})
	}
	var es []Element
	from := Plus
	for i, g := range chain {
		to := i + 2
		if i == len(chain)-1 {
			to = Minus
		}
		for _, e := range g {
			e.From, e.To = from, to
			es = append(es, e)
		}
		from = to
	}
	return append(es, d.boxElements(es)...)
}

// boxElements returns the box's branch, to be put beside the motional branch, the last of es.
func (d DataSheet) boxElements(es []Element) []Element {
	lceb, cmep, rel := d.BoxBranch()
	if lceb == 0 {
		return nil
	}
	from := es[len(es)-1].From
	box := []Element{{Name: "Lceb", Kind: Inductor, Value: lceb}, {Name: "Cmep", Kind: Capacitor, Value: cmep}}
	if rel > 0 {
		box = append(box, Element{Name: "Rel", Kind: Resistor, Value: rel})
	}
	next := from + 1
	for i := range box {
		box[i].From, box[i].To = from, next
		from, next = next, next+1
	}
	box[len(box)-1].To = Minus
	return box
}

// Acceleration returns the acceleration of the air that leaves diaphragm, vent and leaks together, for each volt,
// relative to that of a coil without inductance well above resonance: s·Re·Cmes·Z_m/(Z_e + Z_m), which tends to
// 1 there, times for a vented box the share that goes out. The far-field pressure of a small source in a large
// baffle is proportional to it (Small 1972 and 1973). Without Fs it is 1.
func (d DataSheet) Acceleration(s complex128) complex128 {
	if d.Fs == 0 {
		return 1
	}
	_, _, cmes := d.Motional()
	num, out, den := d.motion(s)
	return s * complex(d.Re*cmes, 0) * out / (d.coil(s)*den + num)
}
