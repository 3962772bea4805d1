package cli

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"sixdown/sim"
	"sixdown/sim/driver"
)

// fitsText says, for each driver with an impedance table, what was found in it, a few lines each.
func fitsText(fits []sim.DriverFit) string {
	var b strings.Builder
	for _, d := range fits {
		f := d.Fit
		if !f.Follows() {
			b.WriteString(folded("fit       ", fmt.Sprintf("%s: no circuit was found that follows %s; the nearest is %s %% off on the whole, and %s %% at %s. Is it Hz, ohm, degrees?", d.Driver, d.File, percent(f.RMSPercent), percent(f.WorstPercent), hertz(f.WorstAt))))
			continue
		}
		text := d.Driver + ": Re " + estimate(f.Re, " Ω")
		if !f.Resonates() {
			text += "; no resonance is to be told from the table"
		} else {
			text += ", fs " + estimate(f.Fs, " Hz") + ", Qms " + estimate(f.Qms, "") + ", Qes " + estimate(f.Qes, "") + ", Qts " + estimate(f.Qts, "")
		}
		b.WriteString(folded("fit       ", text))
		if v := f.Box; v != nil && f.Resonates() {
			b.WriteString("          vented: fb " + estimate(v.Fb, " Hz") + ", Vas/Vb " + estimate(v.Alpha, "") + ", QL " + estimate(v.QL, "") + "\n")
		}
		fmt.Fprintf(&b, "          within %s %% of %s, worst %s %% at %s\n", percent(f.RMSPercent), d.File, percent(f.WorstPercent), hertz(f.WorstAt))
	}
	return b.String()
}

// percent writes a fit's error; it is not worth telling how far below a hundredth it is.
func percent(v float64) string { return figures(math.Max(v, 0.01), 2) }

// estimate writes a value and its standard deviation to one figure of the latter, but to no more than four of the
// value: "5.62 ± 0.01 Ω". What the four figures hide is left out, and so is a value that is a guess.
func estimate(e driver.Estimate, unit string) string {
	if !(e.Value > 0) || math.IsInf(e.Value, 0) {
		return none
	}
	if !e.Told() {
		return "uncertain"
	}
	finest := 3 - int(math.Floor(math.Log10(e.Value))) // decimals of four figures
	decimals := finest
	if e.Sigma > 0 {
		decimals = min(finest, -int(math.Floor(math.Log10(e.Sigma))))
	}
	decimals = max(decimals, 0)
	value := fixed(e.Value, decimals)
	sigma := strconv.FormatFloat(e.Sigma, 'f', decimals, 64)
	if strings.Trim(sigma, "0.") == "" {
		return value + unit
	}
	return value + " ± " + sigma + unit
}

// The JSON of a driver's fit.
type (
	driverDocument struct {
		Name              string            `json:"name"`
		Impedance         string            `json:"impedance"` // the file
		Re                *estimateDocument `json:"re_ohm"`    // null if the fit does not follow the table
		Fs                *estimateDocument `json:"fs_hz"`     // null, as are the Qs, if no resonance shows
		Qms               *estimateDocument `json:"qms"`
		Qes               *estimateDocument `json:"qes"`
		Qts               *estimateDocument `json:"qts"`
		Box               *boxDocument      `json:"vented_box"`
		Elements          []elementDocument `json:"elements"`
		Follows           bool              `json:"fit_follows_table"`
		RMSErrorPercent   number            `json:"rms_error_percent"`
		WorstErrorPercent number            `json:"worst_error_percent"`
		WorstAtHz         number            `json:"worst_at_hz"`
	}
	// null where the standard deviation is more than half of the value
	estimateDocument struct {
		Value number `json:"value"`
		Sigma number `json:"sigma"`
	}
	boxDocument struct {
		Fb    *estimateDocument `json:"fb_hz"`
		Alpha *estimateDocument `json:"vas_over_vb"`
		QL    *estimateDocument `json:"ql"`
	}
	elementDocument struct {
		Name  string `json:"name"`
		Kind  string `json:"kind"` // R, L or C; the value is in ohm, henry or farad
		From  int    `json:"from"` // node 1 is the plus terminal, node 0 the minus
		To    int    `json:"to"`
		Value number `json:"value"`
	}
)

// driverDocuments returns the fits as JSON has them; [] where there are none.
func driverDocuments(fits []sim.DriverFit) []driverDocument {
	docs := []driverDocument{}
	for _, d := range fits {
		f := d.Fit
		doc := driverDocument{
			Name: d.Driver, Impedance: d.File, Follows: f.Follows(),
			RMSErrorPercent: number(f.RMSPercent), WorstErrorPercent: number(f.WorstPercent), WorstAtHz: number(f.WorstAt),
		}
		if f.Follows() {
			doc.Re = estimated(f.Re)
		}
		if f.Resonates() {
			doc.Fs, doc.Qms, doc.Qes, doc.Qts = estimated(f.Fs), estimated(f.Qms), estimated(f.Qes), estimated(f.Qts)
		}
		if v := f.Box; v != nil && f.Resonates() {
			doc.Box = &boxDocument{estimated(v.Fb), estimated(v.Alpha), estimated(v.QL)}
		}
		for _, e := range f.Elements() {
			doc.Elements = append(doc.Elements, elementDocument{e.Name, [...]string{"R", "L", "C"}[e.Kind], e.From, e.To, number(e.Value)})
		}
		docs = append(docs, doc)
	}
	return docs
}

func estimated(e driver.Estimate) *estimateDocument {
	if !e.Told() {
		return nil
	}
	return &estimateDocument{number(e.Value), number(e.Sigma)}
}

// noteLines writes sentences a line or more each.
func noteLines(notes []string) string {
	var b strings.Builder
	for _, n := range notes {
		b.WriteString(folded("  ", n))
	}
	return b.String()
}
