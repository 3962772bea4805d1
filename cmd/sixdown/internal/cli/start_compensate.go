package cli

import (
	"fmt"
	"math"

	"sixdown/sim/driver"
	"sixdown/xover"
	"sixdown/xover/ladder"
	"sixdown/xover/quantity"
)

// What is worth a network across a driver (common practice, no source).
const (
	leastCoil      = 0.1 // reactance of the voice coil at a way's high-pass, over re
	farthestOctave = 2   // octaves between the resonance and the way's high-pass
)

// compensate adds the network that makes the driver the resistance its way is sized for, as far as enough is
// said of the driver and it does some good; a remark says what is left out. highPass is the frequency in Hz of the
// way's high-pass, 0 if it has none.
func (w *startWay) compensate(namer *ladder.Namer, d *startDriver, highPass float64, lowPass bool) error {
	s := d.sheet()
	coil := s.Re != 0 && s.Le != 0
	if coil && !lowPass {
		if x := 2 * math.Pi * highPass * s.Le; x < leastCoil*s.Re {
			coil = false
			w.note(fmt.Sprintf("no network for the voice coil: at %s it has %s, which counts little beside %s", hertz(highPass), quantity.Round(x, quantity.Ohm, 2), quantity.Round(s.Re, quantity.Ohm, 3)))
		}
	}
	peak := s.Re != 0 && s.Fs != 0 && s.Qms != 0 && s.Qes != 0
	if why := peakLeftOut(d.box().Kind, s.Fs, highPass); peak && why != "" {
		peak = false
		w.note(fmt.Sprintf("no network for the resonance at %s: %s", hertz(s.Fs), why))
	}
	var n ladder.Network
	var err error
	switch {
	case coil && peak:
		n, err = ladder.Dual(s.Re, s.Le, s.Fs, s.Qms, s.Qes)
	case coil:
		n, err = ladder.VoiceCoil(s.Re, s.Le)
	case peak:
		n, err = ladder.Resonance(s.Re, s.Fs, s.Qms, s.Qes)
	default:
		return nil
	}
	if err != nil {
		return fmt.Errorf("--driver %s: %w", d.name, err)
	}
	w.add(namer, fmt.Sprintf("across the driver, so that it shows %s", quantity.Round(s.Re, quantity.Ohm, 3)), n)
	return nil
}

// peakLeftOut says why a network for the impedance peak at fs would do no good to a way with that high-pass, both
// in Hz; "" if it would.
func peakLeftOut(box xover.BoxKind, fs, highPass float64) string {
	if box == xover.VentedBox {
		return "a vented box makes two peaks of it"
	}
	if highPass == 0 {
		return "the way has no high-pass that it could disturb"
	}
	switch octaves := math.Log2(highPass / fs); {
	case octaves > farthestOctave:
		return fmt.Sprintf("it lies %.1f octaves below the high-pass at %s", octaves, hertz(highPass))
	case octaves < -farthestOctave:
		return fmt.Sprintf("it lies %.1f octaves above the high-pass at %s", -octaves, hertz(highPass))
	}
	return ""
}

// sheet returns the driver's data sheet, a closed box applied; what is not said is 0.
func (d *startDriver) sheet() driver.DataSheet {
	s := driver.DataSheet{Re: d.number("re"), Le: d.number("le"), Fs: d.number("fs"), Qms: d.number("qms"), Qes: d.number("qes")}
	if b, vas := d.box(), d.number("vas"); b.Kind == xover.ClosedBox && vas > 0 {
		s = s.InClosedBox(vas, b.Volume)
	}
	return s
}

// resonance is where the driver resonates, in Hz, in its box if that is closed; 0: not said.
func (d *startDriver) resonance() float64 { return d.sheet().Fs }
