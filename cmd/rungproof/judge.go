package main

import (
	"io"
	"os"
	"strconv"

	"github.com/spf13/cobra"
	"golang.org/x/term"

	"rungproof/calib"
	"rungproof/calib/decision"
	"rungproof/calib/diagnose"
	"rungproof/report"
)

func judgeCommand(s *streams) *cobra.Command {
	var out, monteCarlo string
	var seed uint64
	var asJSON bool
	c := &cobra.Command{
		Use:   "judge PLAN READINGS",
		Short: "judge a detector by its readings",
		Long: `Judges a detector: fits gain, offset and series resistance to READINGS (CSV)
taken by PLAN (TOML), says whose fault a deviation is, and decides. One of the
two files may be -, standard input.

--monte-carlo confirms the estimate and its uncertainties: every input and every
reading is drawn from its own distribution and the full estimate made again, a
million times or as often as said; "auto" goes on until two digits are steady.

Exit status: 0 pass, 1 fail, 3 conditional or not judged, 2 a fault in the input
or the usage.`,
		Example: `  rungproof judge plan.toml bench.csv --out report
  rungproof judge plan.toml bench.csv --monte-carlo auto`,
		Args: exactly("PLAN", "READINGS"),
		RunE: func(c *cobra.Command, args []string) error {
			if out == "" && c.Flags().Changed("out") {
				return hinted{"--out names no folder", "is a variable of the shell not set?"}
			}
			e, err := s.evaluate(args[0], args[1])
			if err != nil {
				return err
			}
			if monteCarlo != "" {
				if err := s.confirm(e, monteCarlo, seed); err != nil {
					return err
				}
			} else if c.Flags().Changed("seed") {
				return hinted{"--seed goes with --monte-carlo", "nothing else here is left to chance"}
			}
			if out != "" || asJSON {
				if e.Result.Budgets, err = e.Budgets(); err != nil {
					return err
				}
			}
			if out != "" {
				if err := report.Write(out, e); err != nil {
					return err
				}
			}
			s.status = statusOf(e.Result.Verdict)
			if asJSON {
				return s.write(report.JSON(e))
			}
			_, err = io.WriteString(s.out, report.Text(e, s.colour()))
			return err
		},
	}
	c.Flags().StringVar(&out, "out", "", "write report and figures to `DIR`")
	c.Flags().BoolVar(&asJSON, "json", false, "print result.json, not the summary")
	c.Flags().StringVar(&monteCarlo, "monte-carlo", "", "confirm by `N` trials, or auto")
	c.Flags().Lookup("monte-carlo").NoOptDefVal = strconv.Itoa(defaultTrials)
	c.Flags().Uint64Var(&seed, "seed", 1, "of chance in --monte-carlo")
	return c
}

// evaluate reads, judges and explains.
func (s *streams) evaluate(planFile, readingsFile string) (*calib.Evaluation, error) {
	if planFile == "-" && readingsFile == "-" {
		return nil, bothFromInput
	}
	p, err := s.plan(planFile)
	if err != nil {
		return nil, err
	}
	set, err := s.readings(readingsFile, p)
	if err != nil {
		return nil, err
	}
	e, err := calib.Evaluate(p, set)
	if err != nil {
		return nil, err
	}
	e.Result.Software = "rungproof " + version
	e.Result.Findings = diagnose.Findings(e)
	return e, nil
}

func statusOf(o decision.Outcome) int {
	switch o {
	case decision.Pass:
		return exitPass
	case decision.Fail:
		return exitFail
	}
	return exitUndecided
}

// colour tells whether standard output is a terminal that wants colour.
func (s *streams) colour() bool {
	f, ok := s.out.(*os.File)
	_, refused := os.LookupEnv("NO_COLOR")
	return ok && !refused && os.Getenv("TERM") != "dumb" && term.IsTerminal(int(f.Fd()))
}
