package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"rungproof/calib"
	"rungproof/calib/diagnose"
	"rungproof/calib/plan"
	"rungproof/calib/quantity"
	"rungproof/calib/reading"
	"rungproof/report"
)

// rehearsal holds the flags of the command.
type rehearsal struct {
	out, through string
	seed         uint64
	trials       int
	asJSON       bool
	faults       map[string]*string // by flag, the value as written
	rangeGain    string
	swap         string
	mains        string
	interference string
	lean         string
}

// plantable are the faults that have a flag of their own: their cause, variant and unit.
var plantable = []struct {
	flag, kind, variant, help string
	quantity                  quantity.Kind
}{
	{"gain", diagnose.Gain, "", "`SHARE` of gain too much: \"2 %\"", quantity.Ratio},
	{"offset", diagnose.Offset, "", "in `V`: \"120 nV\"", quantity.Voltage},
	{"series-resistance", diagnose.Series, "", "in `OHM`, in the tapped arm: \"0.3 Ω\"", quantity.Resistance},
	{"pick-up", diagnose.ResistivePick, "", "`SHARE` of the amplitude: \"3 ppm\"", quantity.Ratio},
	{"coupling", diagnose.Coupling, "", "from the reference, in `V`: \"100 nV\"", quantity.Voltage},
	{"compression", diagnose.Compression, "", "`SHARE` at full scale: \"-1 %\"", quantity.Ratio},
	{"drift", diagnose.Drift, "", "`SHARE` of gain over the run: \"0.5 %\"", quantity.Ratio},
}

func rehearseCommand(s *streams) *cobra.Command {
	r := &rehearsal{faults: map[string]*string{}}
	c := &cobra.Command{
		Use:   "rehearse PLAN",
		Short: "try a plan on a simulated bench and detector, with chosen faults",
		Long: `Writes the readings that the bench of PLAN would have given: every uncertain
input drawn from its distribution, the detector's noise, its stability and its
display, and the faults that are asked for. For practice, for teaching, and to
try a plan before anyone books the bench.

--through twin makes the readings by a sampled detector (signal, noise and
mains, mixed and filtered) instead of the model's formulas.

--trials N judges N rehearsals and says how often the verdict, the decision rule
and the findings get it right.`,
		Example: `  rungproof rehearse plan.toml --offset "120 nV" --out readings.csv
  rungproof rehearse plan.toml --swap "box at 100 Ω and at 50 Ω" --seed 7
  rungproof rehearse plan.toml --gain "2 %" --trials 1000`,
		Args: exactly("PLAN"),
		RunE: func(c *cobra.Command, args []string) error { return s.rehearse(c, args[0], r) },
	}
	f := c.Flags()
	for _, p := range plantable {
		r.faults[p.flag] = f.String(p.flag, "", p.help)
	}
	f.StringVar(&r.rangeGain, "range-gain", "", "`RANGE=SHARE` of gain too much there: \"1 mV=2 %\"")
	f.StringVar(&r.swap, "swap", "", "two `SETTINGS`: \"box at 1 kΩ and at 500 Ω\"")
	f.StringVar(&r.mains, "mains", "", "`LINE` at the input: \"1 mV at 50 Hz\"")
	f.StringVar(&r.interference, "interference", "", "scatter of a reading, in `V`: \"300 nV\"")
	f.StringVar(&r.lean, "lean", "", "`SHARE` of the step before: \"1 %\"")
	f.StringVar(&r.through, "through", "model", "model or twin")
	f.Uint64Var(&r.seed, "seed", 1, "of chance")
	f.IntVar(&r.trials, "trials", 0, "judge so many rehearsals and count")
	f.StringVar(&r.out, "out", "-", "of readings, or of --trials' figure: `FILE`")
	f.BoolVar(&r.asJSON, "json", false, "with --trials: JSON instead of a table")
	return c
}

func (s *streams) rehearse(c *cobra.Command, planFile string, r *rehearsal) error {
	p, err := s.plan(planFile)
	if err != nil {
		return err
	}
	truth, err := r.truth(p)
	if err != nil {
		return err
	}
	mains, err := r.mainsOf()
	if err != nil {
		return err
	}
	switch {
	case r.through != "model" && r.through != "twin":
		return hinted{fmt.Sprintf("--through: %q is neither model nor twin", r.through), "model is fast; twin samples, mixes and filters"}
	case mains.Amplitude > 0 && r.through != "twin":
		return hinted{"--mains needs --through twin", "the model has no mains: its filter is taken to keep them out"}
	case r.trials < 0:
		return hinted{fmt.Sprintf("--trials: %d is no number of trials", r.trials), "--trials 1000"}
	case r.trials > 0 && r.through == "twin":
		return hinted{"--trials goes through the model", "leave out --through twin"}
	case r.trials > 0:
		return s.count(p, truth, r)
	case r.asJSON:
		return hinted{"--json goes with --trials", "without it the output is CSV"}
	}
	sim := calib.NewSimulator(p)
	var set *reading.Set
	if r.through == "twin" {
		set = sim.TwinReadings(truth, mains, r.seed)
	} else {
		set = sim.Readings(truth, seeded(r.seed))
	}
	return s.deliver(r.out, reading.Write(set, p))
}

