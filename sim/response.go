package sim

import (
	"math"
	"math/cmplx"

	"sixdown/sim/driver"
	"sixdown/sim/field"
)

// A Response is what Predict or Field found. All slices but Ways and Warnings are as long as Freqs.
type Response struct {
	Title    string
	Angle    field.Angle   // of the ear, from where the design has it
	Freqs    []float64     // Hz
	Ways     []WayResponse // in the order of the design; one, called out, for a tone network
	Sum      []complex128  // Pa rms at the ear, for the drive's level; nil unless every way has an acoustic output
	SumDelay []float64     // s, group delay of Sum, the flight over the listening distance taken out; NaN at a null of Sum; nil with Sum
	Amp      []complex128  // voltage at the amplifier's terminals over open-circuit voltage
	Zin      []complex128  // Ω, what the amplifier sees after its own source resistance
	Warnings []string      // what these answers invent, a sentence each
}

// A WayResponse is one way of a Response.
type WayResponse struct {
	Name   string
	Driver string       // its name; of several, their arrangement, "upper | lower"; "" for a tone network
	H      []complex128 // voltage across the driver's terminals, or across all of several, over open-circuit voltage, wiring polarity included
	P      []complex128 // Pa rms at the ear, for the drive's level; nil if a driver has no acoustic output
}

// DB returns 20·lg|z|, the level of z in dB re 1. For 0 it is -Inf, which is no number for JSON.
func DB(z complex128) float64 { return 20 * math.Log10(cmplx.Abs(z)) }

// SPL returns the level in dB re 20 µPa of the pressure p in Pa rms; -Inf for 0.
func SPL(p complex128) float64 {
	return 20 * math.Log10(cmplx.Abs(p)/driver.ReferencePressure)
}

// PhaseDeg returns the phase of z in degrees, in (-180, 180]; 0 for 0.
func PhaseDeg(z complex128) float64 {
	// A negative zero as the imaginary part would make it -180.
	d := cmplx.Phase(z) * 180 / math.Pi
	if d <= -180 {
		d += 360
	}
	return d
}

// DBs returns DB of each z.
func DBs(z []complex128) []float64 { return each(z, DB) }

// SPLs returns SPL of each p.
func SPLs(p []complex128) []float64 { return each(p, SPL) }

// PhasesDeg returns PhaseDeg of each z.
func PhasesDeg(z []complex128) []float64 { return each(z, PhaseDeg) }

// UnwrappedDeg returns the phase of each z in degrees without jumps: each lies within half a turn of the one
// before it, so the grid must be fine enough for that to be the right one.
func UnwrappedDeg(z []complex128) []float64 {
	d := PhasesDeg(z)
	for i := 1; i < len(d); i++ {
		d[i] += 360 * math.Round((d[i-1]-d[i])/360)
	}
	return d
}

// Magnitudes returns |z| of each z.
func Magnitudes(z []complex128) []float64 {
	return each(z, func(z complex128) float64 { return cmplx.Abs(z) })
}

// EPDRs returns EPDR of each z in Ω.
func EPDRs(z []complex128) []float64 { return each(z, EPDR) }

func each(z []complex128, f func(complex128) float64) []float64 {
	if z == nil {
		return nil
	}
	v := make([]float64, len(z))
	for i := range z {
		v[i] = f(z[i])
	}
	return v
}
