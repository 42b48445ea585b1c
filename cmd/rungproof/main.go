// Command rungproof checks and recalibrates synchronous detectors with a
// resistive ladder. See the README, or rungproof --help.
package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"strings"

	"github.com/spf13/cobra"

	"rungproof/calib/fault"
)

// version is the program's; every result carries it.
const version = "0.1.0"

// Exit statuses.
const (
	exitPass      = 0
	exitFail      = 1
	exitFault     = 2 // in the input or the usage
	exitUndecided = 3 // a conditional outcome, or none
)

func main() { os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) }

// streams are where a command reads and writes.
type streams struct {
	in       io.Reader
	out, err io.Writer
	log      string // where the log is; "" for the usual place
	status   int
}

// run is the whole program.
func run(args []string, stdin io.Reader, stdout, stderr io.Writer) int {
	s := &streams{in: stdin, out: stdout, err: stderr}
	root := &cobra.Command{
		Use:           "rungproof",
		Short:         "check and recalibrate synchronous detectors with a resistive ladder",
		Long:          about,
		Version:       version,
		SilenceErrors: true,
		SilenceUsage:  true,
	}
	root.SetVersionTemplate("rungproof {{.Version}}\n")
	root.SetIn(stdin)
	root.SetOut(stdout)
	root.SetErr(stderr)
	root.SetArgs(joined(args))
	root.PersistentFlags().StringVar(&s.log, "log", "", "the log of calibrations: `FILE` or postgres://…")
	root.AddCommand(draftCommand(s), expectCommand(s), sheetCommand(s), judgeCommand(s), budgetCommand(s), rehearseCommand(s), logCommand(s), trendCommand(s), dueCommand(s), correctCommand(s), adviseCommand(s))
	if err := root.Execute(); err != nil {
		fmt.Fprintln(stderr, message(err))
		return exitFault
	}
	return s.status
}

const about = `Rungproof checks a synchronous (phase-sensitive) detector against the small,
computed drops of a resistive ladder: is the detector good, and if not, is the
fault its own (gain, offset, one range) or the bench's (a stray resistance in
the wiring)?

  rungproof draft plan.toml              write a plan to start from
  rungproof expect plan.toml             what will be read, what can be resolved
  rungproof sheet plan.toml > bench.csv  a bench sheet to fill in
  rungproof judge plan.toml bench.csv    the verdict
  rungproof budget plan.toml bench.csv   where the uncertainty comes from
  rungproof rehearse plan.toml           the readings of a simulated bench
  rungproof log add report/result.json   keep the history
  rungproof advise plan.toml bench.csv   what to measure next

Exit status: 0 pass, 1 fail, 3 conditional or not judged, 2 a fault in the input
or the usage.`

// message is an error as the user sees it: error lines, each with its hint lines behind it.
func message(err error) string {
	var h hinted
	if errors.As(err, &h) {
		return "rungproof: " + h.text + "\n  hint: " + h.hint
	}
	var faults fault.List
	if errors.As(err, &faults) {
		return faults.Error() // every line begins with file and line, as compilers write them
	}
	text := strings.TrimSpace(err.Error())
	if strings.HasPrefix(text, "unknown ") {
		text += "\n  hint: rungproof --help lists the commands, rungproof COMMAND --help the flags"
	}
	return "rungproof: " + text
}

// hinted is an error with a line on what would be right.
type hinted struct{ text, hint string }

func (h hinted) Error() string { return h.text }
