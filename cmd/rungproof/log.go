package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/user"
	"path/filepath"
	"strconv"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"rungproof/calib/ledger"
	"rungproof/report"
)

func logCommand(s *streams) *cobra.Command {
	c := &cobra.Command{
		Use:   "log",
		Short: "keep the history of calibrations",
		Long: `Keeps judged calibrations in one log, a file or a PostgreSQL database. Nothing in
it is ever changed or removed: a correction is a new entry that names the one it
supersedes. Each entry carries the SHA-256 of its content and of the entry before,
so that "log check" can say which was altered, added or removed.

The log is --log FILE or --log postgres://…, else $RUNGPROOF_LOG, else a file in
the user's data folder.`,
		Example: `  rungproof log add --plan plan.toml --readings bench.csv --condition as-found
  rungproof log list --serial G7-0311
  rungproof log check`,
		Args: cobra.NoArgs,
		RunE: func(c *cobra.Command, _ []string) error { return c.Help() },
	}
	c.AddCommand(logAdd(s), logList(s), logShow(s), logCheck(s), logExport(s), logImport(s))
	return c
}

// place is where the log is: the flag, the variable, or the user's data folder.
func (s *streams) place() (string, error) {
	if s.log != "" {
		return s.log, nil
	}
	if p := os.Getenv("RUNGPROOF_LOG"); p != "" {
		return p, nil
	}
	data := os.Getenv("XDG_DATA_HOME")
	if data == "" {
		home, err := os.UserHomeDir()
		if err != nil {
			return "", hinted{"there is no data folder for the log", "name it with --log FILE or RUNGPROOF_LOG"}
		}
		data = filepath.Join(home, ".local", "share")
	}
	return filepath.Join(data, "rungproof", "calibrations.db"), nil
}

// withLog opens the log, does something with it, and closes it. Only what writes
// begins a log where there is none.
func (s *streams) withLog(create bool, do func(context.Context, ledger.Store) error) error {
	place, err := s.place()
	if err != nil {
		return err
	}
	if !create && !strings.Contains(place, "://") {
		if _, err := os.Stat(place); err != nil {
			return hinted{place + " is no log: " + fileError("", err).Error()[2:], "log add begins one; --log or RUNGPROOF_LOG names another"}
		}
	}
	ctx := context.Background()
	store, err := ledger.Open(ctx, place)
	if err != nil {
		return err
	}
	err = do(ctx, store)
	if closed := store.Close(); err == nil {
		err = closed
	}
	return err
}

func logAdd(s *streams) *cobra.Command {
	var planFile, readingsFile, condition, date, note, who, reason string
	var supersedes int64
	c := &cobra.Command{
		Use:   "add [RESULT.json]",
		Short: "log a judged calibration",
		Long: `Logs a calibration: a result.json that judge wrote, or --plan and --readings, which
are judged and stored whole with the result.`,
		Example: `  rungproof log add report/result.json
  rungproof log add --plan plan.toml --readings bench.csv --condition as-left
  rungproof log add --plan p.toml --readings r.csv --supersedes 12 --reason "wrong box"`,
		Args: atMost(1, "RESULT.json"),
		RunE: func(c *cobra.Command, args []string) error {
			r, err := s.record(args, planFile, readingsFile)
			if err != nil {
				return err
			}
			if condition != "" {
				r.Condition = strings.ReplaceAll(condition, "-", " ")
			}
			if date != "" {
				r.Date = date
			}
			r.Note, r.Who, r.Supersedes, r.Reason = note, who, supersedes, reason
			if err := loggable(&r); err != nil {
				return err
			}
			return s.withLog(true, func(ctx context.Context, store ledger.Store) error {
				entry, err := store.Add(ctx, r)
				if err != nil {
					return err
				}
				_, err = fmt.Fprintf(s.out, "entry %d: %s, %s, %s\n", entry.ID, entry.Serial, entry.Date, entry.Verdict)
				return err
			})
		},
	}
	f := c.Flags()
	f.StringVar(&planFile, "plan", "", "judge this `PLAN`, with --readings")
	f.StringVar(&readingsFile, "readings", "", "judge these `READINGS`, with --plan")
	f.StringVar(&condition, "condition", "", "as-found or as-left, where the plan does not say")
	f.StringVar(&date, "date", "", "of the measurements, `2026-03-12`")
	f.StringVar(&note, "note", "", "a remark")
	f.StringVar(&who, "who", userName(), "who logs it")
	f.Int64Var(&supersedes, "supersedes", 0, "the entry `ID` that this one corrects")
	f.StringVar(&reason, "reason", "", "why it does")
	return c
}

