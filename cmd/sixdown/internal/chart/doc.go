// Package chart draws what a design does: its response, phase, delay and load, the phasors at its crossings, its
// reversed null, its step response and its polar maps, from a sim.Response and a few plain structs.
//
// A Page is a title, panels and a caption. Compose lays it out as scenes of lines, shapes and texts in page units,
// and three writers put these out: SVG, PNG and PDF. The same page gives the same bytes every time.
//
// Colours are named by what they are for (an ink) and get their value from a Theme. The ways have the colours of
// M. Okabe and K. Ito, "Color Universal Design", 2002 (revised 2008), which people with any colour vision can tell
// apart, and dashes as a second cue.
//
// Texts are set in Liberation Sans, which is licensed under the SIL Open Font License 1.1.
package chart
