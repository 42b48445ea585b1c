package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"rungproof/calib/ledger"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
	"rungproof/calib/trend"
	"rungproof/report"
)

// reliability is the probability with which a detector is to be within its limit
// when it comes back, and longest the longest interval between calibrations.
const (
	reliability = 0.95
	longest     = "365 d"
)

func trendCommand(s *streams) *cobra.Command {
	var of, out string
	var asJSON, all bool
	c := &cobra.Command{
		Use:   "trend SERIAL",
		Short: "show a detector's history and where it leads",
		Long: `Shows the history of one result of a detector from the log: each calibration with
its U, agreement with the one before (E_n), the drift per year with its
uncertainty, and the date at which the error may meet the limit. Adjustments are
breaks: as found belongs before, as left after. With --all, of every detector.`,
		Example: `  rungproof trend G7-0311
  rungproof trend G7-0311 --of "100 µV" --out history
  rungproof trend --all --out fleet`,
		Args: atMost(1, "SERIAL"),
		RunE: func(c *cobra.Command, args []string) error {
			if all == (len(args) == 1) {
				return usage(c, "trend needs a SERIAL, or --all")
			}
			return s.withLog(false, func(ctx context.Context, store ledger.Store) error {
				serials := args
				if all {
					var err error
					if serials, err = serialsOf(ctx, store); err != nil {
						return err
					}
				}
				var views []*report.TrendView
				for _, serial := range serials {
					v, err := trendView(ctx, store, serial, of, longestInterval)
					if all && errors.As(err, new(undetermined)) {
						v, err = firstDue(ctx, store, serial, longestInterval)
					}
					if err != nil {
						return err
					}
					views = append(views, v)
				}
				if out != "" {
					if err := report.WriteTrends(out, views); err != nil {
						return err
					}
				}
				if asJSON {
					return s.write(report.TrendJSON(views))
				}
				for _, v := range views {
					if _, err := io.WriteString(s.out, report.Trend(v)); err != nil {
						return err
					}
				}
				return nil
			})
		},
	}
	c.Flags().StringVar(&of, "of", "gain", "the `RESULT`: gain, offset, or a range such as \"100 µV\"")
	c.Flags().StringVar(&out, "out", "", "write figures (and an overview) to `DIR`")
	c.Flags().BoolVar(&all, "all", false, "of every detector in the log")
	c.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	return c
}

func dueCommand(s *streams) *cobra.Command {
	var within, maximum, on string
	var asJSON bool
	c := &cobra.Command{
		Use:   "due",
		Short: "say which detectors are due for calibration, and why",
		Long: `Lists the detectors of the log by the date on which their next calibration is due:
the earliest of the longest interval allowed, the date up to which the drift keeps
the error within the limit with 95 % probability (control chart method of
ILAC-G24/OIML D 10), and what the record of results within and beyond the limit
allows (interval test with the exponential model of NCSLI RP-1).`,
		Example: `  rungproof due --within "90 d"`,
		Args:    cobra.NoArgs,
		RunE: func(*cobra.Command, []string) error {
			window, err := days("within", within)
			if err != nil {
				return err
			}
			most, err := days("maximum", maximum)
			if err != nil {
				return err
			}
			today := time.Now().UTC()
			if on != "" {
				if today, err = time.Parse(time.DateOnly, on); err != nil {
					return hinted{fmt.Sprintf("--on: %q is no date", on), "write it like 2026-03-12"}
				}
			}
			return s.withLog(false, func(ctx context.Context, store ledger.Store) error {
				serials, err := serialsOf(ctx, store)
				if err != nil {
					return err
				}
				var views []*report.TrendView
				for _, serial := range serials {
					v, err := firstDue(ctx, store, serial, most)
					if err != nil {
						return err
					}
					if v.Advice != nil && !v.Advice.Due.After(today.Add(window)) {
						views = append(views, v)
					}
				}
				if asJSON {
					return s.write(report.TrendJSON(views))
				}
				_, err = io.WriteString(s.out, report.Due(views, today))
				return err
			})
		},
	}
	c.Flags().StringVar(&within, "within", "90 d", "only those due in this `TIME`")
	c.Flags().StringVar(&maximum, "maximum", longest, "the longest interval, `TIME`")
	c.Flags().StringVar(&on, "on", "", "as seen on this `DATE` (today if left out)")
	c.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	return c
}

const longestInterval = 365 * 24 * time.Hour

// days reads "90 d".
func days(flag, text string) (time.Duration, error) {
	number, ok := strings.CutSuffix(strings.TrimSpace(text), "d")
	var n float64
	if _, err := fmt.Sscanf(strings.TrimSpace(number), "%g", &n); !ok || err != nil || !(n > 0) || n > 36525 {
		return 0, hinted{fmt.Sprintf("--%s: %q is no number of days", flag, text), `write it like "90 d"`}
	}
	return time.Duration(n * 24 * float64(time.Hour)), nil
}

// serialsOf are the detectors in the log, in the order of their serials.
func serialsOf(ctx context.Context, store ledger.Store) ([]string, error) {
	entries, err := store.List(ctx, ledger.Filter{InForce: true})
	if err != nil {
		return nil, err
	}
	if len(entries) == 0 {
		return nil, hinted{store.Place() + " holds no entry", "rungproof log add --help"}
	}
	return uniqueSerials(entries), nil
}

