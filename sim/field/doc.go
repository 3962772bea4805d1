// Package field says what adds up at the ear: how far each driver is from it, and what the air does on the
// way. Drivers are points that radiate alike in all directions; directivity and cabinet edges are not in it.
//
// Coordinates are in m from the cabinet's origin: x to the right, y up, z toward the listener.
package field
