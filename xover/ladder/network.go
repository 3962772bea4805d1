package ladder

// Kind is what a Part is.
type Kind uint8

// The kinds of part.
const (
	Resistor  Kind = iota // Value in Ω
	Inductor              // Value in H
	Capacitor             // Value in F
)

// A Part is one component.
type Part struct {
	Kind  Kind
	Value float64 // Ω, H or F, by Kind; > 0
}

// Op is how an Expr joins what it holds.
type Op uint8

// The joints of an Expr.
const (
	Leaf       Op = iota // the part itself
	InSeries             // Args end to end
	InParallel           // Args side by side
)

// An Expr is a two-terminal network: a part, or parts in series or in parallel, to any depth.
type Expr struct {
	Op   Op
	Part Part   // of a Leaf
	Args []Expr // of InSeries and InParallel, two or more
}

// R is a resistor of that many Ω.
func R(ohm float64) Expr { return Expr{Part: Part{Resistor, ohm}} }

// L is an inductor of that many H.
func L(henry float64) Expr { return Expr{Part: Part{Inductor, henry}} }

// C is a capacitor of that many F.
func C(farad float64) Expr { return Expr{Part: Part{Capacitor, farad}} }

// Chain joins its arguments end to end. It keeps the slice.
func Chain(args ...Expr) Expr { return Expr{Op: InSeries, Args: args} }

// Beside joins its arguments side by side. It keeps the slice.
func Beside(args ...Expr) Expr { return Expr{Op: InParallel, Args: args} }

// An Element is one step of a Network: in series with what follows, or in shunt across it.
type Element struct {
	Shunt bool
	Expr  Expr
}

// Series puts e between the hot node and a new one.
func Series(e Expr) Element { return Element{Expr: e} }

// Shunt puts e between the hot node and the return.
func Shunt(e Expr) Element { return Element{Shunt: true, Expr: e} }

// A Network is a ladder, its elements in order from the amplifier to the load. Networks join by append.
type Network []Element
