package cli

import (
	"encoding/json"
	"fmt"
	"io"
)

// streams are what a command reads from and prints to.
type streams struct {
	in  io.Reader
	out io.Writer // the answer alone
	err io.Writer // warnings, errors and progress
}

// warn prints a warning, one sentence "where: what; how to mend".
func (s *streams) warn(text string) { fmt.Fprintf(s.err, "sixdown: warning: %s\n", text) }

// answer prints a whole answer.
func (s *streams) answer(text string) error {
	_, err := io.WriteString(s.out, text)
	return err
}

// answerJSON prints v as the one JSON document of an answer.
func (s *streams) answerJSON(v any) error {
	e := json.NewEncoder(s.out)
	e.SetEscapeHTML(false)
	return e.Encode(v)
}

// An answerWriter is standard output. It makes a failed write a fault of the machine and remembers the first.
type answerWriter struct {
	w   io.Writer
	err error
}

// Write implements io.Writer.
func (a *answerWriter) Write(p []byte) (int, error) {
	if a.err != nil {
		return 0, a.err
	}
	n, err := a.w.Write(p)
	if err != nil {
		a.err = machineFault("standard output", err, "make room or send it elsewhere")
	}
	return n, a.err
}
