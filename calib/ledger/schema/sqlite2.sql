-- Every entry's hash once more, for the check to tell what was done to an entry.
CREATE TABLE log_seal (id INTEGER PRIMARY KEY, hash BLOB NOT NULL) STRICT;
INSERT INTO log_seal SELECT id, hash FROM log_entry;
CREATE TRIGGER log_seal_kept BEFORE UPDATE ON log_seal BEGIN SELECT raise(ABORT, 'entries of the log are never changed'); END;
CREATE TRIGGER log_seal_stays BEFORE DELETE ON log_seal BEGIN SELECT raise(ABORT, 'entries of the log are never removed'); END;

CREATE INDEX log_by_serial ON log_entry (serial, measured);
CREATE INDEX log_by_date ON log_entry (measured);
CREATE UNIQUE INDEX log_superseded ON log_entry (supersedes) WHERE supersedes IS NOT NULL;
