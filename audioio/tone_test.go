package audioio_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"sixdown/audioio"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
	"sixdown/xover"
	"sixdown/xover/tone"
)

// Tone networks of every kind at five settings, those with an amplifier too: what the differential equations make of tones meets the
// prediction within the limits of crossovers, 0.002 dB and 0.02° at 24 bits, where a point counts.
func TestToneNetworksMeetThePrediction(t *testing.T) {
	for _, k := range tone.Kinds() {
		for i, at := range []float64{0, 0.2, 0.5, 0.8, 1} {
			t.Run(fmt.Sprintf("%s at %g", k, at), func(t *testing.T) {
				d, _, err := xover.Parse(string(k), []byte(k.Text()))
				if err != nil {
					t.Fatal(err)
				}
				for c := range d.Controls { // several controls not all alike
					d.Controls[c].At = at
					if c%2 == 1 {
						d.Controls[c].At = []float64{0.5, 1, 0.2, 0, 0.8}[i]
					}
				}
				sys, err := sim.New(d, nil)
				if err != nil {
					t.Fatal(err)
				}
				if testing.Short() && i%2 == 1 {
					t.Skip("short")
				}
				file, rec := renderTones(t, d, sys, audioio.Settings{Wav: wavfile.Settings{Encoding: wavfile.PCM24, Dither: rand.NewPCG(1, 1)}})
				v := verify(t, sys, file, rec)
				counted := 0
				for _, p := range v.Points {
					if p.Counted {
						counted++
					}
				}
				if counted == 0 {
					if v.Pass {
						t.Error("passes without a point that counts")
					}
					return // a volume at nothing, say
				}
				if db, deg := v.WorstGain.GainErrorDB(), v.WorstPhase.PhaseErrorDeg(); math.Abs(db) > 0.002 || math.Abs(deg) > 0.02 {
					t.Errorf("worst %.5f dB and %.5f° of %d points", db, deg, counted)
				}
			})
		}
	}
}