func userName() string {
	u, err := user.Current()
	if err != nil {
		return "not stated"
	}
	return u.Username
}

// record reads or makes a result and puts it into a record.
func (s *streams) record(args []string, planFile, readingsFile string) (ledger.Record, error) {
	switch {
	case len(args) == 1 && planFile+readingsFile != "":
		return ledger.Record{}, hinted{"a result.json, or --plan and --readings, not both", "rungproof log add --help"}
	case len(args) == 1:
		name, b, err := s.source(args[0])
		if err != nil {
			return ledger.Record{}, err
		}
		r, err := ledger.FromResult(b)
		if err != nil {
			return r, fmt.Errorf("%s: %w", name, err)
		}
		return r, nil
	case planFile == "" || readingsFile == "":
		return ledger.Record{}, hinted{"log add needs a result.json, or --plan and --readings", "rungproof log add --help"}
	}
	e, err := s.evaluate(planFile, readingsFile)
	if err != nil {
		return ledger.Record{}, err
	}
	result, err := report.JSON(e)
	if err != nil {
		return ledger.Record{}, err
	}
	if result, err = ledger.Compact(result); err != nil {
		return ledger.Record{}, err
	}
	r, err := ledger.FromResult(result)
	r.Plan, r.Readings = e.Plan.Source, e.Readings.Source
	return r, err
}

// loggable tells what a record lacks.
func loggable(r *ledger.Record) error {
	if r.Serial == "" {
		return hinted{"the detector has no serial number, by which the log finds it", `serial = "…" in [detector] of the plan`}
	}
	if r.Date == "" {
		return hinted{"the day of the measurements is not stated", "date = 2026-03-12 in the plan, or --date 2026-03-12"}
	}
	if _, err := time.Parse(time.DateOnly, r.Date); err != nil {
		return hinted{fmt.Sprintf("--date: %q is no date", r.Date), "write it like 2026-03-12"}
	}
	if r.Condition != "" && r.Condition != ledger.AsFound && r.Condition != ledger.AsLeft {
		return hinted{fmt.Sprintf("--condition: %q is neither as-found nor as-left", r.Condition), "as found is before an adjustment, as left after it"}
	}
	if r.Supersedes != 0 && r.Reason == "" {
		return hinted{"a correction needs a reason", `--reason "wrong box"`}
	}
	return nil
}

func logList(s *streams) *cobra.Command {
	var filter ledger.Filter
	var asJSON bool
	c := &cobra.Command{
		Use:     "list",
		Short:   "list what is logged",
		Example: "  rungproof log list --serial G7-0311",
		Args:    cobra.NoArgs,
		RunE: func(*cobra.Command, []string) error {
			return s.withLog(false, func(ctx context.Context, store ledger.Store) error {
				entries, err := store.List(ctx, filter)
				if err != nil {
					return err
				}
				if len(entries) == 0 && filter.Serial != "" {
					if all, err := store.List(ctx, ledger.Filter{Serial: filter.Serial}); err == nil && len(all) == 0 {
						return unknownSerial(ctx, store, filter.Serial)
					}
				}
				if asJSON {
					return s.write(report.LogJSON(entries))
				}
				_, err = io.WriteString(s.out, report.LogList(entries))
				return err
			})
		},
	}
	c.Flags().StringVar(&filter.Serial, "serial", "", "of one detector")
	c.Flags().StringVar(&filter.From, "from", "", "first `DATE` of the measurements")
	c.Flags().StringVar(&filter.To, "to", "", "last `DATE`")
	c.Flags().BoolVar(&filter.InForce, "in-force", false, "without what was superseded")
	c.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	return c
}

