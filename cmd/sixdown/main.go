// Sixdown sizes, predicts and checks the passive networks of loudspeakers and tone controls.
package main

import (
	"os"

	"sixdown/cmd/sixdown/internal/cli"
)

func main() {
	os.Exit(cli.Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
