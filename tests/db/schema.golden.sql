CREATE INDEX entries_by_article_number ON entries (kind, article_number, id) WHERE deleted_at IS NULL;

CREATE INDEX entries_by_rated_power ON entries (kind, rated_power, id) WHERE deleted_at IS NULL;

CREATE UNIQUE INDEX entries_present ON entries (kind, id) WHERE deleted_at IS NULL;

CREATE INDEX entry_tags_of_entry ON entry_tags (kind, id);

CREATE INDEX entry_words_of_entry ON entry_words (kind, id, word);

CREATE INDEX import_rows_by_entry ON import_rows (import, id) WHERE id IS NOT NULL;

CREATE INDEX imports_by_state ON imports (state, id);

CREATE INDEX judged_pairs_by_dimmer ON judged_pairs (dimmer, created_at, verdict, lamp_count, plain);

CREATE INDEX judged_pairs_by_lamp ON judged_pairs (lamp, created_at, verdict, lamp_count, plain);

CREATE INDEX judged_pairs_by_pair ON judged_pairs (dimmer, lamp, created_at, verdict, lamp_count, plain, stale);

CREATE INDEX judged_pairs_of_circuit ON judged_pairs (circuit_row);

CREATE INDEX judged_pairs_of_verdict ON judged_pairs (verdict);

CREATE INDEX judged_pairs_stale ON judged_pairs (created_at, verdict) WHERE stale = 1;

CREATE INDEX screenings_by_state ON screenings (state, seq);

CREATE INDEX screenings_measured ON screenings (model_version, seq) WHERE done > 0;

CREATE INDEX verdicts_by_grade ON verdicts (grade, created_at);

CREATE INDEX verdicts_by_lamp_count ON verdicts (lamp_count, created_at);

CREATE INDEX verdicts_by_mains ON verdicts (mains_voltage, created_at);

CREATE INDEX verdicts_by_model_version ON verdicts (model_version, created_at);

CREATE INDEX verdicts_by_time ON verdicts (created_at, seq, grade, lamp_count, mains_voltage, mains_frequency, model_version);

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

