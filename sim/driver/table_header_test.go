package driver

import (
	"strings"
	"testing"
)

// Lines above the rows as measuring programs and people are seen to write them: common practice, no source. want is the
// name that is refused; "" if the table is read.
func TestHeaders(t *testing.T) {
	for header, want := range map[string]string{
		"Freq(Hz) Mag(dB) Phase(deg)":                 "",
		"* Freq(Hz) SPL(dB) Phase(degrees)":           "",
		"Frequency [Hz];SPL [dB re 20 uPa];Phase [°]": "",
		"Hz\tdB\tdeg":            "",
		"freq, |Z|, arg(Z)":      "",
		"Frequenz Betrag Winkel": "",
		"f/Hz Z/Ohm phi/°":       "",
		`"Hertz, Ohms, Degrees"`: "",
		"Fréquence (Hz)  Impédance (ohm)  Phase (degré)": "",
		"Freq[Hz]     dBSPL  Phase[Deg]":                 "",
		"[Frequency (Hz)] [Level] [Phase (deg)]":         "",
		"Freq.;SPL;Min. phase":                           "",

		// Titles and remarks.
		"* Woofer, closed box, phase ok":    "",
		"* Measured at 1 m, 2.83 V, 20 °C":  "",
		"* Phase, measured, 20 Hz":          "",
		"; SPL re 20 uPa":                   "",
		"// min, mean, max of 3 sweeps":     "",
		"* Freq-response, SPL, raw":         "",
		"*  Frequency Step:  2.92":          "",
		"Date 12.11.2025 10:22, 240 points": "",

		"Phase Freq Z":                    "Phase",
		"Hz deg ohm":                      "deg",
		"Freq, Z, Z":                      "Z",
		"Freq Real Imag":                  "Real",
		"* Freq (Hz), Re (ohm), Im (ohm)": "Re(ohm)",
		"Freq;SPL;Group delay":            "Group delay",
		"Freq;SPL;Min":                    "Min",
		`"Freq [kHz]" "SPL" "Phase"`:      "Freq[kHz]",
		"Freq\tZ (kohm)\tPhase":           "Z(kohm)",
		"Freq\tZ (ohm)\tPhase (radians)":  "Phase(radians)",
	} {
		table, err := ReadTable("w.zma", strings.NewReader("A woofer\n"+header+"\n20 60 -10\n25 61 -20\n30 62 -40\n"))
		switch {
		case want == "" && (err != nil || len(table.Rows) != 3):
			t.Errorf("%s: got %v", header, err)
		case want != "" && (err == nil || !strings.HasPrefix(err.Error(), "w.zma:2: the header has "+quote(want)+" for column ")):
			t.Errorf("%s: got error %v, want one about %s", header, err, want)
		}
	}
}

// The unit of the values is held against what the table is taken for.
func TestHeaderUnits(t *testing.T) {
	table := func(header string) *Table { return mustTable(t, header+"\n20 60 -10\n25 61 -20\n30 62 -40\n") }
	if _, err := NewImpedanceTable(table("Hz dB deg")); err == nil {
		t.Error("an impedance in dB")
	}
	if _, err := NewResponseTable(table("Hz ohm deg")); err == nil {
		t.Error("a response in ohm")
	}
	if _, err := NewMinimumResponse(table("Hz ohm deg")); err == nil {
		t.Error("a level in ohm")
	}
	if _, err := NewImpedanceTable(table("Hz ohm deg")); err != nil {
		t.Error(err)
	}
	if _, err := NewResponseTable(table("Hz dB deg")); err != nil {
		t.Error(err)
	}
}
