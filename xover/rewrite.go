package xover

import (
	"bytes"
	"fmt"
	"strconv"
	"strings"

	"sixdown/xover/quantity"
)

// Rewrite returns a copy of the design file src with other parts and ways: those of d. All else stays as it was, comments and
// order too, except that controls go, whose potentiometers have gone. The result is read again and must say what d says of
// parts and ways and what src says of the rest; else Rewrite fails.
func Rewrite(src []byte, d *Design) ([]byte, error) {
	old, _, err := Parse("", src)
	if err != nil {
		return nil, err
	}
	var out bytes.Buffer
	drop := false
	for line := range bytes.Lines(src) {
		if t := strings.TrimSpace(string(line)); strings.HasPrefix(t, "[") {
			name, _, _ := strings.Cut(strings.Trim(t, "[ "), "]")
			top, _, _ := strings.Cut(strings.TrimSpace(name), ".")
			switch strings.TrimSpace(top) {
			case "parts", "way", "control":
				drop = true
			default:
				drop = false
			}
		}
		if !drop {
			out.Write(line)
		}
	}
	text := bytes.TrimRight(out.Bytes(), " \r\n")
	out.Reset()
	out.Write(text)
	out.WriteString("\n\n[parts]\n")
	for i := range d.Parts {
		writePart(&out, &d.Parts[i])
	}
	for i := range d.Ways {
		writeWay(&out, &d.Ways[i])
	}
	got, _, err := Parse("", out.Bytes())
	if err != nil {
		return nil, fmt.Errorf("the rewritten file cannot be read, so it is given up: %w", err)
	}
	want := *old
	want.Parts, want.Ways, want.Controls = d.Parts, d.Ways, nil
	if !equalButPositions(got, &want) {
		return nil, &Error{What: "the rewritten file does not say what it should, so it is given up", Mend: "write the tables of the design with a header each, [parts] and [[way]]"}
	}
	return out.Bytes(), nil
}

// writePart writes a line of [parts].
func writePart(out *bytes.Buffer, p *Part) {
	value := strconv.Quote(quantity.Format(p.Value, p.Kind.Unit()))
	switch {
	case p.DCR > 0:
		fmt.Fprintf(out, "%s = { value = %s, dcr = %q }\n", p.Name, value, quantity.Format(p.DCR, quantity.Ohm))
	default:
		fmt.Fprintf(out, "%s = %s\n", p.Name, value)
	}
}

// writeWay writes a [[way]].
func writeWay(out *bytes.Buffer, w *Way) {
	fmt.Fprintf(out, "\n[[way]]\nname = %q\ndriver = %q\n", w.Name, w.Driver)
	if w.Reversed {
		out.WriteString("polarity = \"reversed\"\n")
	}
	list := func(key string, n int, text func(i int) string) {
		items := make([]string, n)
		for i := range items {
			items[i] = strconv.Quote(text(i))
		}
		if n > 0 {
			fmt.Fprintf(out, "%s = [%s]\n", key, strings.Join(items, ", "))
		}
	}
	list("target", len(w.Targets), func(i int) string { return w.Targets[i].String() })
	list("network", len(w.Network), func(i int) string { return w.Network[i].String() })
}

// String writes the target as a design file has it; read again, it gives the same target.
func (t Target) String() string {
	side := "low-pass"
	if t.HighPass {
		side = "high-pass"
	}
	text := fmt.Sprintf("%s %s %d", side, t.Shape, t.Order)
	if t.RippleDB > 0 {
		text += " ripple " + quantity.Format(t.RippleDB, quantity.Decibel)
	}
	if t.Reference != "" && t.Reference != "magnitude" {
		text += " reference " + t.Reference
	}
	return text + " at " + quantity.Format(t.Frequency, quantity.Hertz)
}
