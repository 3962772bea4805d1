// Package discrete steps a network's differential equations from sample to sample.
//
// A Trapezoid is exact in the steady state at one frequency: it is for tones. A Matched follows the network over
// the whole audible band within hundredths of a decibel and degree: it is for music, noise and sweeps.
//
// Both are made from a circuit.StateSpace and never ask the frequency solver, so that what they
// render can check what it predicts. Voltages are in V, u the open-circuit source voltage; one slice of samples an output.
package discrete