CREATE TABLE entry_tags (
  kind TEXT NOT NULL,
  tag TEXT NOT NULL,
  id TEXT NOT NULL,
  PRIMARY KEY (kind, tag, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE entry_words (
  kind TEXT NOT NULL,
  word TEXT NOT NULL,
  id TEXT NOT NULL,
  PRIMARY KEY (kind, word, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE evidence (
  verdict INTEGER PRIMARY KEY REFERENCES verdicts (seq),
  -- how `content` is written: 0 as JSON text, 1 as db/evidence.ts says
  encoding INTEGER NOT NULL CHECK (encoding IN (0, 1)),
  -- {pairing, assumptions, judgement}: the completed pairing in wire form, which the verdict can be computed again from; the defaults
  -- that were filled in, [{path, value, basis}]; the model's Judgement, in SI units
  content BLOB NOT NULL
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

CREATE TABLE imports (
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  kind TEXT NOT NULL CHECK (kind IN ('dimmer', 'lamp')),
  -- arriving: not decided yet, and forgotten when the service starts. applying: decided, and finished whatever happens, after a crash
  -- when the service starts
  state TEXT NOT NULL CHECK (state IN ('arriving', 'applying')),
  -- ISO 8601, UTC, with milliseconds
  begun_at TEXT NOT NULL CHECK (begun_at GLOB '????-??-??T??:??:??.???Z')
) STRICT;

CREATE TABLE judged_pairs (
  seq INTEGER PRIMARY KEY,
  verdict INTEGER NOT NULL REFERENCES verdicts (seq),
  -- the verdict's created_at, so that lists by entry have the order of all lists
  created_at INTEGER NOT NULL,
  -- `seq` of the first row of the same circuit: all of them are stale together
  circuit_row INTEGER NOT NULL,
  -- null where the dimmer, or this group's lamp, was given in full and not by its id
  dimmer INTEGER REFERENCES entries (seq),
  dimmer_revision INTEGER,
  lamp INTEGER REFERENCES entries (seq),
  lamp_revision INTEGER,
  -- lamps of this group
  lamp_count INTEGER NOT NULL,
  -- 1 where the pair stands for itself: one group of lamps, nothing added, judged no less strictly than by default
  plain INTEGER NOT NULL CHECK (plain IN (0, 1)),
  -- 1 once the dimmer or a lamp of the circuit is no longer what was judged
  stale INTEGER NOT NULL CHECK (stale IN (0, 1)),
  CHECK ((dimmer IS NULL) = (dimmer_revision IS NULL)),
  CHECK ((lamp IS NULL) = (lamp_revision IS NULL)),
  CHECK (dimmer IS NOT NULL OR lamp IS NOT NULL)
) STRICT;

CREATE TABLE migrations (
  number INTEGER PRIMARY KEY,
  name TEXT NOT NULL,
  sha256 TEXT NOT NULL,
  applied_at TEXT NOT NULL
) STRICT;

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

CREATE TABLE screening_entries (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  kind TEXT NOT NULL CHECK (kind IN ('dimmer', 'lamp')),
  place INTEGER NOT NULL,
  entry INTEGER NOT NULL,
  revision INTEGER NOT NULL,
  PRIMARY KEY (screening, kind, place),
  FOREIGN KEY (entry, revision) REFERENCES revisions (entry, revision)
) STRICT, WITHOUT ROWID;

CREATE TABLE screening_events (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  revision INTEGER NOT NULL,
  at TEXT NOT NULL CHECK (at GLOB '????-??-??T??:??:??.???Z'),
  state TEXT NOT NULL,
  -- why, where the state does not say it by itself
  detail TEXT,
  PRIMARY KEY (screening, revision)
) STRICT, WITHOUT ROWID;

CREATE TABLE screening_failures (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  position INTEGER NOT NULL,
  kind TEXT NOT NULL,
  detail TEXT NOT NULL,
  attempts INTEGER NOT NULL,
  -- the pairing in wire form, as asked
  pairing TEXT NOT NULL CHECK (json_valid(pairing)),
  PRIMARY KEY (screening, position)
) STRICT, WITHOUT ROWID;

CREATE TABLE screening_pages (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  page INTEGER NOT NULL,
  outcomes BLOB NOT NULL CHECK (length(outcomes) <= 448),
  PRIMARY KEY (screening, page)
) STRICT, WITHOUT ROWID;

CREATE TABLE screening_pairs (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  position INTEGER NOT NULL,
  lamp INTEGER NOT NULL,
  dimmer INTEGER NOT NULL,
  count INTEGER NOT NULL,
  PRIMARY KEY (screening, position)
) STRICT, WITHOUT ROWID;

CREATE TABLE screenings (
  seq INTEGER PRIMARY KEY AUTOINCREMENT,
  id TEXT NOT NULL UNIQUE CHECK (length(id) = 26),
  state TEXT NOT NULL CHECK (state IN ('queued', 'running', 'paused', 'finished', 'cancelled')),
  -- why it is paused, null unless it is
  pause TEXT CHECK ((pause IS NULL) = (state <> 'paused')),
  -- as it was asked for, in wire form
  request TEXT NOT NULL CHECK (json_valid(request)),
  -- under which its verdicts are: a screening that goes on under another version begins anew
  model_version TEXT NOT NULL,
  -- ISO 8601, UTC, with milliseconds
  created_at TEXT NOT NULL CHECK (created_at GLOB '????-??-??T??:??:??.???Z'),
  -- not before this; null: at once
  start_at TEXT CHECK (start_at GLOB '????-??-??T??:??:??.???Z'),
  started_at TEXT CHECK (started_at GLOB '????-??-??T??:??:??.???Z'),
  ended_at TEXT CHECK ((ended_at IS NULL) = (state NOT IN ('finished', 'cancelled'))),
  -- 1: its pairings are those of screening_pairs, 0: the product of what it selects
  listed INTEGER NOT NULL DEFAULT 0 CHECK (listed IN (0, 1)),
  -- how many it selects
  lamps INTEGER NOT NULL,
  dimmers INTEGER NOT NULL,
  -- pairings in all, stored before they were reached, judged by this screening, given up
  total INTEGER NOT NULL CHECK (total >= 0),
  stored INTEGER NOT NULL DEFAULT 0,
  done INTEGER NOT NULL DEFAULT 0,
  failed INTEGER NOT NULL DEFAULT 0,
  -- every page before this one is whole
  open_page INTEGER NOT NULL DEFAULT 0,
  -- ms that threads spent judging, for estimates
  judging_ms REAL NOT NULL DEFAULT 0,
  -- rises with every change that a reader can see
  revision INTEGER NOT NULL DEFAULT 1,
  CHECK (stored + done + failed <= total)
) STRICT;

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
