-- Every entry's hash once more, for the check to tell what was done to an entry.
CREATE TABLE log_seal (id BIGINT PRIMARY KEY, hash BYTEA NOT NULL);
INSERT INTO log_seal SELECT id, hash FROM log_entry;
CREATE TRIGGER log_seal_kept BEFORE UPDATE OR DELETE OR TRUNCATE ON log_seal EXECUTE FUNCTION log_refuse();

CREATE INDEX log_by_serial ON log_entry (serial, measured);
CREATE INDEX log_by_date ON log_entry (measured);
CREATE UNIQUE INDEX log_superseded ON log_entry (supersedes) WHERE supersedes IS NOT NULL;
