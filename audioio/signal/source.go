package signal

import (
	"errors"
	"fmt"
	"io"
	"math"
)

// Source is a stream of mono samples, full scale ±1.
type Source interface {
	// ReadSamples stores the next samples in dst and returns how many: as many
	// as fit, fewer only at the end, and then 0 and io.EOF, again and again.
	// Nothing is written past n. The output does not depend on block length.
	ReadSamples(dst []float64) (n int, err error)

	// Len returns the length of the whole signal in samples.
	Len() int
}

const (
	minRate = 1_000
	maxRate = 10_000_000
	// maxSeconds bounds a signal's length: a day is more than any measurement
	// takes, and keeps every product of a rate and a time within an int.
	maxSeconds = 86_400
)

func checkRate(where string, rate int) error {
	if rate < minRate || rate > maxRate {
		return fmt.Errorf("%s: the sample rate is %d Hz; give %d to %d Hz", where, rate, minRate, maxRate)
	}
	return nil
}

// checkSeconds accepts finite times from 0 to a day.
func checkSeconds(where, what string, t float64) error {
	if !(t >= 0 && t <= maxSeconds) {
		return fmt.Errorf("%s: %s is %v s; give 0 to %d s", where, what, t, maxSeconds)
	}
	return nil
}

// peakOr returns peak, or fallback for 0, if it is a level that a file can hold.
func peakOr(where string, peak, fallback float64) (float64, error) {
	if peak == 0 {
		return fallback, nil
	}
	if !(peak > 0 && peak <= 1) {
		return 0, fmt.Errorf("%s: the peak is %v of full scale; give a number above 0 and at most 1", where, peak)
	}
	return peak, nil
}

// rise is the gain of sample i, from 0, of a raised cosine that takes e samples.
// A sample lies at the middle of its step, so that rise and fall mirror each other.
func rise(i, e int) float64 {
	if i >= e {
		return 1
	}
	return 0.5 - 0.5*math.Cos(math.Pi*(float64(i)+0.5)/float64(e))
}

// edge is the gain of sample i of a signal of n samples that rises over its first
// e and falls over its last, 2e ≤ n.
func edge(i, n, e int) float64 { return rise(min(i, n-1-i), e) }

var errNoRandom = errors.New("signal: noise: there is no source of randomness; give a rand.Source")

// samplesLeft returns how much of dst can be filled at pos of total, or io.EOF.
func samplesLeft(dst []float64, pos, total int) (int, error) {
	if pos >= total {
		return 0, io.EOF
	}
	return min(len(dst), total-pos), nil
}
