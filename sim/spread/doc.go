// Package spread tells what the tolerances of parts do to a design.
//
// New makes a Problem of a design. Run builds it many times over, each part off by a chance amount within its tolerance, and
// tells between which levels the sum and the ways lie, how many builds pass, which parts matter most, and how well a
// left and a right loudspeaker match. Tighten tells which one part should be bought at a closer tolerance.
//
// Deviations are uniform within the tolerance, or normal with the tolerance at three standard deviations. Two parts
// of the same nominal value are two parts, and deviate by themselves; losses of coils and capacitors do not deviate. Builds are
// a quasi-random sequence, so that few of them tell much; the same seed gives the same answer on any number of cores.
package spread
