package ledger

import (
	"encoding/hex"
	"fmt"
	"time"
)

// Record is what is logged of one calibration.
type Record struct {
	Who         string   `json:"who"`
	Software    string   `json:"software"` // name and version
	Serial      string   `json:"serial"`   // of the detector
	Date        string   `json:"date"`     // of the measurements, "2026-03-12"
	Condition   string   `json:"condition,omitempty"`
	Temperature *float64 `json:"temperature,omitempty"` // °C; nil: not stated
	Verdict     string   `json:"verdict"`
	Note        string   `json:"note,omitempty"`

	Gain             *Parameter  `json:"gain,omitempty"`              // 1; nil: not determined
	Offset           *Parameter  `json:"offset,omitempty"`            // V rms
	SeriesResistance *Parameter  `json:"series_resistance,omitempty"` // ohm
	Ranges           []RangeGain `json:"gain_by_range,omitempty"`
	Standards        []string    `json:"standards,omitempty"` // names of the standards used

	Supersedes int64  `json:"supersedes,omitempty"` // the entry that this one corrects; 0: none
	Reason     string `json:"reason,omitempty"`     // of the correction

	Plan     []byte `json:"plan,omitempty"`     // as read
	Readings []byte `json:"readings,omitempty"` // as read
	Result   []byte `json:"result,omitempty"`   // the content of result.json
}

// The conditions of a detector; "" where it is not stated.
const (
	AsFound = "as found"
	AsLeft  = "as left"
)

// Parameter is an estimate with its standard uncertainty u and the coverage factor
// k: U = k·u.
type Parameter struct {
	Value float64 `json:"value"`
	U     float64 `json:"u"`
	K     float64 `json:"k"`
}

// RangeGain is the gain of one range.
type RangeGain struct {
	Range float64 `json:"range"` // full scale, V rms
	Parameter
}

// Entry is a record in the log.
type Entry struct {
	ID     int64     `json:"id"`     // 1, 2, 3, …
	Logged time.Time `json:"logged"` // UTC, whole microseconds
	Record
	PlanSHA256     Digest `json:"plan_sha256"`
	ReadingsSHA256 Digest `json:"readings_sha256"`
	ResultSHA256   Digest `json:"result_sha256"`
	Previous       Digest `json:"previous"` // hash of the entry before; zero for the first
	Hash           Digest `json:"hash"`     // of the content and Previous: what Seal gives

	// The entry that supersedes this one; 0: in force. List and Show tell it; it is no
	// part of the content.
	SupersededBy int64 `json:"-"`
}

// Digest is a SHA-256, written in hexadecimal.
type Digest [32]byte

func (d Digest) String() string { return hex.EncodeToString(d[:]) }

func (d Digest) MarshalText() ([]byte, error) { return []byte(d.String()), nil }

func (d *Digest) UnmarshalText(text []byte) error {
	b, err := hex.DecodeString(string(text))
	if err != nil || len(b) != len(d) {
		return fmt.Errorf("%q is no SHA-256 in hexadecimal", text)
	}
	copy(d[:], b)
	return nil
}

// timeLayout is how a time stands in the log and in the hash: always this long, so
// that text sorts as time.
const timeLayout = "2006-01-02T15:04:05.000000Z"
