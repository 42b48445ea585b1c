package ledger

import (
	"encoding/json"
	"errors"
	"fmt"
)

// estimate is how result.json writes one; null where it is not determined.
type estimate struct {
	Value   *float64 `json:"value"`
	U       *float64 `json:"u"`
	URandom *float64 `json:"u_random"`
	K       *float64 `json:"k"`
	Unit    string   `json:"unit"`
}

func (e *estimate) parameter() *Parameter {
	if e.Value == nil || e.U == nil {
		return nil
	}
	p := &Parameter{Value: *e.Value, U: *e.U, K: 2}
	if e.K != nil {
		p.K = *e.K
	}
	return p
}

// judged is what the log reads of a result.json.
type judged struct {
	Format      int      `json:"format"`
	Verdict     string   `json:"verdict"`
	Serial      string   `json:"detector_serial"`
	Date        string   `json:"date"`
	Condition   string   `json:"condition"`
	Temperature *float64 `json:"temperature"`
	Standards   []string `json:"standards"`
	Software    string   `json:"software"`
	Fit         struct {
		Gain        estimate           `json:"gain"`
		Offset      estimate           `json:"offset"`
		Series      estimate           `json:"series_resistance"`
		Correlation map[string]float64 `json:"correlation"`
	} `json:"fit"`
	ByRange struct {
		Used   bool     `json:"used_for_verdict"`
		Offset estimate `json:"offset"`
		Series estimate `json:"series_resistance"`
		Gain   []struct {
			Range float64 `json:"range"`
			estimate
		} `json:"gain"`
	} `json:"by_range"`
	Steps []struct {
		Range float64 `json:"range"`
		Drop  float64 `json:"drop"`
	} `json:"steps"`
}

func readResult(result []byte) (*judged, error) {
	var j judged
	if err := json.Unmarshal(result, &j); err != nil {
		return nil, fmt.Errorf("this is no result.json: %w", err)
	}
	if j.Format != 1 || j.Verdict == "" {
		return nil, errors.New("this is no result.json of format 1")
	}
	return &j, nil
}

// FromResult makes a record of a result.json: the parameters that the verdict rests
// on. Plan and readings are the caller's to add.
func FromResult(result []byte) (Record, error) {
	j, err := readResult(result)
	if err != nil {
		return Record{}, err
	}
	offset, series := j.Fit.Offset, j.Fit.Series
	if j.ByRange.Used {
		offset, series = j.ByRange.Offset, j.ByRange.Series
	}
	r := Record{Software: j.Software, Serial: j.Serial, Date: j.Date, Condition: j.Condition, Temperature: j.Temperature, Verdict: j.Verdict,
		SeriesResistance: series.parameter(), Standards: j.Standards, Result: result}
	if offset.Unit == "V" { // an offset that is a share of range has no column
		r.Offset = offset.parameter()
	}
	if !j.ByRange.Used { // else there is no one gain
		r.Gain = j.Fit.Gain.parameter()
	}
	for _, g := range j.ByRange.Gain {
		if p := g.parameter(); p != nil {
			r.Ranges = append(r.Ranges, RangeGain{Range: g.Range, Parameter: *p})
		}
	}
	return r, nil
}

// Span is the smallest and the largest drop that was read on a range, V rms.
type Span struct{ From, To float64 }

// Spans tells, by full scale, what an entry's calibration covered.
func (e *Entry) Spans() (map[float64]Span, error) {
	j, err := readResult(e.Result)
	if err != nil {
		return nil, err
	}
	out := map[float64]Span{}
	for _, s := range j.Steps {
		span, known := out[s.Range]
		if !known || s.Drop < span.From {
			span.From = s.Drop
		}
		if s.Drop > span.To {
			span.To = s.Drop
		}
		out[s.Range] = span
	}
	return out, nil
}

// Correlation of gain and offset; 0 where it is not known.
func (e *Entry) Correlation() float64 {
	j, err := readResult(e.Result)
	if err != nil {
		return 0
	}
	return j.Fit.Correlation["gain,offset"]
}

// Random is the part of a parameter's u that the readings brought: of the gain of a
// range where full is above zero, else of the offset or of the gain. 0 where it is
// not known.
func (e *Entry) Random(offset bool, full float64) float64 {
	j, err := readResult(e.Result)
	if err != nil {
		return 0
	}
	of := j.Fit.Gain
	switch {
	case full > 0:
		for _, g := range j.ByRange.Gain {
			if g.Range == full {
				of = g.estimate
			}
		}
	case offset && j.ByRange.Used:
		of = j.ByRange.Offset
	case offset:
		of = j.Fit.Offset
	}
	if of.URandom == nil {
		return 0
	}
	return *of.URandom
}
