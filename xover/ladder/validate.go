package ladder

import (
	"errors"
	"math"
)

// maxDepth bounds how deep an Expr may nest, so that a faulty one cannot exhaust the stack.
const maxDepth = 64

// check returns an error unless every part of the expression has a positive finite value and every joint has
// something to join.
func (e Expr) check() error { return e.checkAt(0) }

func (e Expr) checkAt(depth int) error {
	if depth > maxDepth {
		return errors.New("expression: it is nested too deeply; write it flatter")
	}
	if e.Op == Leaf {
		if int(e.Part.Kind) >= len(letters) {
			return errors.New("expression: a part is neither resistor, inductor nor capacitor; make it one")
		}
		if !(e.Part.Value > 0) || math.IsInf(e.Part.Value, 1) { // so that NaN fails
			return check(quantity{"expression: " + letters[e.Part.Kind:e.Part.Kind+1], e.Part.Value, units[e.Part.Kind]})
		}
		return nil
	}
	if len(e.Args) == 0 {
		return errors.New("expression: a joint holds nothing; put parts into it")
	}
	for _, arg := range e.Args {
		if err := arg.checkAt(depth + 1); err != nil {
			return err
		}
	}
	return nil
}

var units = [...]string{"Ω", "H", "F"} // by Kind
