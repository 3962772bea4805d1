// Package driver says what a loudspeaker driver is: electrically a Load, which is an impedance, and
// acoustically a Radiator, which is a pressure for each volt across the terminals.
//
// A load is a plain Resistance, a DataSheet or an ImpedanceTable that somebody measured. A radiator is
// Flat, a Sheet (a data sheet with its sensitivity), either of them with a Breakup, or a ResponseTable. Any load
// may go with any radiator.
//
// The time dependence is e^{+jωt}; s is a complex frequency in rad/s, f a frequency in Hz. Tables are read
// by ReadTable; they are the only file format this package knows. Where the driver stands and where the
// ear is belongs to package field.
package driver
