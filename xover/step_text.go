package xover

import (
	"strconv"
	"strings"
)

// String writes the step in the arrangement language; read again, it gives the same step.
func (s Step) String() string {
	between := func(what string) string { return what + " from " + s.From + " to " + s.To }
	switch s.Op {
	case Series:
		return "series " + s.Expr.String()
	case Shunt:
		return "shunt " + s.Expr.String()
	case Mark:
		return "mark " + s.Name
	case Couple:
		return "couple " + s.A + " " + s.B + " " + strconv.FormatFloat(s.K, 'g', -1, 64)
	case DriverPlace:
		return between("driver")
	case OpAmp:
		return "opamp " + s.Name + " plus " + s.Plus + " minus " + s.Minus + " out " + s.Out
	}
	text := between(s.Expr.String())
	if s.Wiper != "" {
		text += " wiper " + s.Wiper
	}
	return text
}

// String writes the expression in the arrangement language, with the brackets that it needs.
func (x *Expr) String() string {
	if x.Op == Leaf {
		return x.Part
	}
	sign := " + "
	if x.Op == InParallel {
		sign = " | "
	}
	args := make([]string, len(x.Args))
	for i, arg := range x.Args {
		args[i] = arg.String()
		// A + B | C needs no brackets; anything else inside a joint does.
		if arg.Op != Leaf && !(x.Op == InSeries && arg.Op == InParallel) {
			args[i] = "(" + args[i] + ")"
		}
	}
	return strings.Join(args, sign)
}
