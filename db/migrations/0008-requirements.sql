-- What dimmer the lamps of a verdict would want: computed when it is first asked for, and kept. A row is never changed.
CREATE TABLE requirements (
  verdict INTEGER NOT NULL REFERENCES verdicts (seq),
  -- of the model that computed it, which may be a later one than the verdict's
  model_version TEXT NOT NULL,
  -- ms since 1970-01-01 UTC
  created_at INTEGER NOT NULL,
  -- the model's Requirement, in SI units
  content TEXT NOT NULL CHECK (json_valid(content)),
  PRIMARY KEY (verdict, model_version)
) STRICT;
