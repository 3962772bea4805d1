package driver

// A Load is what a driver is between its two terminals.
type Load interface {
	// Impedance returns Z(s) in Ω at the complex frequency s in rad/s. On the jω axis it is the impedance;
	// a real and positive s asks for a limit, toward DC or toward infinite frequency. It allocates nothing.
	Impedance(s complex128) complex128

	// Elements returns an equivalent circuit between the terminals, nodes Plus and Minus of the elements;
	// nil if none is known, which is so for tables.
	Elements() []Element
}

// A Radiator is what a driver gives to the air.
type Radiator interface {
	// Pressure returns the sound pressure in Pa for each volt across the terminals at the frequency f in Hz
	// (both rms, so the ratio is that of peaks too), with its phase. It refers to 1 m from the acoustic centre,
	// flight time taken out, or for a ResponseTable to where the microphone stood and to the table's own time
	// base. It allocates nothing.
	Pressure(f float64) complex128
}

// ElementKind is what an Element is.
type ElementKind uint8

// The kinds of element.
const (
	Resistor  ElementKind = iota // Value in Ω
	Inductor                     // Value in H
	Capacitor                    // Value in F
)

// The terminals of an equivalent circuit; every other node is its own.
const (
	Minus = 0
	Plus  = 1
)

// An Element is one part of an equivalent circuit.
type Element struct {
	Name     string // the symbol in the literature, "Re" or "Cmes"
	Kind     ElementKind
	From, To int     // nodes, counted from 0 without gaps
	Value    float64 // Ω, H or F, by Kind; > 0
}

// Resistance is a plain resistance in Ω, > 0: a load resistor, or the ideal driver of the textbooks.
type Resistance float64

// Impedance returns r at every frequency.
func (r Resistance) Impedance(complex128) complex128 { return complex(float64(r), 0) }

// Elements returns the one resistor.
func (r Resistance) Elements() []Element {
	return []Element{{Name: "R", Kind: Resistor, From: Plus, To: Minus, Value: float64(r)}}
}
