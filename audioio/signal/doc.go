// Package signal makes test signals: coherent tones by a schedule, exponential
// sweeps, white and pink noise, and the third-octave frequencies to ask at.
//
// Every signal is a [Source] of mono samples, full scale ±1. What it yields does
// not depend on the lengths of the blocks asked for, and asking allocates nothing.
package signal
