package cli

import (
	"fmt"
	"io"
	"time"
)

// A progress is one line on standard error that says how far a long job is. It is silent unless standard error
// is a terminal.
type progress struct {
	w     io.Writer // nil: silent
	label string
	drawn time.Time
}

// newProgress makes a progress line that begins with label.
func newProgress(s *streams, label string) *progress {
	if _, ok := isTerminal(s.err); !ok {
		return &progress{}
	}
	return &progress{w: s.err, label: label}
}

// at redraws the line, ten times a second at most: fraction, 0 to 1, is done.
func (p *progress) at(fraction float64) {
	if p.w == nil || time.Since(p.drawn) < time.Second/10 {
		return
	}
	p.drawn = time.Now()
	fmt.Fprintf(p.w, "\r%s %3.0f %%", p.label, 100*min(max(fraction, 0), 1))
}

// done takes the line away. It must be called before anything else is printed.
func (p *progress) done() {
	if p.w != nil && !p.drawn.IsZero() {
		fmt.Fprintf(p.w, "\r%*s\r", len(p.label)+6, "")
	}
}
