-- Moves what a verdict rests on out of the table that lists read, so that a page of headings reads headings alone; what is stored from
-- now on is compressed (db/evidence.ts). Lists go by the time of computing, so that a range of dates is a range of every index.
ALTER TABLE verdicts RENAME TO verdicts_of_0001;

CREATE TABLE verdicts (
  seq INTEGER PRIMARY KEY AUTOINCREMENT,
  -- first 26 hexadecimal digits of the fingerprint: what URLs carry
  id TEXT NOT NULL UNIQUE CHECK (length(id) = 26),
  -- SHA-256 of the canonical inputs and the model version: the same question has the same one
  fingerprint BLOB NOT NULL UNIQUE CHECK (length(fingerprint) = 32),
  model_version TEXT NOT NULL,
  -- ms since 1970-01-01 UTC
  created_at INTEGER NOT NULL,
  grade TEXT NOT NULL CHECK (grade IN ('suitable', 'conditional', 'unsuitable', 'undetermined')),
  summary TEXT NOT NULL,
  -- V r.m.s. and Hz
  mains_voltage REAL NOT NULL,
  mains_frequency REAL NOT NULL,
  -- all lamps on the circuit
  lamp_count INTEGER NOT NULL
) STRICT;

CREATE TABLE evidence (
  verdict INTEGER PRIMARY KEY REFERENCES verdicts (seq),
  -- how `content` is written: 0 as JSON text, 1 as db/evidence.ts says
  encoding INTEGER NOT NULL CHECK (encoding IN (0, 1)),
  -- {pairing, assumptions, judgement}: the completed pairing in wire form, which the verdict can be computed again from; the defaults
  -- that were filled in, [{path, value, basis}]; the model's Judgement, in SI units
  content BLOB NOT NULL
) STRICT;

-- Numbered anew without gaps, so that the last number is how many there are.
INSERT INTO verdicts (id, fingerprint, model_version, created_at, grade, summary, mains_voltage, mains_frequency, lamp_count)
SELECT id, unhex(fingerprint), model_version, CAST(round(unixepoch(created_at, 'subsec') * 1000) AS INTEGER), grade, summary,
  mains_voltage, mains_frequency, coalesce((SELECT sum(value ->> 'count') FROM json_each(pairing, '$.lamps')), 0)
FROM verdicts_of_0001 ORDER BY seq;

INSERT INTO evidence (verdict, encoding, content)
SELECT verdicts.seq, 0, CAST('{"pairing":' || pairing || ',"assumptions":' || assumptions || ',"judgement":' || judgement || '}' AS BLOB)
FROM verdicts JOIN verdicts_of_0001 AS old USING (id);

DROP TABLE verdicts_of_0001;

-- Each ends in the rowid, which is `seq`: every list is in the order of (created_at, seq).
CREATE INDEX verdicts_by_time ON verdicts (created_at);
CREATE INDEX verdicts_by_grade ON verdicts (grade, created_at);
CREATE INDEX verdicts_by_model_version ON verdicts (model_version, created_at);
CREATE INDEX verdicts_by_mains ON verdicts (mains_voltage, created_at);
CREATE INDEX verdicts_by_lamp_count ON verdicts (lamp_count, created_at);
