package calib

import (
	"encoding/json"
	"math"

	"rungproof/calib/decision"
)

// Estimate is the value of a quantity with its standard uncertainty. Where the
// readings cannot determine it, Known is false and the numbers mean nothing.
type Estimate struct {
	Value   float64
	U       float64 // combined standard uncertainty
	URandom float64 // the part of it that the readings bring
	Unit    string
	Known   bool
	K       float64 // coverage factor, from the budget of this quantity
}

// Expanded is the expanded uncertainty U = k·u.
func (e Estimate) Expanded() float64 { return e.K * e.U }

// MarshalJSON writes null for what is not known.
func (e Estimate) MarshalJSON() ([]byte, error) {
	type plain struct {
		Value   number `json:"value"`
		U       number `json:"u"`
		URandom number `json:"u_random"`
		K       number `json:"k"` // coverage factor: U = k·u
		Unit    string `json:"unit"`
	}
	out := plain{number(e.Value), number(e.U), number(e.URandom), number(e.K), e.Unit}
	if !e.Known {
		nan := number(math.NaN())
		out = plain{nan, nan, nan, nan, e.Unit}
	}
	return json.Marshal(out)
}

// number is a float64 that is null in JSON where it is not finite.
type number float64

func (n number) MarshalJSON() ([]byte, error) {
	if f := float64(n); !math.IsNaN(f) && !math.IsInf(f, 0) {
		return json.Marshal(f)
	}
	return []byte("null"), nil
}

// Result is what an evaluation comes to, the content of result.json. SI units,
// voltages in V rms.
type Result struct {
	Format   int              `json:"format"`
	Verdict  decision.Outcome `json:"verdict"`
	Fit      FitResult        `json:"fit"`
	ByRange  *Gains           `json:"by_range,omitempty"`
	ByFreq   *Gains           `json:"by_frequency,omitempty"`
	Steps    []StepResult     `json:"steps"`
	Missing  []string         `json:"steps_without_readings,omitempty"`
	Findings []Finding        `json:"findings"`

	Coverage       float64       `json:"coverage"`        // probability of the expanded uncertainties
	CoverageFactor float64       `json:"coverage_factor"` // U = k·u
	Repeatability  Repeatability `json:"repeatability"`
	Condition      *Interval     `json:"series_resistance_for_pass,omitempty"` // not separable: where all steps pass, Ω
	NoSignal       bool          `json:"no_signal,omitempty"`                  // the detector does not respond to the ladder
	Odd            []OddReading  `json:"odd_readings,omitempty"`
	Limiting       *Limiting     `json:"limited_by_the_bench,omitempty"`
	Budgets        []*Budget     `json:"budgets,omitempty"`     // of gain, offset and series resistance, where a report is made
	MonteCarlo     *MonteCarlo   `json:"monte_carlo,omitempty"` // where it was asked for
	Inputs         []InputResult `json:"inputs"`
	Serial         string        `json:"detector_serial,omitempty"`
	Date           string        `json:"date,omitempty"`      // of the measurements, 2026-03-12
	State          string        `json:"condition,omitempty"` // "as found" or "as left"
	Temperature    float64       `json:"temperature"`         // of the room, °C
	Standards      []string      `json:"standards,omitempty"` // names of those used
	Software       string        `json:"software,omitempty"`
	PlanSHA256     string        `json:"plan_sha256,omitempty"`
	ReadingsSHA256 string        `json:"readings_sha256,omitempty"`
}

// Separable tells whether the fit that errors and verdict rest on parts the offset
// from the series resistance.
func (r *Result) Separable() bool { return !r.NoSignal && r.Fit.Intercept == nil }

// Deciding are the offset and the series resistance that errors and verdict rest
// on: those of the fit by range where one common gain is wrong, since the common
// fit then charges the faulty range's error to them. Neither is known where that
// fit cannot part them.
func (r *Result) Deciding() (offset, series Estimate) {
	if !r.Separable() {
		return Estimate{Unit: r.Fit.Offset.Unit}, Estimate{Unit: "ohm"}
	}
	if r.ByRange.Used {
		return r.ByRange.Offset, r.ByRange.SeriesResistance
	}
	return r.Fit.Offset, r.Fit.SeriesResistance
}

// FitResult is the fit that the plan asks for.
type FitResult struct {
	Separable        bool              `json:"separable"` // offset and series resistance
	Gain             Estimate          `json:"gain"`
	Offset           Estimate          `json:"offset"`
	OffsetQuadrature *Estimate         `json:"offset_quadrature,omitempty"`
	SeriesResistance Estimate          `json:"series_resistance"`
	Phase            []ByFrequency     `json:"phase,omitempty"`                // rad, two-phase readings
	Intercept        *Estimate         `json:"intercept,omitempty"`            // not separable: all of it as an offset
	AsSeries         *Estimate         `json:"as_series_resistance,omitempty"` // not separable: all of it as a series resistance
	Correlation      map[string]number `json:"correlation"`
	ChiSquared       number            `json:"chi_squared"`
	DOF              int               `json:"dof"`
	P                number            `json:"p_chi_squared"` // probability of a larger χ² by chance
}

// Gains is the fit with a gain for each range or for each frequency.
type Gains struct {
	PCommon          number    `json:"p_common_gain"`    // probability that chance alone makes the gains differ as much
	Used             bool      `json:"used_for_verdict"` // errors and verdict take the series resistance from here
	Offset           Estimate  `json:"offset"`
	SeriesResistance Estimate  `json:"series_resistance"`
	Gain             []KeyGain `json:"gain"`
}

