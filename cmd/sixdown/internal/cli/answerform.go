package cli

import (
	"encoding/csv"
	"strings"

	"github.com/spf13/cobra"
)

// An answerForm is how a command prints its answer: for people unless one of the two is asked for.
type answerForm struct {
	json bool
	csv  bool
}

// addJSON adds the flag of a command whose answer is no table.
func (f *answerForm) addJSON(cmd *cobra.Command) {
	cmd.Flags().BoolVar(&f.json, "json", false, "print one JSON document, in SI units, null for what does not exist")
}

// addTo adds the flags of a command whose answer is a table.
func (f *answerForm) addTo(cmd *cobra.Command) {
	f.addJSON(cmd)
	cmd.Flags().BoolVar(&f.csv, "csv", false, "print comma-separated values, in SI units, under a line of names")
}

// check refuses two forms at once.
func (f *answerForm) check() error {
	if f.json && f.csv {
		return usageFault("command line", "both --json and --csv are given", "give one of them")
	}
	return nil
}

// answerCSV prints records, the first the names.
func (s *streams) answerCSV(records [][]string) error { return s.answer(csvText(records)) }

// csvText writes records as RFC 4180 has them.
func csvText(records [][]string) string {
	var b strings.Builder
	w := csv.NewWriter(&b)
	w.UseCRLF = true
	w.WriteAll(records) // a strings.Builder takes all
	return b.String()
}
