package ledger

import (
	"fmt"
	"strings"
	"testing"
)

// forge runs statements on the log, and takes the triggers away first that refuse
// them.
func forge(t testing.TB, b backend, location string, statements ...string) {
	t.Helper()
	var all []string
	for _, table := range []string{"entry", "range", "seal"} {
		for _, kind := range []string{"kept", "stays"} {
			drop := fmt.Sprintf("DROP TRIGGER IF EXISTS log_%s_%s", table, kind)
			if b.name == "postgres" {
				drop += " ON log_" + table
			}
			all = append(all, drop)
		}
	}
	if err := b.raw(location, strings.Join(append(all, statements...), ";")); err != nil {
		t.Fatalf("%s: %v", statements, err)
	}
}

// forgeries are the columns of each table that hold content, with what a forger might put
// there.
var forgeries = map[string]string{
	"logged": "'2026-01-01T00:00:00.000000Z'", "who": "'x'", "software": "'x'", "serial": "'x'", "measured": "'2001-01-01'",
	"condition": "'as left'", "temperature": "25.0", "verdict": "'fail'", "note": "''",
	"gain": "gain + 1e-12", "gain_u": "gain_u * 2", "gain_k": "2", "offset_v": "-offset_v", "offset_u": "0", "offset_k": "NULL",
	"series_ohm": "NULL", "series_u": "1", "series_k": "1", "standards": "'[]'", "supersedes": "1", "reason": "'x'",
	"plan_sha256": "result_sha256", "readings_sha256": "plan_sha256", "result_sha256": "plan_sha256", "previous": "hash", "hash": "previous",
	"plan": "readings", "readings": "result", "result": "plan",
}

func TestEveryFieldIsSealed(t *testing.T) {
	onBoth(t, func(t *testing.T, b backend) {
		s, location := filled(t, b, 6)
		forge(t, b, location, "CREATE TABLE kept AS SELECT * FROM log_entry", "CREATE TABLE kept_range AS SELECT * FROM log_range")
		for column := range strings.SplitSeq(strings.ReplaceAll(columns+", plan, readings, result", "\n\t", " "), ", ") {
			if _, ok := forgeries[column]; !ok && column != "id" {
				t.Errorf("column %s is not tried", column)
			}
		}
		for column, value := range forgeries {
			forge(t, b, location, fmt.Sprintf("UPDATE log_entry SET %s = %s WHERE id = 3", column, value))
			r, text := checked(t, s)
			if len(r.Findings) != 1 || r.Findings[0].Kind != Altered || r.Findings[0].First != 3 || r.Findings[0].Last != 3 {
				t.Errorf("%s altered: %q", column, text)
			}
			forge(t, b, location, fmt.Sprintf("UPDATE log_entry SET %s = (SELECT k.%[1]s FROM kept k WHERE k.id = 3) WHERE id = 3", column))
		}
		for _, change := range []string{
			"UPDATE log_range SET full_scale = 1 WHERE entry = 3 AND position = 0", "UPDATE log_range SET gain = 1 WHERE entry = 3 AND position = 0",
			"UPDATE log_range SET gain_u = 1 WHERE entry = 3 AND position = 1", "UPDATE log_range SET gain_k = 1 WHERE entry = 3 AND position = 1",
			"UPDATE log_range SET position = 2 WHERE entry = 3 AND position = 1", "DELETE FROM log_range WHERE entry = 3 AND position = 0",
			"UPDATE log_entry SET supersedes = 0 WHERE id = 3", "UPDATE log_entry SET logged = replace(logged, '.', ',') WHERE id = 3",
			"UPDATE log_entry SET standards = replace(standards, '\",\"', '\", \"') WHERE id = 3",
			"DELETE FROM log_range WHERE entry = 3", "INSERT INTO log_range SELECT 3, 2, full_scale, gain, gain_u, gain_k FROM kept_range WHERE entry = 1 AND position = 0",
			"UPDATE log_seal SET hash = (SELECT hash FROM log_seal WHERE id = 1) WHERE id = 3",
		} {
			forge(t, b, location, change)
			if r, text := checked(t, s); len(r.Findings) != 1 || r.Findings[0].Kind != Altered || r.Findings[0].First != 3 {
				t.Errorf("%s: %q", change, text)
			}
			forge(t, b, location, "DELETE FROM log_range WHERE entry = 3", "INSERT INTO log_range SELECT * FROM kept_range WHERE entry = 3",
				"UPDATE log_seal SET hash = (SELECT hash FROM kept WHERE id = 3) WHERE id = 3",
				"UPDATE log_entry SET supersedes = k.supersedes, logged = k.logged, standards = k.standards FROM kept k WHERE log_entry.id = 3 AND k.id = 3")
		}
		if r, text := checked(t, s); !r.Sound() {
			t.Errorf("all put back, and yet: %s", text)
		}
	})
}

