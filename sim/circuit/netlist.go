package circuit

// Kind is what a Branch is made of.
type Kind uint8

// The kinds of branch.
const (
	Resistor  Kind = iota // Value in Ω
	Inductor              // Value in H, in series with Loss
	Capacitor             // Value in F, in series with Loss
	Port                  // a OnePort, such as a driver
)

// The two nodes that every Netlist has.
const (
	Return = 0 // the amplifier's return, 0 V
	Amp    = 1 // the amplifier's hot terminal, behind its source resistance
)

// A Branch is one two-terminal element. Positive current flows From → To.
type Branch struct {
	Name     string
	Kind     Kind
	From, To int     // nodes
	Value    float64 // Ω, H or F, by Kind; ≥ 0; a resistance of 0 is a short, a capacitance of 0 is open
	Loss     float64 // Ω in series: winding resistance of an Inductor, ESR of a Capacitor
	Port     OnePort // of a Port
}

// A OnePort is a passive two-terminal network that is known by its impedance.
type OnePort interface {
	// Impedance is Z(s) in Ω at the complex frequency s in rad/s: jω in a sweep, real and positive
	// where a limit at DC or at infinite frequency is sought.
	Impedance(s complex128) complex128
	// Branches is an equivalent circuit of resistors, inductors and capacitors between node 1 (From) and
	// node 0 (To), other nodes being its own; nil if there is none. The time domain uses it.
	Branches() []Branch
}

// A Coupling joins two inductors; K > 0 when currents From → To in both aid each other.
type Coupling struct {
	A, B int     // indices of branches of Kind Inductor
	K    float64 // coupling coefficient, -1 < K < 1
}

// An Amplifier is an ideal operational amplifier: whatever its output has to give against Return, it makes V(Plus) = V(Minus), and its
// inputs take no current.
type Amplifier struct {
	Name             string
	Plus, Minus, Out int // nodes
}

// A Netlist is a linear circuit driven by one voltage source behind a resistance, between Amp and Return.
type Netlist struct {
	Nodes      int      // how many, Return and Amp included; they are numbered 0 … Nodes-1
	NodeNames  []string // for messages, len Nodes; may be nil
	Branches   []Branch
	Couplings  []Coupling
	Amplifiers []Amplifier
	Source     float64 // Ω, between the ideal source and Amp
}

// An Output is a voltage between two nodes, V(From) - V(To).
type Output struct{ From, To int }
