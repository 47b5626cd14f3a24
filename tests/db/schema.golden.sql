CREATE INDEX verdicts_by_grade ON verdicts (grade, seq);

CREATE INDEX verdicts_by_mains ON verdicts (mains_voltage, mains_frequency, seq);

CREATE INDEX verdicts_by_model_version ON verdicts (model_version, seq);

CREATE TABLE migrations (
  number INTEGER PRIMARY KEY,
  name TEXT NOT NULL,
  sha256 TEXT NOT NULL,
  applied_at TEXT NOT NULL
) STRICT;

CREATE TABLE verdicts (
  seq INTEGER PRIMARY KEY AUTOINCREMENT,
  -- first 26 hexadecimal digits of the fingerprint: what URLs carry
  id TEXT NOT NULL UNIQUE CHECK (length(id) = 26),
  -- SHA-256 of the canonical inputs and the model version: the same question has the same one
  fingerprint TEXT NOT NULL UNIQUE CHECK (length(fingerprint) = 64),
  model_version TEXT NOT NULL,
  -- ISO 8601, UTC, with milliseconds
  created_at TEXT NOT NULL CHECK (created_at GLOB '????-??-??T??:??:??.???Z'),
  grade TEXT NOT NULL CHECK (grade IN ('suitable', 'conditional', 'unsuitable', 'undetermined')),
  summary TEXT NOT NULL,
  -- V r.m.s. and Hz
  mains_voltage REAL NOT NULL,
  mains_frequency REAL NOT NULL,
  -- the completed pairing, in wire form: what the verdict can be computed again from
  pairing TEXT NOT NULL CHECK (json_valid(pairing)),
  -- the defaults that were filled in: [{path, value, basis}]
  assumptions TEXT NOT NULL CHECK (json_valid(assumptions)),
  -- the model's Judgement, in SI units
  judgement TEXT NOT NULL CHECK (json_valid(judgement))
) STRICT;
