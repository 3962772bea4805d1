// Package demo holds the built-in example: an invented two-way loudspeaker.
package demo

import (
	_ "embed"
	"fmt"
	"strings"
)

// HarbourFile is the name that the example's design is written under.
const HarbourFile = "harbour.toml"

// Harbour is the example's design file.
//
//go:embed harbour.toml
var Harbour string

// ByTheBook is Harbour with another network: the [parts] and the ways' network lines of a design for the same
// drivers, such as start writes. Everything else, the drivers' cabinet and places above all, stays.
func ByTheBook(title, other string) (string, error) {
	const parts, drivers, network = "[parts]", "[driver.", "network = "
	own, theirs := span(Harbour, parts, drivers), span(other, parts, drivers)
	if own == "" || theirs == "" {
		return "", fmt.Errorf("demo: a design has no %s before its first %s", parts, drivers)
	}
	text := strings.Replace(Harbour, own, theirs, 1)
	text = strings.Replace(text, `title = "Harbour"`, fmt.Sprintf("title = %q", title), 1)
	networks := linesWith(other, network)
	var b strings.Builder
	for line := range strings.Lines(text) {
		if strings.HasPrefix(line, network) {
			if len(networks) == 0 {
				return "", fmt.Errorf("demo: the other design has fewer ways than Harbour")
			}
			line, networks = networks[0], networks[1:]
		}
		b.WriteString(line)
	}
	return b.String(), nil
}

// span is the part of text from a line that begins with from up to the next that begins with to.
func span(text, from, to string) string {
	var b strings.Builder
	inside := false
	for line := range strings.Lines(text) {
		switch {
		case strings.HasPrefix(line, from):
			inside = true
		case inside && strings.HasPrefix(line, to):
			return b.String()
		}
		if inside {
			b.WriteString(line)
		}
	}
	return ""
}

func linesWith(text, prefix string) []string {
	var lines []string
	for line := range strings.Lines(text) {
		if strings.HasPrefix(line, prefix) {
			lines = append(lines, line)
		}
	}
	return lines
}