// count judges many rehearsals.
func (s *streams) count(p *plan.Plan, truth calib.Truth, r *rehearsal) error {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	bar := newProgress(s.err, "rehearsals")
	result := diagnose.Rehearse(ctx, p, truth, r.trials, r.seed, bar.show)
	bar.clear()
	if result.Trials == 0 {
		return errors.New("no rehearsal was finished")
	}
	if r.out != "-" {
		figure, err := report.RehearsalFigure(result)
		if err != nil {
			return err
		}
		if err := s.deliver(r.out, figure); err != nil {
			return err
		}
	}
	if r.asJSON {
		return s.write(report.RehearsalJSON(result))
	}
	_, err := io.WriteString(s.out, report.Rehearsal(result))
	return err
}

// deliver writes to a file, whole or not at all, or to standard output.
func (s *streams) deliver(name string, content []byte) error {
	if name == "-" {
		_, err := s.out.Write(content)
		return err
	}
	return report.WriteFile(name, content)
}

// truth reads the faults.
func (r *rehearsal) truth(p *plan.Plan) (calib.Truth, error) {
	truth := calib.Truth{Gain: 1}
	var faults []diagnose.Fault
	for _, f := range plantable {
		text := *r.faults[f.flag]
		if text == "" {
			continue
		}
		v, err := quantity.Parse(text, f.quantity)
		if err != nil {
			return truth, fmt.Errorf("--%s: %w", f.flag, err)
		}
		switch f.flag {
		case "gain":
			truth.Gain += v.X
		case "offset":
			truth.Offset = v.X
		case "series-resistance":
			truth.Series = v.X
		default:
			faults = append(faults, diagnose.Fault{Kind: f.kind, Variant: f.variant, Size: v.X})
		}
	}
	if r.rangeGain != "" {
		full, share, two := strings.Cut(r.rangeGain, "=")
		v, err := quantity.Parse(share, quantity.Ratio)
		if err != nil || !two {
			return truth, hinted{fmt.Sprintf("--range-gain: %q is no range and share", r.rangeGain), `--range-gain "1 mV=2 %"`}
		}
		faults = append(faults, diagnose.Fault{Kind: diagnose.RangeGain, Variant: "the " + strings.TrimSpace(full) + " range", Size: v.X})
	}
	if r.swap != "" {
		faults = append(faults, diagnose.Fault{Kind: diagnose.Swapped, Variant: r.swap, Size: 1})
	}
	for _, x := range []struct {
		flag, text string
		kind       quantity.Kind
		into       *float64
	}{{"interference", r.interference, quantity.Voltage, &truth.Interference}, {"lean", r.lean, quantity.Ratio, &truth.Lean}} {
		if x.text == "" {
			continue
		}
		v, err := quantity.Parse(x.text, x.kind)
		if err != nil {
			return truth, fmt.Errorf("--%s: %w", x.flag, err)
		}
		*x.into = v.X
	}
	if p.Fit.OffsetPerRange && truth.Offset != 0 {
		return truth, hinted{"--offset is in volts, and the plan's offset is a share of range", `offset = "volts" in [fit]`}
	}
	added, err := diagnose.Plant(p, faults)
	truth.Added = added
	return truth, err
}

// mainsOf reads "1 mV at 50 Hz".
func (r *rehearsal) mainsOf() (calib.Mains, error) {
	if r.mains == "" {
		return calib.Mains{}, nil
	}
	amplitude, frequency, two := strings.Cut(r.mains, " at ")
	if !two {
		frequency = "50 Hz"
	}
	a, err := quantity.Parse(amplitude, quantity.Voltage)
	if err != nil {
		return calib.Mains{}, fmt.Errorf("--mains: %w", err)
	}
	f, err := quantity.Parse(frequency, quantity.Frequency)
	if err != nil {
		return calib.Mains{}, fmt.Errorf("--mains: %w", err)
	}
	if a.X < 0 || f.X <= 0 {
		return calib.Mains{}, fmt.Errorf("--mains: %s is not above zero", strconv.Quote(r.mains))
	}
	return calib.Mains{Amplitude: a.X, Frequency: f.X}, nil
}
