-- The catalogue: dimmers and lamps under ids that their owner chooses. Each edit appends a revision, which is never changed; the entry
-- points at its latest. A deleted entry stays as a row, so that its revisions stay readable and its numbering goes on.
CREATE TABLE entries (
  seq INTEGER PRIMARY KEY AUTOINCREMENT,
  kind TEXT NOT NULL CHECK (kind IN ('dimmer', 'lamp')),
  id TEXT NOT NULL,
  -- number of the latest revision
  revision INTEGER NOT NULL CHECK (revision >= 1),
  -- `circuit` of the latest revision; null once deleted
  circuit INTEGER,
  -- what lists show and search, from the latest revision
  name TEXT,
  article_number TEXT,
  -- W: a lamp's rated power, a dimmer's rated maximum load
  rated_power REAL,
  -- ISO 8601, UTC, with milliseconds
  created_at TEXT NOT NULL CHECK (created_at GLOB '????-??-??T??:??:??.???Z'),
  revised_at TEXT NOT NULL CHECK (revised_at GLOB '????-??-??T??:??:??.???Z'),
  deleted_at TEXT CHECK (deleted_at GLOB '????-??-??T??:??:??.???Z'),
  UNIQUE (kind, id),
  CHECK ((circuit IS NULL) = (deleted_at IS NOT NULL))
) STRICT;

CREATE TABLE revisions (
  entry INTEGER NOT NULL REFERENCES entries (seq),
  revision INTEGER NOT NULL,
  -- number of the entry's first revision with the same circuit: where two are equal, only text was edited in between
  circuit INTEGER NOT NULL,
  -- SHA-256 of the canonical circuit
  circuit_sha256 BLOB NOT NULL CHECK (length(circuit_sha256) = 32),
  -- the entry as it was sent, canonical
  content TEXT NOT NULL CHECK (json_valid(content)),
  revised_at TEXT NOT NULL CHECK (revised_at GLOB '????-??-??T??:??:??.???Z'),
  PRIMARY KEY (entry, revision)
) STRICT;

-- Only entries that are not deleted stand in the two tables below and in the partial indexes.
CREATE TABLE entry_tags (
  kind TEXT NOT NULL,
  tag TEXT NOT NULL,
  id TEXT NOT NULL,
  PRIMARY KEY (kind, tag, id)
) STRICT, WITHOUT ROWID;

-- the words of names, folded to lower case without accents: what a search by the beginnings of words reads
CREATE TABLE entry_words (
  kind TEXT NOT NULL,
  word TEXT NOT NULL,
  id TEXT NOT NULL,
  PRIMARY KEY (kind, word, id)
) STRICT, WITHOUT ROWID;

-- by entry: to take an edited entry's out, and to check one entry against a search
CREATE INDEX entry_tags_of_entry ON entry_tags (kind, id);
CREATE INDEX entry_words_of_entry ON entry_words (kind, id, word);

CREATE UNIQUE INDEX entries_present ON entries (kind, id) WHERE deleted_at IS NULL;
CREATE INDEX entries_by_article_number ON entries (kind, article_number, id) WHERE deleted_at IS NULL;
CREATE INDEX entries_by_rated_power ON entries (kind, rated_power, id) WHERE deleted_at IS NULL;
