-- Rungproof's log of calibrations. Nothing in it is ever changed or removed.
CREATE TABLE log_entry (
  id              BIGINT PRIMARY KEY,
  logged          TEXT COLLATE "C" NOT NULL,      -- UTC, 2026-03-12T10:11:12.123456Z
  who             TEXT COLLATE "C" NOT NULL,
  software        TEXT COLLATE "C" NOT NULL,
  serial          TEXT COLLATE "C" NOT NULL,      -- of the detector
  measured        TEXT COLLATE "C" NOT NULL,      -- date of the measurements, 2026-03-12
  condition       TEXT COLLATE "C" NOT NULL,      -- 'as found', 'as left' or ''
  temperature     DOUBLE PRECISION,               -- degrees Celsius
  verdict         TEXT COLLATE "C" NOT NULL,
  note            TEXT COLLATE "C" NOT NULL,
  gain            DOUBLE PRECISION,               -- with standard uncertainty u and coverage factor k
  gain_u          DOUBLE PRECISION,
  gain_k          DOUBLE PRECISION,
  offset_v        DOUBLE PRECISION,               -- V rms
  offset_u        DOUBLE PRECISION,
  offset_k        DOUBLE PRECISION,
  series_ohm      DOUBLE PRECISION,
  series_u        DOUBLE PRECISION,
  series_k        DOUBLE PRECISION,
  standards       TEXT COLLATE "C" NOT NULL,      -- names, a JSON array
  supersedes      BIGINT,
  reason          TEXT COLLATE "C" NOT NULL,
  plan_sha256     BYTEA NOT NULL,
  readings_sha256 BYTEA NOT NULL,
  result_sha256   BYTEA NOT NULL,
  previous        BYTEA NOT NULL,      -- hash of the entry before
  hash            BYTEA NOT NULL,
  plan            BYTEA NOT NULL,      -- these three compressed
  readings        BYTEA NOT NULL,
  result          BYTEA NOT NULL
);

CREATE TABLE log_range (
  entry      BIGINT NOT NULL,
  position   INTEGER NOT NULL,        -- 0, 1, 2, … within the entry
  full_scale DOUBLE PRECISION NOT NULL,           -- V rms
  gain       DOUBLE PRECISION NOT NULL,
  gain_u     DOUBLE PRECISION NOT NULL,
  gain_k     DOUBLE PRECISION NOT NULL,
  PRIMARY KEY (entry, position)
);

-- What is compressed already need not be tried again.
ALTER TABLE log_entry ALTER plan SET STORAGE EXTERNAL, ALTER readings SET STORAGE EXTERNAL, ALTER result SET STORAGE EXTERNAL;

CREATE FUNCTION log_refuse() RETURNS trigger LANGUAGE plpgsql AS
$$ BEGIN RAISE EXCEPTION 'entries of the log are never changed or removed'; END $$;
CREATE TRIGGER log_entry_kept BEFORE UPDATE OR DELETE OR TRUNCATE ON log_entry EXECUTE FUNCTION log_refuse();
CREATE TRIGGER log_range_kept BEFORE UPDATE OR DELETE OR TRUNCATE ON log_range EXECUTE FUNCTION log_refuse();
