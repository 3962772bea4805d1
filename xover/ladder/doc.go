// Package ladder turns an alignment and a load into the parts of a passive network, and sizes the networks
// that condition a driver so that it is such a load: impedance compensation, traps, pads, baffle steps.
//
// A Network is a list of elements from the amplifier to the driver. Every value is SI: Ω, H, F. The
// amplifier is a voltage source without resistance and the load is a resistance, unless a function says
// otherwise; what the network then does to a real driver, package sim answers.
package ladder