func logShow(s *streams) *cobra.Command {
	var asJSON bool
	c := &cobra.Command{
		Use:     "show ID",
		Short:   "show one entry",
		Example: "  rungproof log show 12",
		Args:    exactly("ID"),
		RunE: func(_ *cobra.Command, args []string) error {
			id, err := strconv.ParseInt(args[0], 10, 64)
			if err != nil || id < 1 {
				return hinted{fmt.Sprintf("%q is no entry", args[0]), "entries are numbered from 1: rungproof log list"}
			}
			return s.withLog(false, func(ctx context.Context, store ledger.Store) error {
				entry, err := store.Show(ctx, id)
				if errors.Is(err, ledger.ErrNoEntry) {
					return hinted{fmt.Sprintf("there is no entry %d in %s", id, store.Place()), "rungproof log list"}
				}
				if err != nil {
					return err
				}
				if asJSON {
					return s.write(report.LogJSON(entry))
				}
				_, err = io.WriteString(s.out, report.LogEntry(&entry))
				return err
			})
		},
	}
	c.Flags().BoolVar(&asJSON, "json", false, "write JSON, plan and readings included")
	return c
}

func logCheck(s *streams) *cobra.Command {
	return &cobra.Command{
		Use:   "check",
		Short: "check that nothing was altered, added or removed",
		Long: `Walks the chain of hashes and says exactly which entry was altered, added or
removed. Exit status 0 where the log is sound, 1 where it is not. The last hash,
noted elsewhere, tells later whether the end was cut off.`,
		Example: "  rungproof log check",
		Args:    cobra.NoArgs,
		RunE: func(*cobra.Command, []string) error {
			return s.withLog(false, func(ctx context.Context, store ledger.Store) error {
				r, err := store.Check(ctx)
				if err != nil {
					return err
				}
				if !r.Sound() {
					s.status = exitFail
				}
				_, err = io.WriteString(s.out, report.LogCheck(&r, store.Place()))
				return err
			})
		},
	}
}

func logExport(s *streams) *cobra.Command {
	var asCSV, asJSON bool
	c := &cobra.Command{
		Use:     "export",
		Short:   "write the whole log to standard output",
		Example: "  rungproof log export --json > log.jsonl",
		Args:    cobra.NoArgs,
		RunE: func(*cobra.Command, []string) error {
			if asCSV == asJSON {
				return hinted{"log export needs --json or --csv", "--json is lossless and can be imported; --csv is for a spreadsheet"}
			}
			return s.withLog(false, func(ctx context.Context, store ledger.Store) error {
				if asCSV {
					return store.ExportCSV(ctx, s.out)
				}
				return store.ExportJSON(ctx, s.out)
			})
		},
	}
	c.Flags().BoolVar(&asCSV, "csv", false, "the columns, an entry a row")
	c.Flags().BoolVar(&asJSON, "json", false, "everything, an entry a line, for import")
	return c
}

func logImport(s *streams) *cobra.Command {
	return &cobra.Command{
		Use:     "import FILE",
		Short:   "append an exported log, all of it or nothing",
		Example: `  rungproof log export --json | rungproof --log postgres://bench@host/log log import -`,
		Args:    exactly("FILE"),
		RunE: func(_ *cobra.Command, args []string) error {
			in := s.in
			if args[0] != "-" {
				f, err := os.Open(args[0])
				if err != nil {
					return fileError(args[0], err)
				}
				defer f.Close()
				in = f
			}
			return s.withLog(true, func(ctx context.Context, store ledger.Store) error {
				added, err := store.Import(ctx, in)
				if err != nil {
					return err
				}
				_, err = fmt.Fprintf(s.out, "%d entries added to %s\n", added, store.Place())
				return err
			})
		},
	}
}
