// Package tune moves the values of a design's parts until it does what the builder asks: a sum that is even at the
// ear, and ways that follow their targets.
//
// New makes a Problem of a design. Score says how good given values are; Run looks for better ones.
//
// The objective is in dB², over a grid of 24 points an octave on the design's tune band:
//
//	mean of (sum - aim - level)² + Σ ways: mean of (way - target - level)² where the target is above -20 dB
//
// with the weights that the design gives, and further terms where it asks for them: for other places of the ear, and for the
// phase between neighbouring ways, the mean of (degrees/10)² where both their targets are above -12 dB or, if there are none, where
// both ways are within 12 dB of the sum. The aim is flat but for the design's tilt and curve. The level, unless the design
// gives it, is the one that makes the objective least; it is eliminated, not searched for. Without a sum, the ways'
// gains in dB stand for what they give to the ear.
//
// Parts that are held stay as they are, and parts that follow another have its value. Losses of coils and capacitors
// stay as the design states them.
package tune
