package xover

import (
	"bytes"
	"cmp"
	"fmt"
	"math"
	"reflect"
	"slices"
	"strconv"

	"sixdown/xover/quantity"
)

// Edit returns a copy of the design file src in which each part named in values has that value, in Ω, H or F.
// A value is changed where it stands, in the short form, as value = in an inline table, or in a table of the
// part's own; every other byte stays as it was: comments, order, spaces, line ends, byte order mark. A part
// that has the value already is left as it is written.
//
// The result is read again and must say just what src says but for these values. Edit fails, and returns
// nil, if src is no valid design, if a name is not a part or follows another part, or if a value is none
// that a part can have. The error holds an Errors or an *Error.
func Edit(src []byte, values map[string]float64) ([]byte, error) {
	f, err := parseFile("", src)
	if err != nil {
		return nil, err
	}
	want := f.design
	var splices []splice
	for _, name := range sortedKeys(values) {
		v := values[name]
		same := false
		if part := want.Part(name); part != nil {
			same = part.Value == v
		}
		if err := want.SetPart(name, v); err != nil {
			return nil, err
		}
		if !same {
			splices = append(splices, splice{f.parts[name], strconv.Quote(quantity.Format(v, want.Part(name).Kind.Unit()))})
		}
	}
	return proved(src, splices, want)
}

// EditDCR returns a copy of the design file src in which each coil named in ohms has that winding resistance, in Ω; where the
// file gives none it is added. Like Edit it changes these alone and proves it.
func EditDCR(src []byte, ohms map[string]float64) ([]byte, error) {
	return editKey(src, "dcr", quantity.Ohm, ohms, func(f *file, name string) (map[string]keyPlace, *float64) {
		part := f.design.Part(name)
		if part == nil || part.Kind != Inductor {
			return nil, nil
		}
		return f.dcr, &part.DCR
	})
}

// EditTol returns a copy of the design file src in which each part named in tols has that tolerance, a fraction of its value; where
// the file gives none it is added. Like Edit it changes these alone and proves it.
func EditTol(src []byte, tols map[string]float64) ([]byte, error) {
	return editKey(src, "tol", quantity.Percent, tols, func(f *file, name string) (map[string]keyPlace, *float64) {
		part := f.design.Part(name)
		if part == nil {
			return nil, nil
		}
		return f.tol, &part.Tol
	})
}

// editKey gives parts a key of that unit. of returns where the file has the key of a part, and the number itself; nil if the
// part can have none.
func editKey(src []byte, key string, unit quantity.Unit, values map[string]float64, of func(f *file, name string) (map[string]keyPlace, *float64)) ([]byte, error) {
	f, err := parseFile("", src)
	if err != nil {
		return nil, err
	}
	var splices []splice
	for _, name := range sortedKeys(values) {
		places, number := of(f, name)
		if number == nil {
			return nil, &Error{What: fmt.Sprintf("%q is no part that has a %s", name, key), Mend: "name one of [parts]"}
		}
		if what, mend := valueFault(values[name], unit, notNegative); what != "" {
			return nil, &Error{What: name + ": " + key + ": " + what, Mend: mend}
		}
		if *number == values[name] {
			continue
		}
		*number = values[name]
		place, ok := places[name]
		if !ok { // the short form
			place = keyPlace{f.parts[name], "{ value = " + string(src[f.parts[name].from:f.parts[name].to]) + ", " + key + " = ", " }"}
		}
		splices = append(splices, splice{place.span, place.before + strconv.Quote(quantity.Format(*number, unit)) + place.after})
	}
	return proved(src, splices, f.design)
}

// EditControl returns a copy of the design file src in which each control named in at is turned so far, 0
// to 1. Like Edit it changes these numbers alone and proves it.
func EditControl(src []byte, at map[string]float64) ([]byte, error) {
	f, err := parseFile("", src)
	if err != nil {
		return nil, err
	}
	want := f.design
	var splices []splice
	for _, name := range sortedKeys(at) {
		v := at[name]
		same := false
		if control := want.Control(name); control != nil {
			same = control.At == v
		}
		if err := want.SetControl(name, v); err != nil {
			return nil, err
		}
		if !same {
			splices = append(splices, splice{f.controls[name], tomlFloat(v)})
		}
	}
	return proved(src, splices, want)
}

// tomlFloat writes a finite number as a TOML float, which needs a point or a power of ten.
func tomlFloat(v float64) string {
	text := strconv.FormatFloat(v, 'f', -1, 64)
	if v == math.Trunc(v) {
		text += ".0"
	}
	return text
}

// A splice replaces a piece of the source.
type splice struct {
	span
	text string
}

// proved makes the splices and reads the result, which must give the design want.
func proved(src []byte, splices []splice, want *Design) ([]byte, error) {
	slices.SortFunc(splices, func(a, b splice) int { return cmp.Compare(a.from, b.from) })
	var out bytes.Buffer
	at := 0
	for _, s := range splices {
		out.Write(src[at:s.from])
		out.WriteString(s.text)
		at = s.to
	}
	out.Write(src[at:])
	got, err := parseFile("", out.Bytes())
	if err != nil {
		return nil, fmt.Errorf("the edited file cannot be read, so it is given up: %w", err)
	}
	if !equalButPositions(got.design, want) {
		return nil, &Error{What: "the edited file does not say what it should, so it is given up", Mend: "edit the values by hand"}
	}
	return out.Bytes(), nil
}

// equalButPositions compares two designs; where things stand in the file does not count.
func equalButPositions(a, b *Design) bool {
	return reflect.DeepEqual(withoutPositions(a), withoutPositions(b))
}

// withoutPositions returns a deep copy of a design in which every Position is zero.
func withoutPositions(d *Design) *Design {
	c := *d
	c.Parts, c.Drivers, c.Ways, c.Controls = slices.Clone(d.Parts), slices.Clone(d.Drivers), slices.Clone(d.Ways), slices.Clone(d.Controls)
	for i := range c.Parts {
		c.Parts[i].Pos = Position{}
	}
	for i := range c.Drivers {
		c.Drivers[i].Pos = Position{}
	}
	for i := range c.Controls {
		c.Controls[i].Pos = Position{}
	}
	for i := range c.Ways {
		c.Ways[i].Pos = Position{}
		c.Ways[i].Drivers = c.Ways[i].Drivers.withoutPositions()
		c.Ways[i].Network = stepsWithoutPositions(c.Ways[i].Network)
	}
	if d.Tone != nil {
		tone := *d.Tone
		tone.Pos = Position{}
		tone.Network = stepsWithoutPositions(tone.Network)
		c.Tone = &tone
	}
	return &c
}

func stepsWithoutPositions(steps []Step) []Step {
	c := slices.Clone(steps)
	for i := range c {
		c[i].Pos = Position{}
		c[i].Expr = c[i].Expr.withoutPositions()
	}
	return c
}

func (x *Expr) withoutPositions() *Expr {
	if x == nil {
		return nil
	}
	c := &Expr{Op: x.Op, Part: x.Part}
	for _, arg := range x.Args {
		c.Args = append(c.Args, arg.withoutPositions())
	}
	return c
}
