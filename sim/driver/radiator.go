package driver

import "math"

// ReferencePressure is the rms sound pressure in Pa at 0 dB SPL (ISO 1683).
const ReferencePressure = 20e-6

// ReferenceVoltage is the rms voltage across the terminals to which sensitivities and measured responses refer:
// 1 W into 8 Ω, rounded as the trade does.
const ReferenceVoltage = 2.83

// pascal returns the pressure in Pa for each volt of a driver that makes spl dB at ReferenceVoltage.
func pascal(spl float64) float64 {
	return ReferencePressure / ReferenceVoltage * math.Pow(10, spl/20)
}

// A Flat driver's pressure follows its terminal voltage at all frequencies. The drivers of the published
// crossover tables are such.
type Flat struct {
	perVolt complex128 // Pa
}

// NewFlat returns a flat driver of the given sensitivity in dB SPL at 1 m for ReferenceVoltage.
func NewFlat(sensitivity float64) Flat { return Flat{complex(pascal(sensitivity), 0)} }

// Pressure returns the same at every frequency.
func (d Flat) Pressure(float64) complex128 { return d.perVolt }

// A Sheet is a driver from its data sheet as a source of sound.
type Sheet struct {
	sheet   DataSheet
	perVolt complex128 // Pa, where the acceleration is 1
}

// NewSheet returns the source of sound that a data sheet describes. The sensitivity, in dB SPL at 1 m for
// ReferenceVoltage, is that in the band above resonance where the coil's inductance does not count yet.
func NewSheet(d DataSheet, sensitivity float64) Sheet {
	return Sheet{sheet: d, perVolt: complex(pascal(sensitivity), 0)}
}

// Pressure returns the pressure of a small diaphragm that moves as DataSheet.Acceleration says.
func (d Sheet) Pressure(f float64) complex128 {
	return d.perVolt * d.sheet.Acceleration(complex(0, 2*math.Pi*f))
}
