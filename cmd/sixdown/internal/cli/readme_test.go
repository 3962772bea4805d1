package cli

import (
	"os"
	"strings"
	"testing"

	"sixdown/sim"
	"sixdown/xover"
)

// TestReadmeDesign reads the design file that the README shows.
func TestReadmeDesign(t *testing.T) {
	src, err := os.ReadFile("../../../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, text, ok := strings.Cut(string(src), "```toml\n")
	text, _, closed := strings.Cut(text, "```")
	if !ok || !closed {
		t.Fatal("README.md shows no design file")
	}
	d, warnings, err := xover.Parse("README.md", []byte(text))
	if err != nil || len(warnings) > 0 {
		t.Fatalf("%v, warnings %v", err, warnings)
	}
	sys, err := sim.New(d, nil)
	if err != nil {
		t.Fatal(err)
	}
	if !sys.Sums() {
		t.Error("the README's design has no sum at the ear")
	}
}
