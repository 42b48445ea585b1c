// Package plan holds the test plan: what is on the bench, what will be applied
// and what counts as good. It reads the TOML file, checks it, and runs its
// blocks of steps out into single steps.
//
// All values are in SI base units, voltages in V rms, angles in radians,
// temperatures in °C. Slices keep the order of the file.
package plan

import (
	"math"
	"time"
)

// Plan is a test plan, checked and complete.
type Plan struct {
	File   string // the name it was read under
	Source []byte // the file as read

	Title, Operator, Customer, Procedure string
	Condition                            string    // "as found", "as left" or ""
	Date                                 time.Time // of the measurements; zero where not stated
	Temperature                          Quantity  // of the room, °C
	Humidity, WarmUp, Notes              string

	Generator Generator
	Detector  Detector
	Errors    []SharedError
	Standards []Standard
	Arms      []Arm
	Wires     []Wire
	Steps     []Step
	Fit       Fit
	Decision  Decision
	Bench     Freedoms

	Frequencies []float64 // Hz, the different ones of the steps, in order of first use
}

// Shape is the probability distribution that an uncertainty was stated as.
type Shape int

// Normal for u, U and a figure in parentheses; Rectangular for a tolerance.
const (
	Normal Shape = iota
	Rectangular
)

// Uncertainty is a standard uncertainty and its history. The zero value states none.
type Uncertainty struct {
	Relative, Absolute float64 // standard uncertainty: Relative·|x| + Absolute
	Shape              Shape
	DOF                float64 // degrees of freedom; 0 means infinite (none stated)
	Shares             int     // index in Plan.Errors of the further error it shares, or -1
	Standard           int     // index in Plan.Standards that the value comes from, or -1
}

// Of is the standard uncertainty of a value x, in the unit of x.
func (u Uncertainty) Of(x float64) float64 {
	if u.Relative == 0 { // of an open input's infinite resistance, say
		return u.Absolute
	}
	return u.Relative*math.Abs(x) + u.Absolute
}

// Stated tells whether an uncertainty of the quantity's own was given.
func (u Uncertainty) Stated() bool { return u.Relative != 0 || u.Absolute != 0 }

// Quantity is a stated value with its uncertainty.
type Quantity struct {
	X float64
	Uncertainty
}

// U is the standard uncertainty of the quantity's own, without the error it shares.
func (q Quantity) U() float64 { return q.Of(q.X) }

// SharedError is one relative error that several quantities have in common.
type SharedError struct {
	Name     string
	U        float64 // relative standard uncertainty
	Shape    Shape
	DOF      float64 // 0 means infinite
	Standard int     // index in Plan.Standards, or -1
}

// Standard is a piece of equipment that the result is traced to.
type Standard struct {
	Name, Description, Serial, Certificate string
	Calibrated, Due                        time.Time // zero where not stated
}

// Generator drives the ladder.
type Generator struct {
	SourceResistance Quantity // Ω
	ShownAs          string   // "peak-to-peak", "peak" or "rms"
	ShownFor         string   // "open circuit" or "matched load"
	Amplitude        Uncertainty
	PerSetting       Uncertainty
	PerFrequency     Uncertainty
	MaxAmplitude     float64     // as Amplitude.EMF, V rms open circuit; 0 where not stated
	Amplitudes       []Amplitude // the different ones that the steps use, in order of first use
}

// Amplitude is one setting of the generator.
type Amplitude struct {
	Shown         string   // as the plan writes it
	EMF           Quantity // V rms; uncertainty only where it was measured
	Measured      bool     // the generator's own Amplitude and PerSetting do not apply
	AtLadderInput bool     // measured with the ladder connected: no source resistance
}

// What a detector reads.
const (
	InPhase   = "in-phase"
	Magnitude = "magnitude"
	TwoPhase  = "in-phase and quadrature"
)

