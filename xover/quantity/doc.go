// Package quantity reads and writes numbers with units, "4.7 uF" or "2.2 kHz", and the short codes of
// IEC 60062 that are printed on resistors and capacitors, "4K7" or "4µ7".
//
// Every value is held in SI units (Ω, H, F, Hz, m, m², m³, s, V, W, m/s, kg/m³), a decibel as it stands and
// a percentage as a fraction. A prefix moves the decimal point in the text before the text becomes a
// number, so that "4.7 uF" is exactly the float64 nearest to 4.7e-6, and Format can give a text that
// reads back bit for bit.
package quantity
