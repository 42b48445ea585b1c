package ledger

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"time"
	"unicode/utf8"
)

// check tells what keeps a record out of the log.
func (r *Record) check() error {
	for _, f := range []struct{ name, text string }{{"who", r.Who}, {"software", r.Software}, {"serial", r.Serial},
		{"verdict", r.Verdict}, {"note", r.Note}, {"reason", r.Reason}, {"standards", strings.Join(r.Standards, "")}} {
		if !utf8.ValidString(f.text) || strings.ContainsRune(f.text, 0) {
			return fmt.Errorf("%s is %q; the log takes UTF-8 text without NUL", f.name, f.text)
		}
	}
	if r.Serial == "" {
		return errors.New("the detector has no serial number; the log finds its history by it")
	}
	if err := checkDate(r.Date); err != nil {
		return fmt.Errorf("date of the measurements: %w", err)
	}
	if r.Condition != "" && r.Condition != AsFound && r.Condition != AsLeft {
		return fmt.Errorf("condition is %q; it is %q, %q or left out", r.Condition, AsFound, AsLeft)
	}
	if (r.Supersedes != 0) != (strings.TrimSpace(r.Reason) != "") {
		return errors.New("an entry that supersedes another states the reason, and no other entry does")
	}
	return r.checkNumbers()
}

func checkDate(date string) error {
	if t, err := time.Parse(time.DateOnly, date); err != nil || t.Year() < 1 {
		return fmt.Errorf("%q is no date; one is written like %q", date, "2026-03-12")
	}
	return nil
}

// checkNumbers refuses what is not finite, and makes −0 a plain 0: a file cannot
// keep it apart.
func (r *Record) checkNumbers() error {
	finite := func(name string, numbers ...*float64) error {
		for _, x := range numbers {
			if math.IsNaN(*x) || math.IsInf(*x, 0) {
				return fmt.Errorf("%s has %g where a finite number belongs; leave out what is not known", name, *x)
			}
			*x += 0
		}
		return nil
	}
	var errs []error
	if r.Temperature != nil {
		t := *r.Temperature
		r.Temperature = &t
		errs = append(errs, finite("temperature", &t))
	}
	for _, p := range []struct {
		name string
		of   **Parameter
	}{{"gain", &r.Gain}, {"offset", &r.Offset}, {"series resistance", &r.SeriesResistance}} {
		if *p.of != nil {
			q := **p.of
			*p.of = &q
			errs = append(errs, finite(p.name, &q.Value, &q.U, &q.K))
		}
	}
	r.Ranges = append([]RangeGain(nil), r.Ranges...)
	for i := range r.Ranges {
		g := &r.Ranges[i]
		errs = append(errs, finite("gain by range", &g.Range, &g.Value, &g.U, &g.K))
	}
	return errors.Join(errs...)
}
