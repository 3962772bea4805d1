// Package scout looks for crossovers that are worth building for given drivers.
//
// Scout takes a design for its drivers, their places, its ear and its amplifier; of its ways only the order counts, from the
// lowest to the highest. It generates arrangements (crossover points, targets, orders of the ladders, polarities, impedance
// compensation, pads), leaves out those that break a driver's limits, tunes each of the others, and tells which of
// them no other beats in error, number of parts and least impedance at once.
package scout