// KeyGain is the gain of one range or at one frequency.
type KeyGain struct {
	Range     float64          // full scale, V rms; 0 where it is by frequency
	Frequency float64          // Hz; 0 where it is by range
	Limit     float64          // of the deviation from 1; NaN where the plan limits none
	Outcome   decision.Outcome // NotJudged where the plan limits none
	Estimate
}

// MarshalJSON writes the key, the estimate and, where it is judged, the outcome, flat.
func (g KeyGain) MarshalJSON() ([]byte, error) {
	flat := struct {
		Range     *number `json:"range,omitempty"`
		Frequency *number `json:"frequency,omitempty"`
		Value     number  `json:"value"`
		U         number  `json:"u"`
		URandom   number  `json:"u_random"`
		K         number  `json:"k"`
		Unit      string  `json:"unit"`
		Limit     *number `json:"limit,omitempty"`
		Outcome   string  `json:"outcome,omitempty"`
	}{Unit: g.Unit, Value: number(math.NaN()), U: number(math.NaN()), URandom: number(math.NaN()), K: number(math.NaN())}
	if g.Known {
		flat.Value, flat.U, flat.URandom, flat.K = number(g.Value), number(g.U), number(g.URandom), number(g.K)
	}
	key := number(g.Range + g.Frequency)
	if g.Frequency != 0 {
		flat.Frequency = &key
	} else {
		flat.Range = &key
	}
	if g.Outcome != decision.NotJudged {
		limit := number(g.Limit)
		flat.Limit, flat.Outcome = &limit, g.Outcome.String()
	}
	return json.Marshal(flat)
}

// ByFrequency is an estimate at one frequency.
type ByFrequency struct {
	Frequency float64  `json:"frequency"` // Hz
	Estimate  Estimate `json:"estimate"`
}

// StepResult is one step: what was expected, what was read, and whether it is good.
type StepResult struct {
	ID           string           `json:"id"`
	Drop         float64          `json:"drop"`      // what the ladder delivers with the wiring as stated, V
	PhaseDeg     float64          `json:"phase_deg"` // of the drop against the generator
	Range        float64          `json:"range"`     // full scale, V
	SigmaOne     float64          `json:"sigma_one_reading"`
	Expected     float64          `json:"expected"` // reading of a detector without fault, V, signed
	UExpected    float64          `json:"u_expected"`
	Reading      number           `json:"reading"` // mean, along the expected phasor
	UReading     number           `json:"u_reading"`
	Error        number           `json:"error"` // reading less expected, the fitted series resistance included
	K            float64          `json:"k"`     // coverage factor: U = k·u
	U            number           `json:"U"`
	Limit        number           `json:"limit"`
	Acceptance   number           `json:"acceptance_limit"`          // the largest error that passes, V; null where none can
	Conformity   number           `json:"probability_of_conformity"` // that the true error is within the limit
	Risk         number           `json:"risk_of_outcome"`           // that an accepted one is bad, or a rejected one good
	Capability   number           `json:"capability"`                // limit over U
	PhaseError   number           `json:"phase_error"`               // rad, two-phase readings: what is left after the fitted phase
	UPhase       number           `json:"U_phase"`
	PhaseLimit   number           `json:"phase_limit"`
	Outcome      decision.Outcome `json:"outcome"`
	Beyond       bool             `json:"beyond_full_scale"`
	Flags        []string         `json:"flags,omitempty"`
	Repeats      int              `json:"readings"`
	Current      float64          `json:"current"`       // through the arm of the series resistance, A rms, with the sign of the expected reading
	Unexplained  number           `json:"unexplained"`   // reading over gain less the drop without unknown series resistance, inputs as fitted, V
	UUnexplained number           `json:"u_unexplained"` // of the reading alone
	Standardised number           `json:"standardised_residual"`

	// Not part of result.json.
	Index int `json:"-"` // in the plan's steps
}

// Finding is something a person should know about the result.
type Finding struct {
	Kind string `json:"kind"`
	Text string `json:"text"`
	Do   string `json:"do,omitempty"` // what to do about it

	Evidence *Evidence `json:"evidence,omitempty"` // of a cause that the readings show
}

// Evidence is how sure a cause is.
type Evidence struct {
	Cause      string   `json:"cause"`
	Variant    string   `json:"variant,omitempty"`
	Whose      string   `json:"whose"`
	Size       float64  `json:"size"`
	Expanded   float64  `json:"U"`
	Unit       string   `json:"unit"`
	Share      float64  `json:"share_of_deviation"` // of the clean hypothesis' χ² that it accounts for
	Fall       float64  `json:"fall_of_chi_squared"`
	P          float64  `json:"p"` // probability of as much by chance, over all variants tried
	Strength   string   `json:"strength"`
	Contradict []string `json:"contradicted_by,omitempty"`
	Decides    string   `json:"decided_by"`
}

// Repeatability compares the scatter of repeated readings with the predicted
// one: χ² of the pooled variance, one-sided.
type Repeatability struct {
	Ratio number  `json:"ratio"` // observed over predicted standard deviation; null without repeats
	DOF   int     `json:"dof"`
	P     number  `json:"p"` // probability of at least this scatter by chance
	Basis Scatter `json:"readings_uncertainty"`
}

// Interval of a quantity.
type Interval struct {
	From number `json:"from"`
	To   number `json:"to"`
}

// InputResult is one uncertain input, as stated and as fitted.
type InputResult struct {
	Name     string  `json:"name"`
	Value    float64 `json:"value"` // as stated
	U        float64 `json:"u"`
	Unit     string  `json:"unit"`
	Fitted   float64 `json:"fitted"`
	UFitted  float64 `json:"u_fitted"`
	Shape    string  `json:"distribution"`  // "normal" or "rectangular"
	DOF      float64 `json:"dof,omitempty"` // degrees of freedom; infinite where left out
	Standard string  `json:"standard,omitempty"`
}
