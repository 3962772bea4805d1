package xover

import (
	"fmt"
	"slices"

	"sixdown/xover/quantity"
)

// Part returns the part of that name, or nil. It points into d.Parts.
func (d *Design) Part(name string) *Part {
	if i := slices.IndexFunc(d.Parts, func(p Part) bool { return p.Name == name }); i >= 0 {
		return &d.Parts[i]
	}
	return nil
}

// Driver returns the driver of that name, or nil. It points into d.Drivers.
func (d *Design) Driver(name string) *Driver {
	if i := slices.IndexFunc(d.Drivers, func(v Driver) bool { return v.Name == name }); i >= 0 {
		return &d.Drivers[i]
	}
	return nil
}

// Way returns the way of that name, or nil. It points into d.Ways.
func (d *Design) Way(name string) *Way {
	if i := slices.IndexFunc(d.Ways, func(w Way) bool { return w.Name == name }); i >= 0 {
		return &d.Ways[i]
	}
	return nil
}

// DriverNames returns the names of the way's drivers, in the order in which they are written.
func (w *Way) DriverNames() []string {
	if w.Drivers == nil {
		return []string{w.Driver}
	}
	var names []string
	w.Drivers.leaves(func(x *Expr) { names = append(names, x.Part) })
	return names
}

// Control returns the control of that name, or nil. It points into d.Controls.
func (d *Design) Control(name string) *Control {
	if i := slices.IndexFunc(d.Controls, func(c Control) bool { return c.Name == name }); i >= 0 {
		return &d.Controls[i]
	}
	return nil
}

// DefaultTurn is where a potentiometer stands that no control sets.
const DefaultTurn = 0.5

// Turn returns how far, 0 to 1, the potentiometer called part is turned: what its control says, or
// DefaultTurn if it has none.
func (d *Design) Turn(part string) float64 {
	if i := slices.IndexFunc(d.Controls, func(c Control) bool { return c.Part == part }); i >= 0 {
		return d.Controls[i].At
	}
	return DefaultTurn
}

// SetPart gives the part called name, and every part that follows it by its Same, the value v in Ω, H or F.
// It fails, and changes nothing, if there is no such part, if that part follows another, or if v is no value
// that a part can have. The error is an *Error without file and position.
func (d *Design) SetPart(name string, v float64) error {
	part := d.Part(name)
	if part == nil {
		return &Error{What: fmt.Sprintf("there is no part %q", name), Mend: didYouMean(name, d.partNames(), d.partList())}
	}
	if part.Same != "" {
		return &Error{What: fmt.Sprintf("%s follows %s", name, part.Same), Mend: fmt.Sprintf("set %s, or give %s a value of its own", part.Same, name)}
	}
	if what, mend := valueFault(v, part.Kind.Unit(), positive); what != "" {
		return &Error{What: name + ": " + what, Mend: mend}
	}
	part.Value = v
	for i := range d.Parts {
		if d.Parts[i].Same == name {
			d.Parts[i].Value = v
		}
	}
	return nil
}

// SetControl turns the control called name to at, 0 to 1. It fails, and changes nothing, if there is no such
// control or at is outside that range. The error is an *Error without file and position.
func (d *Design) SetControl(name string, at float64) error {
	control := d.Control(name)
	if control == nil {
		return &Error{What: fmt.Sprintf("there is no control %q", name), Mend: didYouMean(name, d.controlNames(), d.controlList())}
	}
	if !(at >= 0 && at <= 1) {
		return &Error{What: fmt.Sprintf("control %q is turned to %v", name, at), Mend: "give a number from 0 to 1"}
	}
	control.At = at
	return nil
}

// Unit returns the unit of a part's value.
func (k Kind) Unit() quantity.Unit {
	switch k {
	case Inductor:
		return quantity.Henry
	case Capacitor:
		return quantity.Farad
	}
	return quantity.Ohm
}

// String returns the kind's name, "resistor".
func (k Kind) String() string {
	switch k {
	case Resistor:
		return "resistor"
	case Inductor:
		return "inductor"
	case Capacitor:
		return "capacitor"
	case Potentiometer:
		return "potentiometer"
	}
	return "unknown kind"
}

// withArticle returns the kind for a sentence, "an inductor".
func (k Kind) withArticle() string {
	if k == Inductor {
		return "an " + k.String()
	}
	return "a " + k.String()
}

func (d *Design) partNames() []string {
	names := make([]string, len(d.Parts))
	for i := range d.Parts {
		names[i] = d.Parts[i].Name
	}
	return names
}

func (d *Design) partList() string {
	if len(d.Parts) == 0 {
		return "[parts] defines none"
	}
	return "[parts] defines " + listed(d.partNames())
}

func (d *Design) controlNames() []string {
	names := make([]string, len(d.Controls))
	for i := range d.Controls {
		names[i] = d.Controls[i].Name
	}
	return names
}

func (d *Design) controlList() string {
	if len(d.Controls) == 0 {
		return "the design has no controls"
	}
	return "the controls are " + listed(d.controlNames())
}
