// Package sim makes a design into a System that answers questions about it.
//
// New flattens the arrangement of a xover.Design into a circuit, reads the drivers' tables and places the
// drivers in front of the ear. Predict then gives a Response over a grid of frequencies: the insertion gain of
// each way, what each way gives to the ear, their complex sum with its group delay, and what the amplifier
// sees. Summary gives the few numbers that a builder looks for first.
//
// Quantities are SI and rms; the time dependence is e^{+jωt}. A way's gain is the voltage across its
// driver's terminals over the amplifier's open-circuit voltage, its wiring polarity included; of drivers in series, the
// voltage across them all. Each driver has its own share of it, and its own place.
package sim
