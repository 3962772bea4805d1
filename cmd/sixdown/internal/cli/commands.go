package cli

import "github.com/spf13/cobra"

// A commandGroup is a part of the builder's work and its commands.
type commandGroup struct {
	title    string
	commands []*cobra.Command
}

// commandGroups makes every command. The help lists the groups in this order, and in each the commands by name.
func commandGroups(s *streams) []commandGroup {
	return []commandGroup{
		{"Begin and predict:", []*cobra.Command{
			newStartCmd(s),
			newSizeCmd(s),
			newPredictCmd(s),
		}},
		{"Make it better:", []*cobra.Command{
			newScoutCmd(s),
			newTuneCmd(s),
			newSpreadCmd(s),
		}},
		{"Hear and check:", []*cobra.Command{
			newRenderCmd(s),
			newVerifyCmd(s),
			newDemoCmd(s),
		}},
	}
}
