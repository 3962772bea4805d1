package cli

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/sim"
	"sixdown/xover"
	"sixdown/xover/quantity"
)

// designOptions say which design is meant and what in it is other than the file says.
type designOptions struct {
	path string   // "-": standard input
	set  []string // "C1=6.8uF"
	turn []string // "treble=0.8"
}

// addTo adds the flags that change a design before it is used.
func (o *designOptions) addTo(cmd *cobra.Command) {
	cmd.Flags().StringArrayVar(&o.set, "set", nil, "give a part another value, as in `C1=6.8uF` (may be repeated)")
	cmd.Flags().StringArrayVar(&o.turn, "turn", nil, "turn a control, 0 to 1, as in `treble=0.8` (may be repeated)")
}

// parse reads the design from its text, prints its warnings, and makes the changes that the options ask for.
func (o *designOptions) parse(s *streams, name string, src []byte) (*xover.Design, error) {
	d, warnings, err := xover.Parse(name, src)
	if err != nil {
		return nil, err
	}
	for _, w := range warnings {
		s.warn(w.String())
	}
	return d, o.change(d)
}

// folder is where the files are that the design names.
func (o *designOptions) folder() string {
	if o.path == "-" {
		return ""
	}
	return filepath.Dir(o.path)
}

// loadSystem reads and parses the design and makes a System of it. Its driver tables are looked for beside the file.
func (o *designOptions) loadSystem(s *streams) (*xover.Design, *sim.System, error) {
	name, src, err := readDesign(s, o.path)
	if err != nil {
		return nil, nil, err
	}
	return o.systemOf(s, name, src)
}

// systemOf is loadSystem of a design that has been read.
func (o *designOptions) systemOf(s *streams, name string, src []byte) (*xover.Design, *sim.System, error) {
	d, err := o.parse(s, name, src)
	if err != nil {
		return nil, nil, err
	}
	sys, err := sim.New(d, tablesIn(o.folder()))
	if err != nil {
		return nil, nil, err
	}
	for _, w := range sys.Warnings() {
		s.warn(w)
	}
	return d, sys, nil
}

// change makes the changes of --set and --turn in d.
func (o *designOptions) change(d *xover.Design) error {
	var all []error // every slip is told at once
	for _, text := range o.set {
		all = append(all, setPart(d, text))
	}
	for _, text := range o.turn {
		all = append(all, turnControl(d, text))
	}
	return errors.Join(all...)
}

// setPart makes the change that a --set asks for, as in "C1=6.8uF".
func setPart(d *xover.Design, text string) error {
	name, value, ok := strings.Cut(text, "=")
	if name = strings.TrimSpace(name); !ok || name == "" {
		return usageFault("--set", fmt.Sprintf("%q names no part and value", text), "write it as in --set C1=6.8uF")
	}
	part := d.Part(name)
	if part == nil {
		return fmt.Errorf("--set: %w", d.SetPart(name, 1))
	}
	v, unit, err := quantity.ParsePart(name, strings.TrimSpace(value))
	if err != nil {
		return fmt.Errorf("--set %s: %w", name, err)
	}
	if want := part.Kind.Unit(); unit != want {
		return usageFault("--set "+name, fmt.Sprintf("%q is %s and %s is %s", strings.TrimSpace(value), unit.Noun(), name, withArticle(part.Kind.String())), fmt.Sprintf("give %s, as in %q", want.Noun(), want.Example()))
	}
	if err := d.SetPart(name, v); err != nil {
		return fmt.Errorf("--set: %w", err)
	}
	return nil
}

// turnControl makes the change that a --turn asks for, as in "treble=0.8".
func turnControl(d *xover.Design, text string) error {
	name, value, ok := strings.Cut(text, "=")
	if name = strings.TrimSpace(name); !ok || name == "" {
		return usageFault("--turn", fmt.Sprintf("%q names no control and turn", text), "write it as in --turn treble=0.8")
	}
	at, err := strconv.ParseFloat(strings.TrimSpace(value), 64)
	if err != nil {
		return usageFault("--turn "+name, fmt.Sprintf("%q is not a number", value), "give a number from 0 to 1")
	}
	if err := d.SetControl(name, at); err != nil {
		return fmt.Errorf("--turn: %w", err)
	}
	return nil
}

func withArticle(noun string) string {
	if strings.ContainsRune("aeiou", rune(noun[0])) {
		return "an " + noun
	}
	return "a " + noun
}

// readDesign returns the text of a design file and what messages call it.
func readDesign(s *streams, path string) (name string, src []byte, err error) {
	in, name := s.in, "standard input"
	if path != "-" {
		f, err := os.Open(path)
		if err != nil {
			return "", nil, inputFault(path, err)
		}
		defer f.Close() // it was only read
		in, name = f, path
	}
	// One byte more than Parse takes lets it say that the file is too long.
	var b bytes.Buffer
	if _, err := io.Copy(&b, io.LimitReader(in, xover.MaxFileBytes+1)); err != nil {
		return "", nil, inputFault(name, err)
	}
	return name, b.Bytes(), nil
}

// tablesIn returns what opens driver tables by the names that a design in that folder gives them.
func tablesIn(dir string) func(name string) (io.ReadCloser, error) {
	return func(name string) (io.ReadCloser, error) {
		path := filepath.FromSlash(name)
		if !filepath.IsAbs(path) {
			path = filepath.Join(dir, path)
		}
		f, err := os.Open(path)
		if err != nil {
			return nil, inputFault(path, err)
		}
		return f, nil
	}
}

// inputFault says why a file that was to be read cannot be.
func inputFault(path string, err error) error {
	mend := "check the name and the folder"
	if !errors.Is(err, fs.ErrNotExist) {
		mend = "give a file that can be read"
	}
	return &fault{code: exitUsage, text: path + ": " + reason(err) + "; " + mend, err: err}
}

// reason is what the operating system gives as the reason, without the call and the path, which the message
// has in its own words.
func reason(err error) string {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return "there is no such file"
	case errors.Is(err, fs.ErrPermission):
		return "permission is denied"
	}
	if e, ok := errors.AsType[*fs.PathError](err); ok {
		return e.Err.Error()
	}
	if e, ok := errors.AsType[*os.LinkError](err); ok { // a rename: on Windows, over a file that a program holds open
		return "it cannot be replaced: " + e.Err.Error()
	}
	return err.Error()
}
