-- Lists on their way into the catalogue. A list is staged row by row while it arrives, and applied from here once it is whole, in short
-- transactions; what it has become of each row stays until the answer has been sent. Nothing in these tables outlives its import.
CREATE TABLE imports (
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  kind TEXT NOT NULL CHECK (kind IN ('dimmer', 'lamp')),
  -- arriving: not decided yet, and forgotten when the service starts. applying: decided, and finished whatever happens, after a crash
  -- when the service starts
  state TEXT NOT NULL CHECK (state IN ('arriving', 'applying')),
  -- ISO 8601, UTC, with milliseconds
  begun_at TEXT NOT NULL CHECK (begun_at GLOB '????-??-??T??:??:??.???Z')
) STRICT;

CREATE TABLE import_rows (
  seq INTEGER PRIMARY KEY,
  import INTEGER NOT NULL REFERENCES imports (id),
  -- number of the row in the list, as its writer counts
  row INTEGER NOT NULL,
  -- the entry's id as far as it could be read
  id TEXT,
  -- the checked entry; null once applied, and where refused
  content TEXT CHECK (json_valid(content)),
  -- null until applied
  outcome TEXT CHECK (outcome IN ('created', 'revised', 'unchanged', 'refused')),
  -- why it was refused: [{path, message}]
  issues TEXT CHECK (json_valid(issues)),
  UNIQUE (import, row)
) STRICT;

CREATE INDEX import_rows_by_entry ON import_rows (import, id) WHERE id IS NOT NULL;
