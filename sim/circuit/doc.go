// Package circuit answers questions about linear networks in the steady state: what voltage stands at a
// node, what current flows in a part, what the amplifier sees, and how each of these moves when a part's
// value moves.
//
// A Netlist is compiled once. Compile merges nodes that a short joins, folds chains and side-by-side parts
// into single branches, chooses an elimination order, and writes the elimination as a flat list of
// operations. A Sweep runs that list over a grid of frequencies, a block of them at a time, and allocates
// nothing.
//
// Elimination is by the star-mesh transformation (A. Rosen, "A New Network Theorem", J. IEE 62, 1924,
// 916–918) rather than by Gaussian elimination on the nodal matrix: the two are the same arithmetic but for
// the pivot, which the star-mesh form sums from the branches that meet at the node instead of
// finding it by subtraction. No digits are lost where a very large admittance (a coil far below the
// crossover) meets a very small one, and at a real, positive s, where DC and infinite frequency are
// taken as limits, the elimination contains no subtraction at all unless coils are coupled.
//
// Where digits may cancel all the same, at the pivot of a purely reactive node or among coupled coils, the sums
// are watched, and a frequency at which one cancels is solved again in doubled precision.
//
// Ideal operational amplifiers are solved by superposition of passive networks (amplifier.go).
//
// Derivatives come from the adjoint network (S. W. Director and R. A. Rohrer, "The Generalized Adjoint
// Network and Network Sensitivities", IEEE Trans. Circuit Theory 16(3), 1969, 318–323).
//
// Next to all this, and sharing nothing with it but the netlist, a StateSpace holds the same network as
// differential equations, for the time domain. What one road predicts the other can check.
//
// The time convention is e^{+jωt}. Gains are per volt of the open-circuit source.
package circuit
