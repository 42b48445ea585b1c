package main

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"rungproof/calib"
	"rungproof/calib/diagnose"
	"rungproof/calib/fault"
	"rungproof/calib/reading"
	"rungproof/report"
)

func adviseCommand(s *streams) *cobra.Command {
	var what string
	var minutes float64
	var asJSON bool
	c := &cobra.Command{
		Use:   "advise PLAN [READINGS]",
		Short: "say what to measure next",
		Long: `Finds the further steps that shrink the uncertainty most per minute, from what
PLAN will tell, or from what READINGS have told: a table in the order to take
them, the uncertainties now and then, and a block to paste into the plan.
Without --for it is gain, offset and series resistance together.

[bench] in the plan says what the bench can be set to and how long each change
takes. Left out: what the steps use, the reference turned by 180°, amplitudes
measured, a tenth and (up to max_amplitude) ten times of each, the source off;
2 s for the phase or the range, 5 s for the amplitude or a setting, 10 s for the
frequency, 30 s for the tap.`,
		Example: `  rungproof advise plan.toml --for offset --minutes 5
  rungproof advise plan.toml bench.csv`,
		Args: planAndPerhapsReadings,
		RunE: func(c *cobra.Command, args []string) error {
			if what == forCause {
				return s.decide(args, asJSON)
			}
			if c.Flags().Changed("for") && !slices.Contains(calib.AdviceFor, what) {
				return notAdvised(what)
			}
			if !(minutes > 0) || math.IsInf(minutes, 0) {
				return hinted{fmt.Sprintf("--minutes %g: the time for the steps is above 0", minutes), "rungproof advise plan.toml --minutes 10"}
			}
			a, err := s.advise(args, what, minutes)
			if err != nil {
				return err
			}
			if asJSON {
				return s.write(report.AdviceJSON(a))
			}
			_, err = io.WriteString(s.out, report.Advice(a))
			return err
		},
	}
	c.Flags().StringVar(&what, "for", "", "improve one `RESULT`: "+strings.Join(calib.AdviceFor, ", ")+",\nor cause: tell the causes in READINGS apart")
	c.Flags().Float64Var(&minutes, "minutes", 10, "the `TIME` that the steps may take")
	c.Flags().BoolVar(&asJSON, "json", false, "write JSON instead of tables")
	return c
}

func planAndPerhapsReadings(c *cobra.Command, args []string) error {
	if len(args) == 1 {
		return nil
	}
	if len(args) == 0 {
		return exactly("PLAN")(c, args)
	}
	return exactly("PLAN", "READINGS")(c, args)
}

func notAdvised(what string) error {
	all := append(slices.Clone(calib.AdviceFor), forCause)
	known := strings.Join(all, ", ")
	if near := fault.Nearest(what, all); near != "" {
		return hinted{fmt.Sprintf("--for: %q is none of %s", what, known), fmt.Sprintf("did you mean %q?", near)}
	}
	return hinted{fmt.Sprintf("--for: %q is none of %s", what, known), "leave it out for all of them together"}
}

// forCause asks for the readings that tell causes apart.
const forCause = "cause"

// decide says what tells the cause that is ranked first from its rival.
func (s *streams) decide(files []string, asJSON bool) error {
	if len(files) < 2 {
		return hinted{"--for cause needs READINGS: causes are found in them", "rungproof advise plan.toml bench.csv --for cause"}
	}
	e, err := s.evaluate(files[0], files[1])
	if err != nil {
		return err
	}
	d, err := diagnose.Decide(e)
	if err != nil {
		return err
	}
	if asJSON {
		return s.write(report.DecidingJSON(d))
	}
	_, err = io.WriteString(s.out, report.Deciding(e.Plan, d))
	return err
}

// advise reads the plan, and the readings where there are any.
func (s *streams) advise(files []string, what string, minutes float64) (*calib.Advice, error) {
	if len(files) == 2 && files[0] == "-" && files[1] == "-" {
		return nil, bothFromInput
	}
	p, err := s.plan(files[0])
	if err != nil {
		return nil, err
	}
	var set *reading.Set
	if len(files) == 2 {
		if set, err = s.readings(files[1], p); err != nil {
			return nil, err
		}
	}
	return calib.Advise(p, set, what, minutes)
}