// shift moves all entries from id on by a place. Keys are unique, so they go far off
// first.
func shift(from, by int) []string {
	var out []string
	for _, c := range []struct{ table, key string }{{"log_entry", "id"}, {"log_range", "entry"}} {
		out = append(out, fmt.Sprintf("UPDATE %s SET %s = %[2]s + 1000 WHERE %[2]s >= %[3]d", c.table, c.key, from),
			fmt.Sprintf("UPDATE %s SET %s = %[2]s - 1000 + (%[3]d) WHERE %[2]s >= 1000", c.table, c.key, by))
	}
	return out
}

func remove(id int) []string {
	return []string{fmt.Sprintf("DELETE FROM log_entry WHERE id = %d", id), fmt.Sprintf("DELETE FROM log_range WHERE entry = %d", id)}
}

// twin is entry 1 once more, under another id.
func twin(id int) []string {
	return []string{"INSERT INTO log_entry SELECT " + fmt.Sprint(id) + strings.TrimPrefix(columns, "id") + ", plan, readings, result FROM log_entry WHERE id = 1",
		fmt.Sprintf("INSERT INTO log_range SELECT %d, position, full_scale, gain, gain_u, gain_k FROM log_range WHERE entry = 1", id)}
}

func join(parts ...[]string) (out []string) {
	for _, p := range parts {
		out = append(out, p...)
	}
	return out
}

