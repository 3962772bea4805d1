// Package xover holds a loudspeaker crossover, or a tone network, as its builder states it, and reads and
// edits the design file that says so.
//
// A Design is plain data in SI units. Parse makes one from a TOML file and checks it whole: every error has
// its line and column and says how to mend it, and all come at once. Edit and EditControl write values back
// in place, so that comments, order and spacing stay as the builder left them. Nothing here simulates a
// circuit.
//
// The arrangement of a network is written in steps, read from the amplifier to the driver:
//
//	series X                      X lies between the present hot node and a new one
//	shunt X                       X lies between the present hot node and the return
//	mark a                        names the present hot node
//	X from a to b                 X lies between any two nodes
//	P1 from a to c wiper b        a potentiometer with its wiper
//	couple L1 L2 0.02             a coupling coefficient between two coils
//	driver from a to b            the driver lies there, and not at the end of the ladder
//
// X is a part, A + B in series, A | B in parallel (which binds tighter), or either in round brackets. The
// nodes amp and 0 are the amplifier's terminals; any other name is a node of this way, and way.node is that
// of another. A name needs no mark: two steps that say the same name meet there.
package xover
