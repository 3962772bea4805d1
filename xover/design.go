package xover

// A Design is what the builder states: drivers, parts, and either ways or a tone network.
// All numbers are SI (Ω, H, F, Hz, m, V, W, s, m³, m²); Parse has checked every one of them,
// and every name a Design holds refers to something it defines.
type Design struct {
	Title    string
	Drive    Drive
	Listen   Listen
	Air      Air
	Baffle   *Baffle   // nil: no cabinet edges in the model
	Parts    []Part    // in the order of the file
	Drivers  []Driver  // in the order of the file
	Ways     []Way     // in the order of the file; empty for a tone network
	Tone     *Tone     // nil for a loudspeaker
	Controls []Control // potentiometer settings, in the order of the file
	Tune     Tune
	Spread   Spread
}

// Position is a place in the design file, both counted from 1; columns count characters, not bytes.
// The zero Position means that the thing was not written in a file.
type Position struct{ Line, Column int }

// Drive is the amplifier.
type Drive struct {
	Level      float64 // V rms, open circuit; default 2.83
	Source     float64 // Ω, amplifier and cable; default 0
	RatedPower float64 // W into RatedLoad; 0: not stated
	RatedLoad  float64 // Ω; default 8
}

// Listen is the listening point, relative to the origin of the cabinet: z toward the listener, y up.
type Listen struct {
	Distance float64 // m, along +z; default 1
	Height   float64 // m above the origin; default 0
}

// Air is what the sound travels in.
type Air struct {
	SoundSpeed float64 // m/s; default 343 (20 °C)
	Density    float64 // kg/m³; default 1.20
}

// Baffle is the front of the cabinet, in the plane z = 0 and centred on the origin. Its edges count for drivers
// without a response file; a measurement has them in it.
type Baffle struct{ Width, Height float64 } // m

// Kind is what a Part is.
type Kind uint8

// The kinds of part.
const (
	Resistor      Kind = iota // Value in Ω
	Inductor                  // Value in H
	Capacitor                 // Value in F
	Potentiometer             // Value in Ω, the whole track
)

// Taper is how a potentiometer's track is graded.
type Taper uint8

// The tapers; Fraction gives their formulas.
const (
	Linear Taper = iota
	Log
	ReverseLog
)

// A Part is one line of [parts].
type Part struct {
	Name  string
	Kind  Kind
	Value float64    // Ω, H or F, by Kind; > 0
	DCR   float64    // Ω, winding resistance of an Inductor
	ESR   float64    // Ω, equivalent series resistance of a Capacitor
	Tol   float64    // tolerance as a fraction of Value, 0.05 for 5 %; negative: not stated
	Hold  bool       // tune leaves it alone
	Range [2]float64 // least and greatest Value that tune may choose; zeros: not stated
	Same  string     // name of the part whose value this one follows; "": none
	Taper Taper      // of a Potentiometer
	Mid   float64    // fraction of the track at half turn, for log tapers; default 0.1
	Pos   Position   // of its key
}

// A Driver is one [driver.NAME] table. A number not stated is 0; where 0 is a possible value, a Has field tells.
type Driver struct {
	Name string

	Resistance    float64 // Ω: the driver is a plain resistance; 0: not stated
	ImpedanceFile string  // table of Hz, Ω, degrees; "": not stated
	ResponseFile  string  // table of Hz, dB SPL, degrees; with Horizontal or Vertical the one at 0°; "": not stated
	MinimumPhase  bool    // phase = "minimum": the response's phase follows from its magnitude

	// Responses at angles, rising, in (-180°, 180°], the one at 0° in at least one of them; nil: not stated.
	Horizontal []AngledFile // positive: to the right
	Vertical   []AngledFile // positive: up

	At     [3]float64 // m: acoustic centre, right, up, toward the listener
	Mic    [3]float64 // m: where the response was measured from, if HasMic
	HasMic bool

	Re             float64 // Ω, DC resistance of the voice coil; 0: no data-sheet model
	Le             float64 // H, in series with Re
	LossR2         float64 // Ω, le_loss: R2 in parallel with L2, in series with Re and Le; 0: none
	LossL2         float64 // H
	Fs             float64 // Hz, resonance in free air; 0: no motional branch
	Qms            float64 // mechanical Q at Fs; 0: not stated
	Qes            float64 // electrical Q at Fs; 0: not stated
	Vas            float64 // m³, compliance as a volume; 0: not stated
	Sd             float64 // m², diaphragm area; 0: not stated
	Diameter       float64 // m, effective diaphragm diameter, for its directivity without a response file; 0: not stated
	Sensitivity    float64 // dB SPL at 2.83 V rms, 1 m, if HasSensitivity
	HasSensitivity bool
	Xmax           float64 // m, peak; 0: not stated
	Box            Box
	Breakup        []Peak // resonances of the diaphragm, on what the data sheet says

	Pos Position
}

// An AngledFile is a response measured away from the axis.
type AngledFile struct {
	AngleDeg float64
	File     string // table of Hz, dB SPL, degrees
}

