package cli

import (
	"context"
	"io"
	"os"
	"os/signal"
	"syscall"
)

// Main runs the program with the arguments that follow its name and returns its exit code.
func Main(args []string, stdin io.Reader, stdout, stderr io.Writer) int {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	// The first interrupt asks for an orderly end; from then on one ends the program at once.
	context.AfterFunc(ctx, stop)

	out := &answerWriter{w: stdout}
	s := &streams{in: stdin, out: out, err: stderr}
	root := newRootCmd(s)
	root.SetArgs(args)
	err := root.ExecuteContext(ctx)
	if err == nil {
		// Help and version are printed by cobra, which drops the error of a write.
		err = out.err
	}
	return report(stderr, err)
}
