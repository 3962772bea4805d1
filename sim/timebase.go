package sim

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"sixdown/sim/driver"
	"sixdown/sim/field"
)

// A Flight is what time the measured phase of a driver's response holds beyond minimum phase: the sound's way to the microphone and
// the delay of what recorded it, as far as they were not taken out.
type Flight struct {
	Driver string
	File   string
	Delay  float64 // s; negative if more was taken out than there was
	Spread float64 // s, its standard deviation; +Inf, and Delay 0, where the phase follows no delay
	Known  bool    // Spread is so small that Delay can be compared

	base float64 // s, Delay less what the places of driver and microphone make of it: 0 where no more than they is in it
}

// apartTime is how far in s the time bases of two drivers must be apart to be two: acoustic centres are not stated so badly that
// sound would take as long, 0.34 m. Common practice, no source.
const apartTime = 1e-3

// Flights returns what the drivers with a response of measured phase hold, in the order of the ways, each driver once.
func (s *System) Flights() []Flight {
	var fs []Flight
	for _, u := range s.units {
		if f, ok := u.speaker.flight(s.listener.SoundSpeed); ok && !slices.ContainsFunc(fs, func(o Flight) bool { return o.Driver == f.Driver }) {
			fs = append(fs, f)
		}
	}
	return fs
}

// flight returns what the driver's phase holds; false if it is not measured.
func (sp *speaker) flight(soundSpeed float64) (Flight, bool) {
	r, ok := sp.radiator.(*driver.ResponseTable)
	if !ok {
		return Flight{}, false
	}
	f := Flight{Driver: sp.name, File: r.Name()}
	f.Delay, f.Spread = r.ExcessDelay()
	f.Known = f.Spread < apartTime/5
	f.base = f.Delay - (sp.at.Distance(sp.mic)-sp.mic.Distance(field.Point{}))/soundSpeed
	return f, true
}

// OneTimeBase reports whether the phases of all drivers can be held against each other: no two measured ones are more than a
// millisecond apart beyond what their places account for, and none is from one that is modelled, which holds no flight time.
func (s *System) OneTimeBase() bool { return s.oneTimeBase(func(int) bool { return true }) }

// HeldFlight returns the time in s that all drivers' measured phases hold besides what their places account for, the least of
// them; false if a driver's is not known, or the time is no more than a few tenths of a millisecond.
func (s *System) HeldFlight() (seconds float64, ok bool) {
	held := math.Inf(1)
	for _, u := range s.units {
		f, measured := u.speaker.flight(s.listener.SoundSpeed)
		if !measured || !f.Known {
			return 0, false
		}
		held = min(held, f.base)
	}
	return held, held > leastHeld && !math.IsInf(held, 1)
}

// leastHeld in s is more than drivers are apart in depth, 0.1 m: common practice, no source.
const leastHeld = 0.3e-3

// SoundSpeed returns the speed of sound in m/s.
func (s *System) SoundSpeed() float64 { return s.listener.SoundSpeed }

// oneTimeBase is OneTimeBase for the drivers of those ways for which of is true.
func (s *System) oneTimeBase(of func(way int) bool) bool {
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, u := range s.units {
		if u.speaker.radiator == nil || !of(u.way) {
			continue
		}
		base := 0.0
		if f, measured := u.speaker.flight(s.listener.SoundSpeed); measured {
			if !f.Known {
				continue
			}
			base = f.base
		}
		lo, hi = min(lo, base), max(hi, base)
	}
	return !(hi-lo > apartTime)
}

// warnTimeBase says that phases cannot be held against each other, and what is to be done.
func (s *System) warnTimeBase() {
	if s.OneTimeBase() {
		return
	}
	var held []string
	modelled := ""
	for _, f := range s.Flights() {
		if f.Known {
			held = append(held, fmt.Sprintf("%s holds %.2f ms of flight time", f.File, 1e3*f.Delay))
		}
	}
	for _, u := range s.units {
		if u.speaker.radiator != nil && !u.speaker.timed() {
			modelled = fmt.Sprintf(", %s, whose phase is not measured, none", u.speaker.name)
		}
	}
	s.warnings = append(s.warnings, fmt.Sprintf(`the drivers are not on one time base: %s%s; their sum and the phases between them mean nothing; measure all from one place with one trigger, or give phase = "minimum" and at`,
		strings.Join(held, ", "), modelled))
}

// timed reports whether the speaker's phase is measured.
func (sp *speaker) timed() bool {
	_, ok := sp.radiator.(*driver.ResponseTable)
	return ok
}
