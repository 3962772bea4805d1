// Package audioio lets a network be heard, and checked by what was heard.
//
// Render writes a recording of the network: channel 1 is the voltage at the amplifier's terminals, and each
// way has a channel with the voltage across its driver. Stepped tones go through the network's own
// differential equations by the trapezoidal rule, pre-warped to each tone; sweeps, noise and music through
// the matched-pole model. Both come from the netlist by a road on which the frequency solver does not lie.
//
// Verify reads a recording back, measures every way against channel 1, and holds the result against the
// prediction. What one recording says of the network's parts is in the suspects: which single part, at
// which other value, would explain what was measured.
package audioio
