package main

import (
	"bufio"
	"context"
	"fmt"
	"math"
	"os"
	"slices"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"rungproof/calib/correct"
	"rungproof/calib/fault"
	"rungproof/calib/ledger"
	"rungproof/calib/plan"
)

func correctCommand(s *streams) *cobra.Command {
	var serial, date, valid string
	o := correct.Options{}
	c := &cobra.Command{
		Use:   "correct DATA.csv",
		Short: "correct readings with the calibration in force",
		Long: `Streams a CSV of any size from DATA.csv (or -, standard input) to standard output
and adds to each row the corrected value, its expanded uncertainty and a warning:
by the gain and the offset of the calibration of --serial that was in force on
--date. The bench's series resistance is no part of it. All else stays byte for
byte. What a warning says is also told on standard error; with --strict it is an
error.`,
		Example: `  rungproof correct week.csv --serial G7-0311 --range "100 µV" > corrected.csv`,
		Args:    exactly("DATA.csv"),
		RunE: func(_ *cobra.Command, args []string) error {
			if serial == "" {
				return hinted{"correct needs --serial, the detector's", "rungproof log list"}
			}
			on := time.Now().UTC()
			if date != "" {
				var err error
				if on, err = time.Parse(time.DateOnly, date); err != nil {
					return hinted{fmt.Sprintf("--date: %q is no date", date), "write it like 2026-03-12"}
				}
			}
			good, err := days("valid", valid)
			if err != nil {
				return err
			}
			o.Date = on
			var c *correct.Calibration
			if err := s.withLog(false, func(ctx context.Context, store ledger.Store) error {
				c, err = inForce(ctx, store, serial, on, good)
				return err
			}); err != nil {
				return err
			}
			return s.stream(args[0], c, o)
		},
	}
	f := c.Flags()
	f.StringVar(&serial, "serial", "", "the detector that read the data")
	f.StringVar(&date, "date", "", "of the readings, `2026-03-12` (today if left out)")
	f.StringVar(&valid, "valid", longest, "how long a calibration holds, `TIME`")
	f.StringVar(&o.Column, "column", "x", "the column of the readings")
	f.StringVar(&o.Range, "range", "", "the `RANGE` that all were taken on")
	f.StringVar(&o.RangeColumn, "range-column", "", "the column with the range of each")
	f.BoolVar(&o.Drift, "drift", false, "adjust for the drift since the calibration")
	f.BoolVar(&o.Strict, "strict", false, "a warning is an error")
	return c
}

// stream corrects a file.
func (s *streams) stream(name string, c *correct.Calibration, o correct.Options) error {
	in, size := s.in, int64(0)
	o.File = "standard input"
	if name != "-" {
		f, err := os.Open(name)
		if err != nil {
			return fileError(name, err)
		}
		defer f.Close()
		if info, err := f.Stat(); err == nil {
			size = info.Size()
		}
		in, o.File = f, name
	}
	bar := newProgress(s.err, "kB")
	if size > 0 {
		o.Progress = func(read int64) { bar.show(int(read/1000), int(size/1000)) }
	}
	out := bufio.NewWriterSize(s.out, 1<<16)
	summary, err := correct.Stream(in, out, c, o)
	bar.clear()
	if flushed := out.Flush(); err == nil {
		err = flushed
	}
	for _, w := range summary.Warnings {
		fmt.Fprintf(s.err, "warning: %d of %d rows: %s\n", w.Rows, summary.Rows, w.First)
	}
	return err
}

// inForce is the last calibration of a detector on or before a date.
func inForce(ctx context.Context, store ledger.Store, serial string, on time.Time, valid time.Duration) (*correct.Calibration, error) {
	list, err := store.List(ctx, ledger.Filter{Serial: serial, To: on.Format(time.DateOnly), InForce: true})
	if err != nil {
		return nil, err
	}
	if len(list) == 0 {
		if all, err := store.List(ctx, ledger.Filter{Serial: serial, InForce: true}); err == nil && len(all) > 0 {
			return nil, hinted{fmt.Sprintf("%s has no calibration on or before %s", serial, on.Format(time.DateOnly)), "its first is of " + all[0].Date}
		}
		return nil, unknownSerial(ctx, store, serial)
	}
	e, err := store.Show(ctx, list[len(list)-1].ID)
	if err != nil {
		return nil, err
	}
	c, err := calibrationOf(&e, valid)
	if err != nil {
		return nil, err
	}
	if v, err := trendView(ctx, store, serial, "gain", longestInterval); err == nil && v.Trend.Drift != nil && v.Trend.Drift.U > 0 {
		c.Drift = &correct.Drift{PerYear: v.Trend.Drift.PerYear, U: v.Trend.Drift.U}
	}
	return c, nil
}

// calibrationOf is what an entry of the log corrects readings by.
func calibrationOf(e *ledger.Entry, valid time.Duration) (*correct.Calibration, error) {
	serial := e.Serial
	if e.Offset == nil || (e.Gain == nil && len(e.Ranges) == 0) {
		return nil, hinted{fmt.Sprintf("entry %d, the calibration of %s in force, does not determine gain and offset", e.ID, serial), "rungproof log show " + fmt.Sprint(e.ID)}
	}
	date, err := time.Parse(time.DateOnly, e.Date)
	if err != nil {
		return nil, fmt.Errorf("entry %d: %w", e.ID, err)
	}
	spans, err := e.Spans()
	if err != nil {
		return nil, err
	}
	c := &correct.Calibration{ID: fmt.Sprint(e.ID), Serial: serial, Date: date, Due: date.Add(valid), Verdict: e.Verdict,
		Offset: e.Offset.Value, UOffset: e.Offset.U, K: e.Offset.K, ToRMS: 1}
	if p, err := plan.Parse("plan", e.Plan); err == nil {
		c.ToRMS = p.Detector.ToRMS
	}
	if e.Gain != nil {
		all := correct.Gain{Value: e.Gain.Value, U: e.Gain.U, Correlation: e.Correlation(), From: math.Inf(1)}
		for _, span := range spans {
			all.From, all.To = math.Min(all.From, span.From), math.Max(all.To, span.To)
		}
		c.Gains = append(c.Gains, all)
	}
	for _, r := range e.Ranges {
		g := correct.Gain{Range: r.Range, Value: r.Value, U: r.U}
		if e.Gain != nil { // one gain fits: it is the better known
			g.Value, g.U, g.Correlation = e.Gain.Value, e.Gain.U, e.Correlation()
		}
		g.From, g.To = spans[r.Range].From, spans[r.Range].To
		c.Gains = append(c.Gains, g)
	}
	return c, nil
}

// uniqueSerials are the serials of entries, sorted.
func uniqueSerials(entries []ledger.Entry) []string {
	var out []string
	for _, e := range entries {
		out = append(out, e.Serial)
	}
	slices.Sort(out)
	return slices.Compact(out)
}

// unknownSerial says that the log has no such detector, and the nearest that it has.
func unknownSerial(ctx context.Context, store ledger.Store, serial string) error {
	entries, err := store.List(ctx, ledger.Filter{})
	if err != nil {
		return err
	}
	known := uniqueSerials(entries)
	hint := "the log holds " + strings.Join(known, ", ")
	if near := fault.Nearest(serial, known); near != "" {
		hint = fmt.Sprintf("did you mean %q?", near)
	} else if len(known) == 0 {
		hint = "the log is empty: rungproof log add --help"
	}
	return hinted{fmt.Sprintf("there is no detector %q in %s", serial, store.Place()), hint}
}
