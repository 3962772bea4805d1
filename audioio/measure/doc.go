// Package measure turns recordings into complex transfer functions: steady
// tones by a three-parameter sine fit, sweeps by the ratio of two channels'
// spectra, with or without a window on the impulse response.
//
// The reference is always a channel of the same recording (the amplifier's
// terminals), so level, latency and sample clock of player and recorder divide out.
//
// Conventions: time dependence e^(+jωt), so a delay has negative phase;
// frequencies and sample rates in Hz, windows in s, transfer functions out over ref.
package measure
