package cli

import (
	"encoding/json"
	"strings"
	"testing"

	"sixdown/sim"
	"sixdown/sim/driver"
)

// A figure that is no more than a guess is printed nowhere: "Qms 1000 ± 11627" says nothing but looks like something.
func TestGuessesAreNotTold(t *testing.T) {
	fits := []sim.DriverFit{{Driver: "w", File: "w.zma", Fit: &driver.Fit{
		Re: driver.Estimate{Value: 5.6, Sigma: 0.01}, Fs: driver.Estimate{Value: 100, Sigma: 2}, RMSPercent: 1,
		Qms: driver.Estimate{Value: 1000, Sigma: 11627}, Qes: driver.Estimate{Value: 0.4, Sigma: 0.01}, Qts: driver.Estimate{Value: 0.4, Sigma: 0.01},
	}}}
	const want = "fit       w: Re 5.60 ± 0.01 Ω, fs 100 ± 2 Hz, Qms uncertain, Qes 0.40 ± 0.01, Qts 0.40 ± 0.01\n"
	if got := fitsText(fits); !strings.HasPrefix(got, want) {
		t.Errorf("got %s, want %s", got, want)
	}
	doc, err := json.Marshal(driverDocuments(fits))
	if err != nil || !strings.Contains(string(doc), `"fs_hz":{"value":100,"sigma":2},"qms":null,"qes":{"value":0.4,`) {
		t.Errorf("got %s, %v", doc, err)
	}

	fits[0].Fit.Qts.Sigma = 0.3
	if got := fitsText(fits); !strings.Contains(got, "no resonance is to be told") || strings.Contains(got, "fs") {
		t.Errorf("got %s", got)
	}
	fits[0].Fit.RMSPercent = 80
	if got := fitsText(fits); strings.Contains(got, "Re") || !strings.Contains(got, "no circuit was found that follows w.zma") {
		t.Errorf("got %s", got)
	}
}
