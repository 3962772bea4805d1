// Package driver says what a loudspeaker driver is: electrically a Load, which is an impedance, and
// acoustically a Radiator, which is a pressure for each volt across the terminals.
//
// A load is a plain Resistance, a DataSheet or an ImpedanceTable that somebody measured. A radiator is
// Flat, a Sheet (a data sheet with its sensitivity), either of them with a Breakup, a ResponseTable with its measured
// phase, or a MinimumResponse, whose phase follows from the level. Any load may go with any radiator. ExcessDelay tells
// how much flight time a measured phase still holds.
//
// FitImpedance finds the equivalent circuit of an ImpedanceTable, a Fit, and with it Re, fs and the Qs: a chain of the
// coil's losses, the motional branch with its box, and further resonances. A table stands for itself in the frequency
// domain and is represented by its Fit in the time domain.
//
// A Directivity is what a driver measured at angles radiates there over on its axis.
//
// The time dependence is e^{+jωt}; s is a complex frequency in rad/s, f a frequency in Hz. Tables are read
// by ReadTable; they are the only file format this package knows. Where the driver stands and where the
// ear is belongs to package field.
package driver
