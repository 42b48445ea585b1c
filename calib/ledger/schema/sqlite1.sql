-- Rungproof's log of calibrations. Nothing in it is ever changed or removed.
CREATE TABLE log_entry (
  id              INTEGER PRIMARY KEY,
  logged          TEXT NOT NULL,      -- UTC, 2026-03-12T10:11:12.123456Z
  who             TEXT NOT NULL,
  software        TEXT NOT NULL,
  serial          TEXT NOT NULL,      -- of the detector
  measured        TEXT NOT NULL,      -- date of the measurements, 2026-03-12
  condition       TEXT NOT NULL,      -- 'as found', 'as left' or ''
  temperature     REAL,               -- degrees Celsius
  verdict         TEXT NOT NULL,
  note            TEXT NOT NULL,
  gain            REAL,               -- with standard uncertainty u and coverage factor k
  gain_u          REAL,
  gain_k          REAL,
  offset_v        REAL,               -- V rms
  offset_u        REAL,
  offset_k        REAL,
  series_ohm      REAL,
  series_u        REAL,
  series_k        REAL,
  standards       TEXT NOT NULL,      -- names, a JSON array
  supersedes      INTEGER,
  reason          TEXT NOT NULL,
  plan_sha256     BLOB NOT NULL,
  readings_sha256 BLOB NOT NULL,
  result_sha256   BLOB NOT NULL,
  previous        BLOB NOT NULL,      -- hash of the entry before
  hash            BLOB NOT NULL,
  plan            BLOB NOT NULL,      -- these three compressed
  readings        BLOB NOT NULL,
  result          BLOB NOT NULL
) STRICT;

CREATE TABLE log_range (
  entry      INTEGER NOT NULL,
  position   INTEGER NOT NULL,        -- 0, 1, 2, … within the entry
  full_scale REAL NOT NULL,           -- V rms
  gain       REAL NOT NULL,
  gain_u     REAL NOT NULL,
  gain_k     REAL NOT NULL,
  PRIMARY KEY (entry, position)
) STRICT, WITHOUT ROWID;

CREATE TRIGGER log_entry_kept BEFORE UPDATE ON log_entry BEGIN SELECT raise(ABORT, 'entries of the log are never changed'); END;
CREATE TRIGGER log_entry_stays BEFORE DELETE ON log_entry BEGIN SELECT raise(ABORT, 'entries of the log are never removed'); END;
CREATE TRIGGER log_range_kept BEFORE UPDATE ON log_range BEGIN SELECT raise(ABORT, 'entries of the log are never changed'); END;
CREATE TRIGGER log_range_stays BEFORE DELETE ON log_range BEGIN SELECT raise(ABORT, 'entries of the log are never removed'); END;
