// Package field says what adds up at the ear: how far each driver is from it, what its diaphragm's size and the
// cabinet's edges do to its sound in that direction, and what the air does on the way.
//
// A Path is the distance and the flight time; Piston is the directivity of a diaphragm in an infinite baffle; a
// Baffle gives the Diffraction of its edges.
//
// Coordinates are in m from the cabinet's origin: x to the right as the listener sees it, y up, z toward the
// listener. The front of a Baffle is in the plane z = 0.
package field
