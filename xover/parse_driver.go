package xover

import (
	"fmt"
	"math"
	"path"
	"strings"

	"sixdown/xover/quantity"
)

// driver reads one [driver.NAME] table.
func (p *parser) driver(name string, r *tableReader) {
	d := Driver{Name: name, Pos: p.pos(r.table.at)}
	hasImpedance := p.driverImpedance(&d, r)
	r.text("response", &d.ResponseFile)
	p.driverResponses(&d, r)
	phase, _ := r.word("phase", "measured", "minimum")
	d.MinimumPhase = phase == "minimum"
	r.quantities("at", quantity.Metre, anySign, d.At[:], `at = ["0 mm", "-90 mm", "-22 mm"]`)
	d.HasMic = r.quantities("mic", quantity.Metre, anySign, d.Mic[:], `mic = ["0 mm", "0 mm", "1 m"]`)

	hasRe := r.quantity("re", quantity.Ohm, positive, &d.Re)
	hasLe := r.quantity("le", quantity.Henry, notNegative, &d.Le)
	hasLoss := p.driverLoss(&d, r)
	hasFs := r.quantity("fs", quantity.Hertz, positive, &d.Fs)
	const ratio = "a number above 0 and up to 1000, such as 3.1"
	hasQms := r.number("qms", 1e-3, 1000, ratio, &d.Qms)
	hasQes := r.number("qes", 1e-3, 1000, ratio, &d.Qes)
	hasVas := r.quantity("vas", quantity.CubicMetre, positive, &d.Vas)
	r.quantity("sd", quantity.SquareMetre, positive, &d.Sd)
	r.quantity("diameter", quantity.Metre, positive, &d.Diameter)
	d.HasSensitivity = r.quantity("sensitivity", quantity.Decibel, anySign, &d.Sensitivity)
	r.quantity("xmax", quantity.Metre, positive, &d.Xmax)
	hasBox := p.driverBox(&d, r)
	p.driverBreakup(&d, r)

	switch {
	case !hasImpedance && !hasRe:
		r.missing("impedance and no re", `give impedance = "FILE.zma" or impedance = "8 ohm", or the data sheet's re`)
	case d.Resistance > 0 && (hasRe || hasLe || hasLoss):
		p.fail(d.Pos, r.label+" is a plain resistance and has a voice coil too", "take impedance out, or re, le and le_loss")
	case !hasRe && (hasLe || hasLoss):
		r.missing("re", "le and le_loss lie in series with it; give it too")
	}
	switch {
	case hasFs && !(hasQms && hasQes):
		p.fail(p.pos(r.table.index["fs"].at), r.label+" has fs without both qms and qes", "give all three; with Qts, Qes = Qts·Qms/(Qms − Qts)")
	case !hasFs && (hasQms || hasQes):
		r.missing("fs", "give it with qms and qes, or take them out")
	}
	if hasBox && d.Box.Kind != OpenBox {
		if !hasVas {
			r.missing("vas", "the box needs the driver's vas and its own volume")
		}
		if !hasFs {
			r.missing("fs", "the box changes the driver's resonance; give fs, qms and qes")
		}
	}
	if d.ResponseFile == "" && r.table.index["responses"] == nil {
		for _, key := range []string{"phase", "mic"} {
			if e := r.table.index[key]; e != nil {
				p.warn(p.pos(e.at), fmt.Sprintf("%s has %s and no response", r.label, key), "give the response file, or take it out")
			}
		}
	} else if e := r.table.index["sensitivity"]; e != nil {
		p.warn(p.pos(e.at), r.label+" has a response file, whose level counts, and a sensitivity", "take one of them out")
	}
	if e := r.table.index["breakup"]; e != nil && d.ResponseFile != "" {
		p.warn(p.pos(e.at), r.label+" has a response file, which has the breakup in it, and breakup", "take one of them out")
	} else if e != nil && !d.HasSensitivity {
		p.warn(p.pos(e.at), r.label+" has breakup and no sensitivity, so it makes no sound", "give the sensitivity, or take breakup out")
	}
	p.design.Drivers = append(p.design.Drivers, d)
}

// driverImpedance reads `impedance`, which is a resistance or the name of a table.
func (p *parser) driverImpedance(d *Driver, r *tableReader) (has bool) {
	if e := r.take("impedance"); e != nil && e.value.kind == numberNode {
		r.wrongType("impedance", e.value, fmt.Sprintf("write \"%s ohm\", or the name of a file in quotes", shortened(e.value.text)))
		return true
	}
	var text string
	if has = r.text("impedance", &text); text == "" {
		return has
	}
	n := r.table.index["impedance"].value
	if isFileName(text) {
		d.ImpedanceFile = text
		return has
	}
	if v, ok := p.quantityOf("impedance", n, quantity.Ohm, positive); ok {
		d.Resistance = v
	}
	return has
}

// isFileName tells the name of a table, "woofer.zma", from a quantity, "8.5 ohm": it does not begin like a
// number, or it ends in an extension.
func isFileName(text string) bool {
	if !strings.ContainsRune("0123456789+-.,", rune(text[0])) {
		return true
	}
	ext := path.Ext(text)
	return len(ext) > 1 && !strings.ContainsAny(ext[1:2], "0123456789") && !strings.Contains(ext, " ")
}