func TestAddedAndRemoved(t *testing.T) {
	dropSeal := "DELETE FROM log_seal WHERE id = "
	for name, c := range map[string]struct {
		forgery []string
		want    string
	}{
		"removed":                    {remove(3), "removed 3-3: entry 3 was removed"},
		"first removed":              {remove(1), "removed 1-1: entry 1 was removed"},
		"last removed":               {remove(6), "removed 6-6: entry 6 was removed"},
		"two removed":                {join(remove(3), remove(4)), "removed 3-4: entries 3 to 4 were removed"},
		"removed with its seal":      {append(remove(3), dropSeal+"3"), "removed 3-3: entry 3 was removed, seal and all"},
		"first two with seals":       {join(remove(1), remove(2), []string{dropSeal + "1", dropSeal + "2"}), "removed 1-2: entries 1 to 2 were removed, seal and all"},
		"removed, the rest moved":    {append(remove(3), shift(4, -1)...), "moved 3-5: what stands as entries 3 to 5 was logged as entries 4 to 6\nremoved 3-3: entry 3 was removed"},
		"added at the end":           {twin(7), "added 7-7: entry 7 was added: it was never logged"},
		"added far off":              {twin(1 << 40), "added 1099511627776-1099511627776: entry 1099511627776 was added: it was never logged"},
		"added before the first":     {twin(0), "added 0-0: entry 0 was added: it was never logged"},
		"added ahead, and sealed":    {append(twin(0), "INSERT INTO log_seal SELECT 0, hash FROM log_seal WHERE id = 1"), "added 0-0: entry 0 was added: it was never logged"},
		"added, the rest moved":      {join(shift(3, 1), twin(3)), "added 3-3: entry 3 was added: it was never logged\nmoved 4-7: what stands as entries 4 to 7 was logged as entries 3 to 6"},
		"exchanged for another":      {join(remove(3), twin(3)), "altered 3-3: entry 3 was altered: its content, and its hash was made to fit"},
		"seal removed":               {[]string{dropSeal + "3"}, "altered 3-3: entry 3 is as logged; its seal was removed"},
		"seals renumbered as well":   {join(remove(3), shift(4, -1), []string{dropSeal + "3", "UPDATE log_seal SET id = id + 1000 WHERE id > 3", "UPDATE log_seal SET id = id - 1001 WHERE id > 1000"}), "broken 3-3: entry 3 does not follow entry 2: entries between them were removed, or entry 2 altered, with their seals"},
		"first gone, all renumbered": {join(remove(1), shift(2, -1), []string{dropSeal + "1", "UPDATE log_seal SET id = id + 1000 WHERE id > 1", "UPDATE log_seal SET id = id - 1001 WHERE id > 1000"}), "broken 1-1: entry 1 is not the first of its chain: entries before it were removed"},
		"swapped": {[]string{"UPDATE log_entry SET id = 100 WHERE id = 3", "UPDATE log_entry SET id = 3 WHERE id = 5", "UPDATE log_entry SET id = 5 WHERE id = 100",
			"UPDATE log_range SET entry = 100 WHERE entry = 3", "UPDATE log_range SET entry = 3 WHERE entry = 5", "UPDATE log_range SET entry = 5 WHERE entry = 100"},
			"moved 3-3: what stands as entry 3 was logged as entry 5\nmoved 5-5: what stands as entry 5 was logged as entry 3"},
		"ranges of no entry": {[]string{"UPDATE log_range SET entry = 40 WHERE entry = 3 AND position = 1"}, "altered 3-3: entry 3 was altered: its content does not give its hash\nadded 40-40: entry 40: gains by range of an entry that was never logged"},
		"hash alone":         {[]string{"UPDATE log_entry SET hash = previous WHERE id = 3"}, "altered 3-3: entry 3 was altered: its hash is not that of its content, which is as logged"},
		"readings alone":     {[]string{"UPDATE log_entry SET readings = plan WHERE id = 3"}, "altered 3-3: entry 3 was altered: readings: its bytes do not give its SHA-256"},
		"two at once":        {[]string{"UPDATE log_entry SET note = 'x' WHERE id IN (2, 6)"}, "altered 2-2: entry 2 was altered: its content does not give its hash\naltered 6-6: entry 6 was altered: its content does not give its hash"},
	} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			onBoth(t, func(t *testing.T, b backend) {
				s, location := filled(t, b, 6)
				forge(t, b, location, append([]string{"DROP INDEX log_superseded"}, c.forgery...)...)
				if r, text := checked(t, s); text != c.want || r.Sound() {
					t.Errorf("found\n%s\nwant\n%s", text, c.want)
				}
			})
		})
	}
}

// What was done is found in a log of several spans, at their ends too.
func TestLongLog(t *testing.T) {
	location := sqliteBackend.location(t)
	s := open(t, location)
	generate(t, s, 2*chunk+10)
	if r, text := checked(t, s); !r.Sound() || r.Entries != 2*chunk+10 {
		t.Fatalf("%d entries, %s", r.Entries, text)
	}
	for i, id := range []int{chunk, chunk + 1, 2*chunk + 10} {
		forge(t, sqliteBackend, location, fmt.Sprintf("UPDATE log_entry SET note = 'x' WHERE id = %d", id))
		if r, text := checked(t, s); len(r.Findings) != i+1 || r.Findings[i].First != int64(id) || r.Findings[i].Kind != Altered {
			t.Errorf("entry %d altered: %s", id, text)
		}
	}
	forge(t, sqliteBackend, location, remove(chunk+1)...)
	if _, text := checked(t, s); !strings.Contains(text, fmt.Sprintf("removed %d-%[1]d", chunk+1)) {
		t.Errorf("entry %d removed: %s", chunk+1, text)
	}
}
