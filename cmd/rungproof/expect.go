package main

import (
	"io"

	"github.com/spf13/cobra"

	"rungproof/calib"
	"rungproof/calib/diagnose"
	"rungproof/calib/plan"
	"rungproof/report"
)

func expectCommand(s *streams) *cobra.Command {
	var asJSON bool
	c := &cobra.Command{
		Use:   "expect PLAN",
		Short: "say what will be read at each step, and what the plan can resolve",
		Long: `Says, before anyone has measured, what a detector without fault reads at each
step of PLAN, how long to wait before reading, how the limit compares to the
uncertainty, and how well gain, offset and series resistance will be known: or
that the plan cannot tell offset from series resistance, and what to add.`,
		Example: "  rungproof expect plan.toml",
		Args:    exactly("PLAN"),
		RunE: func(_ *cobra.Command, args []string) error {
			p, x, err := s.expectation(args[0])
			if err != nil {
				return err
			}
			x.Findings = diagnose.Expected(p, x)
			if asJSON {
				return s.write(report.ExpectJSON(x))
			}
			_, err = io.WriteString(s.out, report.Expect(p, x))
			return err
		},
	}
	c.Flags().BoolVar(&asJSON, "json", false, "write JSON instead of tables")
	return c
}

// expectation reads a plan and predicts what it will show.
func (s *streams) expectation(file string) (*plan.Plan, *calib.Expectation, error) {
	p, err := s.plan(file)
	if err != nil {
		return nil, nil, err
	}
	x, err := calib.Expect(p)
	return p, x, err
}

// write passes on what was made, or the error of making it.
func (s *streams) write(b []byte, err error) error {
	if err == nil {
		_, err = s.out.Write(b)
	}
	return err
}