// driverLoss reads `le_loss = { r2, l2 }`.
func (p *parser) driverLoss(d *Driver, r *tableReader) bool {
	r.inTable("le_loss", `le_loss = { r2 = "3 ohm", l2 = "0.5 mH" }`, func(loss *tableReader) {
		loss.label = r.label + " le_loss"
		hasR2 := loss.quantity("r2", quantity.Ohm, positive, &d.LossR2)
		hasL2 := loss.quantity("l2", quantity.Henry, positive, &d.LossL2)
		if !hasR2 || !hasL2 {
			loss.missing("pair of r2 and l2", `give both, le_loss = { r2 = "3 ohm", l2 = "0.5 mH" }`)
		}
	})
	return r.table.index["le_loss"] != nil
}

// driverBox reads `box = { kind, volume, tuning, ql }`.
func (p *parser) driverBox(d *Driver, r *tableReader) bool {
	r.inTable("box", `box = { kind = "closed", volume = "12 l" }`, func(box *tableReader) {
		box.label = r.label + " box"
		kind, ok := box.word("kind", "open", "closed", "vented")
		if box.table.index["kind"] == nil {
			box.missing("kind", `give kind = "open", "closed" or "vented"`)
		}
		d.Box.Kind = map[string]BoxKind{"closed": ClosedBox, "vented": VentedBox}[kind]
		hasVolume := box.quantity("volume", quantity.CubicMetre, positive, &d.Box.Volume)
		hasTuning := box.quantity("tuning", quantity.Hertz, positive, &d.Box.Tuning)
		hasQL := box.number("ql", 0.1, 1000, "a number from 0.1 to 1000, such as 7", &d.Box.QL)
		if !ok {
			return
		}
		if d.Box.Kind != OpenBox && !hasVolume {
			box.missing("volume", fmt.Sprintf(`a %s box needs it, such as volume = "12 l"`, kind))
		}
		if d.Box.Kind == VentedBox && !hasTuning {
			box.missing("tuning", `a vented box needs it, such as tuning = "45 Hz"`)
		}
		if d.Box.Kind == VentedBox && !hasQL {
			d.Box.QL = 7 // common practice, no source
		}
		if d.Box.Kind == OpenBox && hasVolume {
			p.fail(p.pos(box.table.index["volume"].at), box.label+" is open and has a volume", `take volume out, or write kind = "closed"`)
		}
		if d.Box.Kind != VentedBox && (hasTuning || hasQL) {
			p.fail(p.pos(box.table.at), fmt.Sprintf("%s is %s and has a tuning or a ql", box.label, kind), `take them out, or write kind = "vented"`)
		}
	})
	return r.table.index["box"] != nil
}

// driverBreakup reads `breakup = [{ at, q, gain }]`.
func (p *parser) driverBreakup(d *Driver, r *tableReader) {
	const example = `breakup = [{ at = "4.5 kHz", q = 4, gain = "6 dB" }]`
	e := r.take("breakup")
	if e == nil {
		return
	}
	if e.value.kind != listNode || len(e.value.items) == 0 {
		p.fail(p.pos(e.at), "breakup is "+emptyOr(e.value), "write it like "+example)
		return
	}
	for i, item := range e.value.items {
		switch {
		case i >= MaxPeaks:
			p.fail(p.pos(item.at), fmt.Sprintf("%s breakup has more than %d peaks", r.label, MaxPeaks), "leave some out")
			return
		case item.kind != tableNode:
			p.fail(p.pos(item.at), fmt.Sprintf("%s breakup holds %s", r.label, item.kind), "write it like "+example)
			continue
		}
		peak := p.read(item.table, "breakup", r.label+" breakup")
		d.Breakup = append(d.Breakup, p.driverPeak(peak))
		peak.done()
	}
}

// driverPeak reads `{ at, q, gain }`.
func (p *parser) driverPeak(r *tableReader) (peak Peak) {
	if !r.quantity("at", quantity.Hertz, positive, &peak.Frequency) {
		r.missing("at", `give the peak's frequency, such as at = "4.5 kHz"`)
	}
	if !r.number("q", 0.1, 1000, "a number from 0.1 to 1000, such as 4", &peak.Q) {
		r.missing("q", "give the Q of the resonance, its frequency over its width, such as q = 4")
	}
	if !r.quantity("gain", quantity.Decibel, anySign, &peak.GainDB) {
		r.missing("gain", `give how high the peak stands, such as gain = "6 dB", or "-6 dB" for a dip`)
	} else if math.Abs(peak.GainDB) > maxPeakDB {
		p.fail(p.pos(r.table.index["gain"].value.at), fmt.Sprintf("gain: %s is beyond what a resonance does", quantity.Format(peak.GainDB, quantity.Decibel)),
			fmt.Sprintf("give it between -%d dB and %d dB", maxPeakDB, maxPeakDB))
	}
	return peak
}