// trendView gathers the history of one result of a detector.
func trendView(ctx context.Context, store ledger.Store, serial, of string, maximum time.Duration) (*report.TrendView, error) {
	list, err := store.List(ctx, ledger.Filter{Serial: serial, InForce: true})
	if err != nil {
		return nil, err
	}
	if len(list) == 0 {
		return nil, unknownSerial(ctx, store, serial)
	}
	v := &report.TrendView{Serial: serial, Of: of, Unit: "1", Limit: math.NaN()}
	if of == "offset" {
		v.Unit = "V"
	}
	var last *ledger.Entry
	for i := range list {
		entry, err := store.Show(ctx, list[i].ID)
		if err != nil {
			return nil, err
		}
		value, u, random, err := historyOf(&entry, of)
		if err != nil {
			return nil, err
		}
		if math.IsNaN(value) {
			continue // that calibration did not determine it
		}
		date, err := time.Parse(time.DateOnly, entry.Date)
		if err != nil {
			return nil, fmt.Errorf("entry %d: %w", entry.ID, err)
		}
		p := trend.Point{Entry: entry.ID, Time: date, Value: value, U: u, AsLeft: entry.Condition == ledger.AsLeft, Standards: strings.Join(entry.Standards, ", ")}
		if random > 0 && random < u && p.Standards != "" {
			p.UCommon = math.Sqrt(u*u - random*random)
		}
		v.History = append(v.History, p)
		v.Verdicts = append(v.Verdicts, entry.Verdict)
		last = &entry
	}
	if last == nil {
		return nil, undetermined{hinted{fmt.Sprintf("no calibration of %s in the log determines its %s", serial, of), fmt.Sprintf("--of offset, or a range: rungproof log show %d", list[len(list)-1].ID)}}
	}
	v.Limit = limitOf(last, of)
	if v.Trend, err = trend.Of(v.History, trend.Options{}); err != nil {
		return nil, err
	}
	if v.Compared, err = trend.Compare(v.History); err != nil {
		return nil, err
	}
	if !math.IsNaN(v.Limit) {
		v.Reach = v.Trend.Reaches(v.Limit, reliability)
		if v.Advice, err = trend.Interval(v.History, trend.Options{}, v.Limit, reliability, maximum); err != nil {
			return nil, err
		}
	}
	return v, nil
}

// undetermined is the error where no entry determines what is asked for.
type undetermined struct{ hinted }

// firstDue is the history that decides when a detector is due: of its gain, or,
// where no entry has one for all ranges, of the range whose date is the first.
func firstDue(ctx context.Context, store ledger.Store, serial string, maximum time.Duration) (*report.TrendView, error) {
	v, err := trendView(ctx, store, serial, "gain", maximum)
	if !errors.As(err, new(undetermined)) {
		return v, err
	}
	list, err := store.List(ctx, ledger.Filter{Serial: serial, InForce: true})
	if err != nil {
		return nil, err
	}
	var first *report.TrendView
	for _, r := range list[len(list)-1].Ranges {
		v, err := trendView(ctx, store, serial, quantity.Plain(r.Range, "V"), maximum)
		if err != nil {
			return nil, err
		}
		if first == nil || (v.Advice != nil && (first.Advice == nil || v.Advice.Due.Before(first.Advice.Due))) {
			first = v
		}
	}
	if first == nil {
		return trendView(ctx, store, serial, "offset", maximum)
	}
	return first, nil
}

// historyOf is one result of an entry, as an error: value, u, and the part of u that
// the readings brought. NaN where the entry has none.
func historyOf(e *ledger.Entry, of string) (value, u, random float64, err error) {
	switch of {
	case "gain":
		if e.Gain != nil {
			return e.Gain.Value - 1, e.Gain.U, e.Random(false, 0), nil
		}
		return math.NaN(), 0, 0, nil
	case "offset":
		if e.Offset != nil {
			return e.Offset.Value, e.Offset.U, e.Random(true, 0), nil
		}
		return math.NaN(), 0, 0, nil
	}
	full, err := quantity.Parse(of, quantity.Voltage)
	if err != nil {
		return 0, 0, 0, hinted{fmt.Sprintf("--of: %q is neither gain nor offset nor a range", of), `--of gain, --of offset or --of "100 µV"`}
	}
	for _, r := range e.Ranges {
		if math.Abs(full.X/r.Range-1) < 1e-9 {
			return r.Value - 1, r.U, e.Random(false, r.Range), nil
		}
	}
	return math.NaN(), 0, 0, nil
}

// limitOf is what the plan of an entry allows a result: a gain the share of the value
// applied, or its own limit where there is one; an offset the share of the smallest
// range. NaN where the plan is not stored or limits nothing.
func limitOf(e *ledger.Entry, of string) float64 {
	p, err := plan.Parse("the plan of entry "+fmt.Sprint(e.ID), e.Plan)
	if err != nil || len(p.Detector.Limits) == 0 {
		return math.NaN()
	}
	l := p.Detector.Limits[0]
	switch {
	case of == "offset":
		smallest := math.Inf(1)
		for _, r := range p.Detector.Ranges {
			smallest = math.Min(smallest, r)
		}
		return l.Range * smallest
	case !math.IsNaN(l.Gain):
		return l.Gain
	}
	return l.Reading
}
