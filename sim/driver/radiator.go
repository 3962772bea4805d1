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

// Flat is a driver whose pressure follows its terminal voltage at all frequencies: its sensitivity, in dB SPL
// at 1 m for ReferenceVoltage. The drivers of the published crossover tables are such.
type Flat float64

// Pressure returns the same at every frequency.
func (d Flat) Pressure(float64) complex128 { return complex(pascal(float64(d)), 0) }

// A Sheet is a driver from its data sheet as a source of sound.
type Sheet struct {
	DataSheet
	Sensitivity float64 // dB SPL at 1 m for ReferenceVoltage, in the band above resonance where the coil's inductance does not count yet
}

// Pressure returns the pressure of a small diaphragm that moves as DataSheet.Acceleration says.
func (d Sheet) Pressure(f float64) complex128 {
	return complex(pascal(d.Sensitivity), 0) * d.Acceleration(complex(0, 2*math.Pi*f))
}
