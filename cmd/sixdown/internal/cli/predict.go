package cli

import (
	"context"

	"github.com/spf13/cobra"
)

// predictOptions are what predict is asked.
type predictOptions struct {
	design designOptions
	form   answerForm
}

func newPredictCmd(s *streams) *cobra.Command {
	var o predictOptions
	cmd := &cobra.Command{
		Use:     "predict DESIGN",
		Short:   "Predict what each driver gets, what adds up at the ear, and the load",
		Example: "  sixdown predict harbour.toml",
		Args:    oneDesign,
		RunE: func(cmd *cobra.Command, args []string) error {
			o.design.path = args[0]
			return runPredict(cmd.Context(), s, &o)
		},
	}
	o.design.addTo(cmd)
	o.form.addTo(cmd)
	return cmd
}

func runPredict(_ context.Context, s *streams, o *predictOptions) error {
	if err := o.form.check(); err != nil {
		return err
	}
	_, sys, err := o.design.loadSystem(s)
	if err != nil {
		return err
	}
	_, err = sys.Summary([2]float64{})
	return err
}
