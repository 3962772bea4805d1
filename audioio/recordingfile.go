package audioio

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
)

// What a recording's description may hold at most: far more than Render writes, and too little to exhaust a
// machine.
const (
	maxRecordingBytes = 4 << 20
	maxWays           = 63
	minBand           = 1 // Hz
	maxFitDB          = 0.1
	maxFitDeg         = 1.0
)

// ReadRecording reads the description that lies beside a recording.
func ReadRecording(r io.Reader) (*Recording, error) {
	src, err := io.ReadAll(io.LimitReader(r, maxRecordingBytes+1))
	if err != nil {
		return nil, err
	}
	if len(src) > maxRecordingBytes {
		return nil, fmt.Errorf("it is longer than %d bytes; give the file that render wrote", maxRecordingBytes)
	}
	rec := new(Recording)
	if err := json.Unmarshal(src, rec); err != nil {
		return nil, fmt.Errorf("it is no description of a recording (%v); give the file that render wrote", err)
	}
	if err := rec.plausible(); err != nil {
		return nil, err
	}
	return rec, nil
}

// Write writes the description as indented JSON.
func (rec *Recording) Write(w io.Writer) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(rec)
}

// plausible checks what a description says before anything is computed from it.
func (rec *Recording) plausible() error {
	switch rec.Signal {
	case Tones:
		if len(rec.Tones) == 0 {
			return fmt.Errorf("signal is tones and tones is empty; render the design again")
		}
		if err := rec.Validate(); err != nil {
			return err
		}
	case Sweep, Noise, Music:
	default:
		return fmt.Errorf("signal is %q; it is one of %q, %q, %q and %q", rec.Signal, Tones, Sweep, Noise, Music)
	}
	if len(rec.Ways) == 0 || len(rec.Ways) > maxWays {
		return fmt.Errorf("it names %d ways; a recording has 1 to %d", len(rec.Ways), maxWays)
	}
	if rec.Rate < 1000 || rec.Rate > 10_000_000 {
		return fmt.Errorf("rate is %d Hz; give 1000 Hz to 10 MHz", rec.Rate)
	}
	if rec.LengthSamples < 1 || rec.LengthSamples > math.MaxInt32 {
		return fmt.Errorf("length_samples is %d; give 1 to %d", rec.LengthSamples, math.MaxInt32)
	}
	if v := rec.VoltsPerFullScale; !(v > 0) || math.IsInf(v, 1) {
		return fmt.Errorf("volts_per_full_scale is %g; give a positive number", v)
	}
	if rec.Signal == Sweep || rec.Signal == Noise {
		if b := rec.BandHz; !(b[0] >= minBand && b[1] > b[0] && b[1] <= float64(rec.Rate)) {
			return fmt.Errorf("band_hz is %g to %g Hz; give a band from %d Hz or higher to below the rate", b[0], b[1], minBand)
		}
	}
	// A recording may not widen the limits that it is held to.
	if !(rec.FitDB >= 0 && rec.FitDB <= maxFitDB && rec.FitDeg >= 0 && rec.FitDeg <= maxFitDeg) {
		return fmt.Errorf("fit_error_db is %g and fit_error_deg %g; above %g dB or %g° a recording proves nothing: render the design again", rec.FitDB, rec.FitDeg, maxFitDB, maxFitDeg)
	}
	return nil
}
