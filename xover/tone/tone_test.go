package tone

import (
	"strings"
	"testing"

	"sixdown/xover"
)

// Every kind is a tone network that reads without a warning, has a title and controls that each turn a potentiometer, and says in
// its first line what it does.
func TestTemplates(t *testing.T) {
	for _, k := range Kinds() {
		d, warnings, err := xover.Parse(string(k)+".toml", []byte(k.Text()))
		if err != nil || len(warnings) > 0 {
			t.Errorf("%s: %v %v", k, err, warnings)
			continue
		}
		if d.Tone == nil || d.Title == "" || len(d.Controls) == 0 || d.Tone.Load == 0 {
			t.Errorf("%s: tone %v, title %q, %d controls", k, d.Tone, d.Title, len(d.Controls))
		}
		for _, p := range d.Parts {
			turned := false
			for _, c := range d.Controls {
				turned = turned || c.Part == p.Name
			}
			if (p.Kind == xover.Potentiometer) != turned {
				t.Errorf("%s: %s is a potentiometer: %t, has a control: %t", k, p.Name, !turned, turned)
			}
		}
		if about := k.About(); !strings.HasSuffix(about, ".") && !strings.Contains(about, ":") || strings.HasPrefix(about, "#") {
			t.Errorf("%s: about %q", k, about)
		}
	}
	if Kind("nothing").Text() != "" {
		t.Error("what is not there has a text")
	}
}
