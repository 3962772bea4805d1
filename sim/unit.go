package sim

import (
	"fmt"
	"slices"

	"sixdown/sim/circuit"
	"sixdown/sim/driver"
	"sixdown/xover"
)

// A unit is one driver of a way, of which there may be several.
type unit struct {
	speaker *speaker
	way     int       // index of the way
	branch  int       // of the netlist
	shares  []divider // from the way's voltage to the unit's; none if it has all of it
}

// A combo is what lies between the terminals of a way: a driver, or drivers in series or in parallel.
type combo struct {
	op   xover.ExprOp
	load driver.Load // of a Leaf
	args []combo     // of others
}

// A divider is a part of what lies in series, which gets a part of the voltage.
type divider struct{ part, whole *combo }

// impedance returns Z(s) in Ω. It allocates nothing.
func (c *combo) impedance(s complex128) complex128 {
	switch c.op {
	case xover.InSeries:
		z := complex128(0)
		for i := range c.args {
			z += c.args[i].impedance(s)
		}
		return z
	case xover.InParallel:
		y := complex128(0)
		for i := range c.args {
			y += 1 / c.args[i].impedance(s)
		}
		return 1 / y
	}
	return c.load.Impedance(s)
}

// share returns the voltage across the unit over that across its way's terminals at s. The drivers' impedances alone
// give it, since nothing else reaches the nodes between them: in series Z1/(Z1 + Z2). It allocates nothing.
func (u *unit) share(s complex128) complex128 {
	h := complex128(1)
	for _, d := range u.shares {
		h *= d.part.impedance(s) / d.whole.impedance(s)
	}
	return h
}

// A joiner lays the drivers of a way between its terminals.
type joiner struct {
	*flattener
	way      *xover.Way
	index    int // of the way
	speakers map[string]*speaker
	units    []unit // those laid
}

// whole reports whether e is what package xover calls an expression: with an operation, and something to do it with.
func whole(e *xover.Expr) bool {
	if e == nil || e.Op == xover.Leaf {
		return e != nil
	}
	return e.Op <= xover.InParallel && len(e.Args) > 0 && !slices.ContainsFunc(e.Args, func(x *xover.Expr) bool { return !whole(x) })
}

// lay lays what e, which must be whole, says from node a to node b, makes c of it, and a unit of each driver. shares
// leads to c.
func (j *joiner) lay(c *combo, e *xover.Expr, a, b int, shares []divider) error {
	c.op = e.Op
	if e.Op == xover.Leaf {
		sp := j.speakers[e.Part]
		if sp == nil {
			return fmt.Errorf("way %q: driver %q is not defined; define it under [driver.%s]", j.way.Name, e.Part, e.Part)
		}
		c.load = sp.load
		branch := j.add("", circuit.Branch{Name: sp.name, Kind: circuit.Port, From: a, To: b, Port: port{sp.load}})
		j.units = append(j.units, unit{speaker: sp, way: j.index, branch: branch, shares: shares})
		return nil
	}
	c.args = make([]combo, len(e.Args))
	for i, arg := range e.Args {
		part, next, inner := &c.args[i], b, shares
		if e.Op == xover.InSeries {
			inner = append(shares[:len(shares):len(shares)], divider{part, c})
			if i < len(e.Args)-1 {
				next = j.node(fmt.Sprintf("%s behind %s", j.net.NodeNames[a], lastPart(arg)))
			}
		}
		if err := j.lay(part, arg, a, next, inner); err != nil {
			return err
		}
		if e.Op == xover.InSeries {
			a = next
		}
	}
	return nil
}
