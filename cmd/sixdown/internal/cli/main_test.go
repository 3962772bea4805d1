package cli

import (
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"math"
	"strings"
	"syscall"
	"testing"
)

// A brokenWriter fails as the operating system says.
type brokenWriter struct{ err error }

func (w brokenWriter) Write([]byte) (int, error) { return 0, w.err }

// TestStandardOutputFails: a full disk is a failure of the machine, whatever prints; a reader that has gone away
// has what it wanted.
func TestStandardOutputFails(t *testing.T) {
	for _, args := range [][]string{
		nil,
		{"--version"},
		{"help", "predict"},
		{"size", "--shape", "butterworth", "--order", "2", "--at", "1kHz", "--load", "8ohm"},
		{"size", "--shape", "butterworth", "--order", "2", "--at", "1kHz", "--load", "8ohm", "--json"},
		{"size", "pad", "--load", "8ohm", "--loss", "3dB", "--csv"},
	} {
		var stderr bytes.Buffer
		if code := Main(args, strings.NewReader(""), brokenWriter{syscall.ENOSPC}, &stderr); code != exitMachine {
			t.Errorf("%q on a full disk: exit code %d", args, code)
		}
		if want := "sixdown: error: standard output: "; !strings.HasPrefix(stderr.String(), want) || strings.Count(stderr.String(), "\n") != 1 {
			t.Errorf("%q on a full disk says %q", args, stderr.String())
		}
		stderr.Reset()
		for _, closed := range []error{syscall.EPIPE, io.ErrClosedPipe} {
			if !isBrokenPipe(closed) {
				continue // not an error of this system's pipes
			}
			if code := Main(args, strings.NewReader(""), brokenWriter{closed}, &stderr); code != exitDone || stderr.Len() > 0 {
				t.Errorf("%q into a closed pipe: exit code %d, %q", args, code, stderr.String())
			}
		}
	}
}

func TestReport(t *testing.T) {
	for _, c := range []struct {
		name string
		err  error
		code int
		text string
	}{
		{"nothing", nil, 0, ""},
		{"a failed check, already printed", errCheckFailed, 1, ""},
		{"an error of a library room", errors.New("here: this; mend it"), 2, "sixdown: error: here: this; mend it\n"},
		{"a line for each fault", errors.New("a:1:1: x; y\na:2:1: x; y"), 2, "sixdown: error: a:1:1: x; y\nsixdown: error: a:2:1: x; y\n"},
		{"the machine", machineFault("out.wav", syscall.ENOSPC, "make room"), 3, "sixdown: error: out.wav: " + syscall.ENOSPC.Error() + "; make room\n"},
		{"two, one of them the machine's", errors.Join(errors.New("a: b; c"), machineFault("out.wav", io.ErrShortWrite, "make room")), 3,
			"sixdown: error: a: b; c\nsixdown: error: out.wav: short write; make room\n"},
	} {
		var stderr bytes.Buffer
		if code := report(&stderr, c.err); code != c.code || stderr.String() != c.text {
			t.Errorf("%s: exit code %d, %q; want %d, %q", c.name, code, stderr.String(), c.code, c.text)
		}
	}
}

func TestNumber(t *testing.T) {
	for _, c := range []struct {
		v         float64
		json, csv string
	}{
		{math.NaN(), "null", ""},
		{math.Inf(1), "null", ""},
		{math.Inf(-1), "null", ""},
		{0, "0", "0"},
		{math.Copysign(0, -1), "0", "0"},
		{-6.5, "-6.5", "-6.5"},
		{1e-7, "1e-7", "1e-07"},
		{math.Nextafter(1, 2), "1.0000000000000002", "1.0000000000000002"}, // 1 + 2⁻⁵²: every digit is kept
	} {
		text, err := json.Marshal(number(c.v))
		if err != nil || string(text) != c.json {
			t.Errorf("%v in JSON is %s, %v; want %s", c.v, text, err, c.json)
		}
		if got := number(c.v).csv(); got != c.csv {
			t.Errorf("%v in CSV is %q, want %q", c.v, got, c.csv)
		}
	}
	if numbers(nil) != nil {
		t.Error("no numbers are not nil")
	}
}

func TestFigures(t *testing.T) {
	for _, c := range []struct{ what, got, want string }{
		{"figures", figures(12345.678, 4), "12350"},
		{"figures", figures(0.00123456, 4), "0.001235"},
		{"figures of a round number", figures(31.5, 5), "31.5"},
		{"figures", figures(math.Inf(-1), 4), "none"},
		{"fixed", fixed(-0.001, 2), "0.00"},
		{"fixed", fixed(-0.006, 2), "-0.01"},
		{"fixed", fixed(math.NaN(), 2), "none"},
		{"signed", signed(0.5), "+0.50"},
		{"signed", signed(-0.001), "+0.00"},
		{"signed", signed(-3), "-3.00"},
		{"signed", signed(math.Inf(-1)), "none"},
		{"hertz", hertz(2200), "2.2 kHz"},
		{"hertz", hertz(31.62), "31.62 Hz"},
		{"hertz that rounds up", hertz(999.96), "1000 Hz"},
		{"ohms", ohms(5.678), "5.68"},
		{"ohms", ohms(12346), "12350"},
		{"angle", angle(-1), "180.0"},
		{"angle that rounds to -180", angle(complex(-1, -1e-6)), "180.0"},
		{"angle of nothing", angle(0), "none"},
		{"folded", folded("Source: ", strings.Repeat("word ", 30)), "Source: " + strings.TrimSpace(strings.Repeat("word ", 18)) + "\n        " + strings.TrimSpace(strings.Repeat("word ", 12)) + "\n"},
	} {
		if c.got != c.want {
			t.Errorf("%s: got %q, want %q", c.what, c.got, c.want)
		}
	}
}

// TestTomlString: what TOML 1.0 asks of a basic string: quotation mark, backslash and control characters are
// escaped, the rest stands as it is.
func TestTomlString(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"plain µ Ω <&>", `"plain µ Ω <&>"`},
		{`a "b" \c`, `"a \"b\" \\c"`},
		{"tab\tline\n", `"tab\tline\n"`},
		{"\x01\x7f", "\"\\u0001\\u007f\""},
	} {
		if got := tomlString(c.text); got != c.want {
			t.Errorf("%q is %s, want %s", c.text, got, c.want)
		}
	}
}

func TestTomlKey(t *testing.T) {
	for _, c := range []struct{ name, want string }{
		{"woofer-2_b", "woofer-2_b"},
		{"a]\n[parts", `"a]\n[parts"`},
		{"µ", `"µ"`},
		{"", `""`},
	} {
		if got := tomlKey(c.name); got != c.want {
			t.Errorf("%q is %s, want %s", c.name, got, c.want)
		}
	}
}

// TestProgressIsSilent: where standard error is no terminal, nothing is drawn.
func TestProgressIsSilent(t *testing.T) {
	var stderr bytes.Buffer
	p := newProgress(&streams{err: &stderr}, "rendering")
	p.at(0.5)
	p.done()
	if stderr.Len() > 0 {
		t.Errorf("it says %q", stderr.String())
	}
}

// TestProgressDraws draws on a buffer as on a terminal: one line, redrawn, and taken away in full.
func TestProgressDraws(t *testing.T) {
	var stderr bytes.Buffer
	p := &progress{w: &stderr, label: "rendering"}
	p.at(0.25)
	p.at(0.26) // too soon to be drawn
	p.done()
	if got, want := stderr.String(), "\rrendering  25 %\r               \r"; got != want {
		t.Errorf("drawn: %q, want %q", got, want)
	}
}
