package main

import (
	"io"

	"github.com/spf13/cobra"

	"rungproof/calib"
	"rungproof/report"
)

func budgetCommand(s *streams) *cobra.Command {
	var of string
	var asJSON bool
	c := &cobra.Command{
		Use:   "budget PLAN READINGS",
		Short: "say where the uncertainty of a result comes from",
		Long: `Takes the uncertainty of one result apart: a line for the readings and for each
input, with its distribution, its degrees of freedom and its share, then what to
improve first, found by doing the whole estimate again.

--of names the result: gain, offset, series-resistance, the gain of a range as
the detector shows it ("100 µV"), or the error at a step ("A12").`,
		Example: `  rungproof budget plan.toml bench.csv --of gain
  rungproof budget plan.toml bench.csv --of "100 µV"`,
		Args: exactly("PLAN", "READINGS"),
		RunE: func(_ *cobra.Command, args []string) error {
			e, err := s.evaluate(args[0], args[1])
			if err != nil {
				return err
			}
			b, err := e.Budget(of)
			if err != nil {
				return hinted{"--of: " + err.Error(), "rungproof budget --help"}
			}
			if asJSON {
				return s.write(report.BudgetJSON(b))
			}
			_, err = io.WriteString(s.out, report.Budget(b))
			return err
		},
	}
	c.Flags().StringVar(&of, "of", calib.OfGain, "the `RESULT` to take apart")
	c.Flags().BoolVar(&asJSON, "json", false, "write JSON instead of a table")
	return c
}
