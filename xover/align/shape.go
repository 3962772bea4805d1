package align

import (
	"fmt"
	"strings"
)

// Shape is the family that an alignment belongs to.
type Shape uint8

// The shapes. The zero Shape is Butterworth.
const (
	Butterworth   Shape = iota // maximally flat magnitude
	LinkwitzRiley              // a Butterworth of half the order, squared: both ways in phase, flat sum
	Bessel                     // maximally flat delay
	Chebyshev                  // equal ripple in the pass band (type I); its frequency is the ripple's edge
)

var shapeNames = [...]string{"butterworth", "linkwitz-riley", "bessel", "chebyshev"}

// String returns the shape's name as it stands in a design file, "linkwitz-riley".
func (s Shape) String() string {
	if int(s) < len(shapeNames) {
		return shapeNames[s]
	}
	return fmt.Sprintf("Shape(%d)", uint8(s))
}

// ParseShape is the inverse of Shape.String. It takes no other spelling.
func ParseShape(name string) (Shape, error) {
	for i, n := range shapeNames {
		if n == name {
			return Shape(i), nil
		}
	}
	return 0, fmt.Errorf("shape: %q is not one; give %s", name, oneOf(shapeNames[:]))
}

// Reference is what the frequency of a Bessel alignment means.
type Reference uint8

// The references. The zero Reference is Magnitude.
const (
	Magnitude Reference = iota // the half-power (-3.01 dB) point
	Phase                      // where the asymptotes cross: far above, it falls like a Butterworth of this frequency
	Delay                      // the reciprocal of the angular frequency is the group delay at DC
)

var referenceNames = [...]string{"magnitude", "phase", "delay"}

// String returns the reference's name as it stands in a design file, "magnitude".
func (r Reference) String() string {
	if int(r) < len(referenceNames) {
		return referenceNames[r]
	}
	return fmt.Sprintf("Reference(%d)", uint8(r))
}

// ParseReference is the inverse of Reference.String. It takes no other spelling.
func ParseReference(name string) (Reference, error) {
	for i, n := range referenceNames {
		if n == name {
			return Reference(i), nil
		}
	}
	return 0, fmt.Errorf("reference: %q is not one; give %s", name, oneOf(referenceNames[:]))
}

// oneOf joins names for a message: "a, b or c".
func oneOf(names []string) string {
	last := len(names) - 1
	return strings.Join(names[:last], ", ") + " or " + names[last]
}
