package ledger

import (
	"bufio"
	"context"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"strconv"
	"strings"
)

// each runs do on every entry of one state of the log, in the order logged.
func (s *store) each(ctx context.Context, content, by bool, do func(*Entry) error) error {
	return s.read(ctx, func(q querier) error {
		for last := int64(0); ; {
			loaded, _, err := load(ctx, q, choice{where: "e.id > $1", args: []any{last}, order: fmt.Sprintf("e.id LIMIT %d", chunk), content: content, by: by})
			if err != nil || len(loaded) == 0 {
				return err
			}
			for i := range loaded {
				if loaded[i].damage != nil {
					return fmt.Errorf("entry %d of the log was altered: %w; check the log", loaded[i].ID, loaded[i].damage)
				}
				if err := do(&loaded[i].Entry); err != nil {
					return err
				}
			}
			last = loaded[len(loaded)-1].ID
		}
	})
}

// ExportJSON writes entries with their plan, readings and result in base64.
func (s *store) ExportJSON(ctx context.Context, w io.Writer) error {
	buffer := bufio.NewWriterSize(w, 1<<16)
	encoder := json.NewEncoder(buffer)
	encoder.SetEscapeHTML(false)
	if err := s.each(ctx, true, false, func(e *Entry) error { return encoder.Encode(e) }); err != nil {
		return err
	}
	return buffer.Flush()
}

// head of the exported table. A gain by range is written as "range:gain:u:k", several
// apart by spaces, standards apart by "; ".
var csvHead = []string{"id", "logged", "date", "serial", "condition", "temperature [°C]", "verdict",
	"gain", "u(gain)", "k(gain)", "offset [V]", "u(offset) [V]", "k(offset)", "series resistance [ohm]", "u(series resistance) [ohm]", "k(series resistance)",
	"gain by range", "standards", "who", "software", "note", "supersedes", "superseded by", "reason",
	"plan SHA-256", "readings SHA-256", "result SHA-256", "previous", "hash"}

func (s *store) ExportCSV(ctx context.Context, w io.Writer) error {
	table := csv.NewWriter(w)
	if err := table.Write(csvHead); err != nil {
		return err
	}
	if err := s.each(ctx, false, true, func(e *Entry) error { return table.Write(csvRow(e)) }); err != nil {
		return err
	}
	table.Flush()
	return table.Error()
}

func csvRow(e *Entry) []string {
	number := func(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }
	id := func(n int64) string {
		if n == 0 {
			return ""
		}
		return strconv.FormatInt(n, 10)
	}
	temperature := ""
	if e.Temperature != nil {
		temperature = number(*e.Temperature)
	}
	out := []string{id(e.ID), e.Logged.Format(timeLayout), e.Date, e.Serial, e.Condition, temperature, e.Verdict}
	for _, p := range []*Parameter{e.Gain, e.Offset, e.SeriesResistance} {
		if p == nil {
			out = append(out, "", "", "")
		} else {
			out = append(out, number(p.Value), number(p.U), number(p.K))
		}
	}
	var ranges []string
	for _, r := range e.Ranges {
		ranges = append(ranges, number(r.Range)+":"+number(r.Value)+":"+number(r.U)+":"+number(r.K))
	}
	return append(out, strings.Join(ranges, " "), strings.Join(e.Standards, "; "), e.Who, e.Software, e.Note, id(e.Supersedes), id(e.SupersededBy), e.Reason,
		e.PlanSHA256.String(), e.ReadingsSHA256.String(), e.ResultSHA256.String(), e.Previous.String(), e.Hash.String())
}
