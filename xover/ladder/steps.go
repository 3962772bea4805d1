package ladder

import (
	"fmt"
	"strings"
)

// A NamedPart is a Part with the name that the arrangement gives it.
type NamedPart struct {
	Name string // "L1"
	Part
}

// A Namer hands out part names, numbered by kind in the order of asking: R1, R2, L1, C1 … The zero Namer starts
// each kind at 1. One Namer for a whole loudspeaker keeps names unique across its ways.
type Namer struct {
	used [len(letters)]int // by Kind
}

const letters = "RLC" // by Kind

// Next returns the next unused name for a part of kind k, and marks it as used.
func (n *Namer) Next(k Kind) string {
	n.used[k]++
	return fmt.Sprintf("%c%d", letters[k], n.used[k])
}

// Steps writes the network in the arrangement language of the design file, a string an element: "series L1",
// "shunt R1 + C2", "series L3 | C4 | R5", brackets where a parallel joint holds a series one. parts lists
// the parts in the order in which the steps name them. names goes on counting; it must not be nil.
func (n Network) Steps(names *Namer) (steps []string, parts []NamedPart) {
	for _, e := range n {
		var text strings.Builder
		if e.Shunt {
			text.WriteString("shunt ")
		} else {
			text.WriteString("series ")
		}
		parts = e.Expr.write(&text, names, parts)
		steps = append(steps, text.String())
	}
	return steps, parts
}

// write appends the expression to text and its parts to parts, which it returns.
func (e Expr) write(text *strings.Builder, names *Namer, parts []NamedPart) []NamedPart {
	if e.Op == Leaf {
		name := names.Next(e.Part.Kind)
		text.WriteString(name)
		return append(parts, NamedPart{name, e.Part})
	}
	joint := " + "
	if e.Op == InParallel {
		joint = " | "
	}
	for i, arg := range e.Args {
		if i > 0 {
			text.WriteString(joint)
		}
		// The bar binds tighter than the plus, so only a chain inside a parallel joint needs brackets.
		bracket := e.Op == InParallel && arg.Op == InSeries
		if bracket {
			text.WriteByte('(')
		}
		parts = arg.write(text, names, parts)
		if bracket {
			text.WriteByte(')')
		}
	}
	return parts
}
