package cli

import (
	"fmt"
	"io"
	"runtime/debug"
	"strings"

	"github.com/spf13/cobra"
)

// newRootCmd makes the program's command with all others below it.
func newRootCmd(s *streams) *cobra.Command {
	root := &cobra.Command{
		Use:   "sixdown",
		Short: "Passive crossovers and tone networks: size, predict, hear, check",
		Long: `Sixdown works on the passive crossover of a loudspeaker, or on a tone network, as
one design file states it: it sizes the network, predicts what each driver gets
and what adds up at the ear, renders it to sound files, and checks what was built
against what was designed.

Values are written with their units: "2.2 kHz", 4.7uF, 0.33mH, 8ohm. A design
file may be named -, for standard input; what stands in it: sixdown help design.`,
		Example: `  sixdown size --shape linkwitz-riley --order 4 --at 2.2kHz --load 8ohm
  sixdown predict harbour.toml`,
		Version:       version(),
		SilenceErrors: true, // Main reports them
		SilenceUsage:  true,
		Args:          knownCommand,
		RunE:          func(cmd *cobra.Command, _ []string) error { return cmd.Help() },
	}
	root.SetIn(s.in)
	root.SetOut(keepGoing{s.out})
	root.SetErr(s.err)
	root.SetVersionTemplate("sixdown {{.Version}}\n")
	root.SetHelpTemplate(`{{with (or .Long .Short)}}{{. | trimTrailingWhitespaces}}

{{end}}{{.UsageString}}{{if not .HasParent}}
` + exitCodes + `{{end}}`)
	root.SetFlagErrorFunc(flagFault)
	root.SetHelpCommand(newHelpCmd())
	for _, g := range commandGroups(s) {
		root.AddGroup(&cobra.Group{ID: g.title, Title: g.title})
		for _, c := range g.commands {
			c.GroupID = g.title
			root.AddCommand(c)
		}
	}
	root.AddCommand(newDesignTopic())
	return root
}

// keepGoing hides a failed write from cobra, which would print it raw; Main reports it.
type keepGoing struct{ w io.Writer }

func (k keepGoing) Write(p []byte) (int, error) {
	_, _ = k.w.Write(p)
	return len(p), nil
}

const exitCodes = `Exit codes:
  0  done
  1  a check did not pass
  2  the input or the command line is wrong
  3  the machine failed: a file could not be written, the work was interrupted
`

// version says what was built: the module's version and, of a build from a checkout, the revision.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "(unknown build)"
	}
	v := info.Main.Version
	if v == "" {
		v = "(devel)"
	}
	for _, setting := range info.Settings {
		switch {
		case setting.Key == "vcs.revision" && !strings.Contains(v, setting.Value[:min(12, len(setting.Value))]):
			v += " " + setting.Value[:min(12, len(setting.Value))]
		case setting.Key == "vcs.modified" && setting.Value == "true" && !strings.Contains(v, "dirty"):
			v += " with changes"
		}
	}
	return v + ", " + info.GoVersion
}

// newHelpCmd makes "help [command]", which unlike cobra's own fails where there is no such command.
func newHelpCmd() *cobra.Command {
	return &cobra.Command{
		Use:     "help [command]",
		Short:   "Explain a command, or the design file",
		Example: "  sixdown help predict\n  sixdown help design",
		RunE: func(cmd *cobra.Command, args []string) error {
			about, rest, err := cmd.Root().Find(args)
			if err != nil || len(rest) > 0 {
				return unknownCommand(about, rest)
			}
			// What cobra adds only to the command that runs.
			about.InitDefaultHelpFlag()
			about.InitDefaultVersionFlag()
			return about.Help()
		},
	}
}

// knownCommand is the Args of a command that has others below it and takes no arguments of its own.
func knownCommand(cmd *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	return unknownCommand(cmd, args)
}

func unknownCommand(cmd *cobra.Command, args []string) error {
	var names []string
	for _, c := range cmd.Commands() {
		if c.IsAvailableCommand() || c.IsAdditionalHelpTopicCommand() || c.Name() == "help" {
			names = append(names, c.Name())
		}
	}
	name := ""
	if len(args) > 0 {
		name = args[0]
	}
	if len(names) == 0 {
		return usageFault("command line", fmt.Sprintf("%s has no command %q below it", cmd.Name(), name), "leave it out")
	}
	return usageFault("command line", fmt.Sprintf("there is no command %q", name), didYouMean(name, names, "the commands are "+strings.Join(names, ", ")))
}

// oneDesign is the Args of a command that works on a design file.
func oneDesign(cmd *cobra.Command, args []string) error {
	switch len(args) {
	case 0:
		return usageFault(cmd.Name(), "no design file is given", fmt.Sprintf("name one, as in: %s harbour.toml", cmd.CommandPath()))
	case 1:
		return nil
	}
	return usageFault(cmd.Name(), fmt.Sprintf("%d arguments are given, %s", len(args), quoted(args)), "give one design file, and quote what has a blank in it")
}

// designFiles completes the name of a design file in a shell.
func designFiles(_ *cobra.Command, args []string, _ string) ([]string, cobra.ShellCompDirective) {
	if len(args) > 0 {
		return nil, cobra.ShellCompDirectiveNoFileComp
	}
	return []string{"toml"}, cobra.ShellCompDirectiveFilterFileExt
}

// noArguments is the Args of a command that works on its flags alone.
func noArguments(cmd *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	return usageFault(cmd.Name(), fmt.Sprintf("it takes no argument, but %q is given", args[0]), "give flags alone, and quote values that have a blank in them")
}

func quoted(args []string) string {
	all := make([]string, len(args))
	for i, a := range args {
		all[i] = fmt.Sprintf("%q", a)
	}
	return strings.Join(all, ", ")
}
