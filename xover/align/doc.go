// Package align makes the all-pole alignments that crossovers are built from: Butterworth, Linkwitz-Riley,
// Bessel and Chebyshev, orders 1 to 8. An Alignment answers with its poles, its polynomial, and its
// low-pass and high-pass response at any complex frequency.
//
// Frequencies are normalised: s is in units of the crossover's angular frequency, so s = 1i is the crossover
// frequency itself. What that frequency means differs by shape:
//
//   - Butterworth: the half-power (-3.01 dB) point;
//   - Linkwitz-Riley: the half-voltage (-6.02 dB) point;
//   - Bessel: as its Reference says, by default the half-power point;
//   - Chebyshev: the edge of the ripple, beyond which the response falls for good.
//
// The time convention is e^{+jωt}. The gain at DC of every low-pass is exactly 1.
package align