// A Peak is a resonance of a diaphragm that bends, as it shows on the axis.
type Peak struct {
	Frequency float64 // Hz
	Q         float64 // of the resonance: Frequency over its width
	GainDB    float64 // dB at Frequency, over what there would be without it; negative: a dip
}

// BoxKind is the cabinet behind a data-sheet driver.
type BoxKind uint8

// The kinds of box.
const (
	OpenBox BoxKind = iota // no air spring: the default
	ClosedBox
	VentedBox
)

// Box is the cabinet behind a data-sheet driver.
type Box struct {
	Kind   BoxKind
	Volume float64 // m³
	Tuning float64 // Hz, of the vent
	QL     float64 // leakage Q of a vented box; default 7 (common practice, no source)
}

// A Way is one branch of the loudspeaker: a network that ends in a driver, or in several that are joined.
type Way struct {
	Name     string
	Driver   string // its name; of several, their arrangement, "upper | lower"
	Drivers  *Expr  // of several: the arrangement, its leaves the drivers' names; nil: the one called Driver
	Reversed bool   // polarity = "reversed"
	Targets  []Target
	Network  []Step
	Pos      Position
}

// A Target is an alignment that a way should follow, "low-pass linkwitz-riley 4 at 2.2 kHz".
type Target struct {
	HighPass  bool
	Shape     string  // butterworth, linkwitz-riley, bessel or chebyshev
	Order     int     // poles
	RippleDB  float64 // dB, of a Chebyshev
	Reference string  // of a Bessel: "magnitude" (-3 dB, the default), "phase" or "delay"
	Frequency float64 // Hz
}

// A Tone is a tone network: passive, between a source resistance and a load.
type Tone struct {
	Source  float64 // Ω
	Load    float64 // Ω, across the node `out`; 0: none
	Network []Step
	Pos     Position
}

// A Control is the setting of a potentiometer.
type Control struct {
	Name string
	Part string
	At   float64 // 0 … 1, turned from the `from` end to the `to` end
	Pos  Position
}

// Tune is what the tuner aims at.
type Tune struct {
	Band         [2]float64 // Hz, where the sum counts; default 200 Hz to 20 kHz
	Level        float64    // dB SPL, if HasLevel; else free
	HasLevel     bool
	MinImpedance float64 // Ω; 0: no limit
	Tilt         float64 // dB per octave that the sum should rise by, 0 dB at 1 kHz; default 0
	CurveFile    string  // table of Hz, dB: the shape that the sum should have, besides Tilt; "": flat
	Weights      Weights
	Angles       []EarAngle // where else the sum should be even
}

// Weights are what the terms of the tuner's objective count for. All 0 is as 1, 1, 0, 1, the default.
type Weights struct {
	Sum    float64 // the sum at the ear
	Ways   float64 // each way's nearness to its target
	Phase  float64 // the phase between neighbouring ways around their crossing
	Angles float64 // the sum at each of Tune.Angles
}

// An EarAngle is a place of the ear away from where the design has it, turned about the origin.
type EarAngle struct{ HorizontalDeg, VerticalDeg float64 } // positive: to the right, up

// Spread is what the tolerance analysis assumes.
type Spread struct {
	TolR, TolL, TolC, TolP float64 // fractions, for parts that state none; defaults 0.05, and 0.2 for potentiometers
	LimitDB                float64 // dB; default 1
	Normal                 bool    // deviations are normal, with the tolerance at 3 sigma; default: uniform within the tolerance
	AboutLevel             bool    // the limit is about the level that is aimed at; default: about the nominal sum
	MatchDB                float64 // dB, within which a left and a right loudspeaker should be; 0: not stated
}

// StepOp is what a Step of the arrangement does.
type StepOp uint8

// The steps of the arrangement language.
const (
	Series      StepOp = iota // Expr lies between the present hot node and a new one
	Shunt                     // Expr lies between the present hot node and the return
	Mark                      // Name names the present hot node
	Between                   // Expr lies from From to To; with Wiper, it is a three-terminal potentiometer
	Couple                    // coils A and B have the coupling coefficient K
	DriverPlace               // the driver lies from From to To
	OpAmp                     // an ideal operational amplifier called Name has its inputs at Plus and Minus and its output at Out
)

// A Step is one string of a network.
type Step struct {
	Op    StepOp
	Expr  *Expr  // of Series, Shunt and Between
	Name  string // of Mark and OpAmp
	From  string // of Between and DriverPlace: a node's name
	To    string // of Between and DriverPlace
	Wiper string // of Between; "" when the part has two terminals
	A, B  string // of Couple
	Plus  string // of OpAmp: a node's name, as are Minus and Out
	Minus string
	Out   string
	K     float64 // of Couple; positive when currents from first to second node aid each other
	Pos   Position
}

// ExprOp is how an Expr joins what it holds.
type ExprOp uint8

// The joints of an Expr.
const (
	Leaf       ExprOp = iota // the part itself, or the driver
	InSeries                 // Args in series, from the first node to the second
	InParallel               // Args side by side
)

// An Expr is a part, or parts in series or in parallel; of a way's Drivers, the parts are drivers.
type Expr struct {
	Op   ExprOp
	Part string  // of a Leaf: its name
	Args []*Expr // of InSeries and InParallel, two or more
	Pos  Position
}
