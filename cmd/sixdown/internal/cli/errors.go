package cli

import (
	"context"
	"errors"
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// The exit codes.
const (
	exitDone        = 0
	exitCheckFailed = 1 // a check did not pass
	exitUsage       = 2 // the input or the command line is wrong
	exitMachine     = 3 // the machine failed
)

// A fault is an error with its exit code.
type fault struct {
	code int
	text string // "where: what; how to mend"
	err  error  // underlying; may be nil
}

func (f *fault) Error() string { return f.text }
func (f *fault) Unwrap() error { return f.err }

// usageFault is an error of the input or the command line.
func usageFault(where, what, mend string) error {
	return &fault{code: exitUsage, text: where + ": " + what + "; " + mend}
}

// machineFault is an error of the machine: a full disk, a file that may not be written.
func machineFault(where string, err error, mend string) error {
	return &fault{code: exitMachine, text: where + ": " + reason(err) + "; " + mend, err: err}
}

// errCheckFailed is returned by a command whose answer, already printed, is that a check did not pass. Nothing
// more is said.
var errCheckFailed = errors.New("a check did not pass")

// errInterrupted is returned by a command that was interrupted and whose answer, already printed, is of what was done so far.
var errInterrupted = errors.New("interrupted")

// unlessInterrupted is the end of a command that may have been interrupted.
func unlessInterrupted(interrupted bool, err error) error {
	if err == nil && interrupted {
		return errInterrupted
	}
	return err
}

// report says what err is about, one line a fault, and returns the exit code.
func report(stderr io.Writer, err error) int {
	switch {
	case err == nil || isBrokenPipe(err):
		// Who closes the pipe has all that he wants.
		return exitDone
	case errors.Is(err, errCheckFailed):
		return exitCheckFailed
	case errors.Is(err, errInterrupted):
		return exitMachine
	case errors.Is(err, context.Canceled):
		fmt.Fprintln(stderr, "sixdown: error: interrupted: the work is not done and nothing is left half written; run it again")
		return exitMachine
	}
	for line := range strings.Lines(err.Error()) {
		fmt.Fprintf(stderr, "sixdown: error: %s\n", strings.TrimRight(line, "\n"))
	}
	if f, ok := errors.AsType[*fault](err); ok {
		return f.code
	}
	// What is not marked came from a library room that judged its input.
	return exitUsage
}

// flagFault says in our words what pflag has found wrong.
func flagFault(cmd *cobra.Command, err error) error {
	var (
		missing *pflag.NotExistError
		empty   *pflag.ValueRequiredError
		invalid *pflag.InvalidValueError
		syntax  *pflag.InvalidSyntaxError
	)
	switch {
	case errors.As(err, &missing):
		name := missing.GetSpecifiedName()
		dashes := "--"
		if missing.GetSpecifiedShortnames() != "" {
			dashes = "-"
		}
		return usageFault(cmd.Name(), fmt.Sprintf("there is no flag %s%s", dashes, name),
			didYouMean("--"+name, flagNames(cmd), "for the flags see: "+cmd.CommandPath()+" --help"))
	case errors.As(err, &empty):
		return usageFault("--"+empty.GetFlag().Name, "a value is missing", "give one, as in: "+exampleOf(empty.GetFlag()))
	case errors.As(err, &invalid):
		text := invalid.Unwrap().Error()
		if !strings.Contains(text, "; ") {
			text = fmt.Sprintf("%q is not what it takes; write it as in: %s", invalid.GetValue(), exampleOf(invalid.GetFlag()))
		}
		return &fault{code: exitUsage, text: "--" + invalid.GetFlag().Name + ": " + text, err: err}
	case errors.As(err, &syntax):
		return usageFault(cmd.Name(), fmt.Sprintf("%q is not written like a flag", syntax.GetSpecifiedFlag()), "write --name value or --name=value")
	}
	return usageFault(cmd.Name(), err.Error(), "for the flags see: "+cmd.CommandPath()+" --help")
}

// flagNames returns the flags of a command with their dashes.
func flagNames(cmd *cobra.Command) []string {
	var names []string
	cmd.Flags().VisitAll(func(f *pflag.Flag) { names = append(names, "--"+f.Name) })
	return names
}

// exampleOf shows how a flag is written. Our own flag values give an example; the others are
// numbers, and texts, whose usage names one.
func exampleOf(f *pflag.Flag) string {
	if v, ok := f.Value.(interface{ example() string }); ok {
		return "--" + f.Name + " " + v.example()
	}
	switch f.Value.Type() {
	case "bool":
		return "--" + f.Name
	case "int", "int64", "uint64":
		return "--" + f.Name + " 24"
	case "float64":
		return "--" + f.Name + " 0.5"
	}
	name, _ := pflag.UnquoteUsage(f)
	return "--" + f.Name + " " + name
}