// Detector is the instrument under test.
type Detector struct {
	Serial, Description string
	Reads               string    // InPhase, Magnitude or TwoPhase
	Displays            string    // "rms", "peak" or "peak-to-peak"
	ToRMS               float64   // a displayed voltage times this is V rms: 1, 1/√2 or 1/(2√2)
	Ranges              []float64 // full scale, V rms
	Overrange           float64   // share of full scale
	Resolution          float64   // share of full scale
	InputResistance     Quantity  // Ω; +Inf where not stated
	InputCapacitance    Quantity  // F
	Noise               float64   // V/√Hz
	CurrentNoise        float64   // A/√Hz
	InputMax            float64   // V rms; 0 where not stated
	TimeConstant        float64   // s
	Poles               int
	Stability           float64 // relative, one reading to the next
	PhaseAlignment      float64 // rad, standard uncertainty; 0 where not stated
	Output              *Output // nil where not stated
	Limits              []Limit
}

// Output is the analogue output, where readings are taken there with a voltmeter.
type Output struct {
	FullScale float64     // V
	Voltmeter Uncertainty // of the voltage read: share and fixed part
}

// Limit is what the detector must meet on some ranges and at some frequencies.
type Limit struct {
	Reading, Range       float64 // shares of the value applied and of full scale
	Gain                 float64 // of each range's gain from 1; NaN where not limited
	Phase                float64 // rad; NaN where not limited
	RangeFrom, RangeTo   float64 // V rms, inclusive; 0 and +Inf where open
	FrequencyFrom        float64 // Hz, inclusive
	FrequencyTo          float64
	HasReading, HasRange bool // at least one of the two was stated
}

// Place of an arm in the ladder.
const (
	Series = "series"
	Shunt  = "shunt"
	Tap    = "tap"
)

// Arm is an element of the ladder. An arm that the steps set has one Setting a
// different value, each another resistor; a fixed arm has one; a tap has none.
type Arm struct {
	Name, Place          string
	Open                 bool       // the steps set it
	Settings             []Quantity // Ω
	Nominal              []string   // each setting as the plan writes it
	Capacitance          Quantity   // F
	Inductance           Quantity   // H
	TempCo               Quantity   // 1/K
	ReferenceTemperature float64    // °C
	MaxPower             float64    // W; 0 where not stated
}

// Where a wire lies, beside the arms.
const (
	InReturn = "return"
	InSense  = "sense"
)

// Wire is a lead of the bench.
type Wire struct {
	Name        string
	In          string   // an arm's name, InReturn or InSense
	Arm         int      // index in Plan.Arms, or -1
	InsideTap   bool     // the detector sees the drop on it
	Resistance  Quantity // Ω at room temperature, contacts not included
	TempCo      float64  // 1/K, of a resistance computed from the conductor, at room temperature; else 0
	Contacts    Quantity // Ω
	Capacitance Quantity // F, across the detector's input
}

// Step is one thing to do: a setting of everything, and readings to take.
type Step struct {
	ID           string
	Line         int     // of the block in the plan
	Frequency    float64 // Hz
	Amplitude    int     // index in Generator.Amplitudes
	Tap          int     // index in Arms
	Set          []int   // for each arm, the index in its Settings (0 for taps)
	Range        int     // index in Detector.Ranges
	Auto         bool    // the range was chosen by the program
	Phase        float64 // rad, of the reference from where it was turned to maximum
	TimeConstant float64 // s
	Repeats      int
}

// Fit says what is estimated.
type Fit struct {
	SeriesIn       string    // arm that the unknown series resistance is in; "" means the tapped one
	SeriesArm      int       // index in Arms, or -1 for the tapped one
	OffsetPerRange bool      // the offset is a share of each range, not volts
	Gain           string    // "common", "per range" or "per frequency"
	SeriesExpected *Quantity // prior knowledge of the series resistance, Ω; nil for none
}

// Decision is the rule by which the verdict is found.
type Decision struct {
	Rule           string  // "guarded", "simple" or "risk"
	Guard          float64 // factor on U; 0 for the other rules
	MaxFalseAccept float64 // probability, for the rule "risk"
	Coverage       float64 // probability, 0.95 unless stated
	Prior          *Prior  // nil where not stated
}

// Prior is what is known of such detectors before one is measured: the standard
// deviation of their errors, about zero, a share of the value applied plus a share
// of full scale.
type Prior struct{ Reading, Range float64 }
