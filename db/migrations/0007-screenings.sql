-- Screenings: a lamp list against a shelf of dimmers. The pairings of a screening are never listed: a pairing is a position in the
-- product lamps x dimmers x counts, in that order, and what became of it stands at that position of a page. Only a re-screening of
-- stale verdicts, whose pairings are no product, lists them.
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

CREATE INDEX screenings_by_state ON screenings (state, seq);
CREATE INDEX screenings_measured ON screenings (model_version, seq) WHERE done > 0;

-- The selection, frozen when the screening starts: entry and revision at each place.
CREATE TABLE screening_entries (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  kind TEXT NOT NULL CHECK (kind IN ('dimmer', 'lamp')),
  place INTEGER NOT NULL,
  entry INTEGER NOT NULL,
  revision INTEGER NOT NULL,
  PRIMARY KEY (screening, kind, place),
  FOREIGN KEY (entry, revision) REFERENCES revisions (entry, revision)
) STRICT, WITHOUT ROWID;

-- The pairings of a listed screening, by places in its selection.
CREATE TABLE screening_pairs (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  position INTEGER NOT NULL,
  lamp INTEGER NOT NULL,
  dimmer INTEGER NOT NULL,
  count INTEGER NOT NULL,
  PRIMARY KEY (screening, position)
) STRICT, WITHOUT ROWID;

-- What became of the pairings at the positions 64 * page to 64 * page + 63; 7 bytes a position: outcome, seq of the verdict.
CREATE TABLE screening_pages (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  page INTEGER NOT NULL,
  outcomes BLOB NOT NULL CHECK (length(outcomes) <= 448),
  PRIMARY KEY (screening, page)
) STRICT, WITHOUT ROWID;

-- Pairings that were given up, with what they were judged from.
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

-- Changes of state, under the screening's revision at which they came.
CREATE TABLE screening_events (
  screening INTEGER NOT NULL REFERENCES screenings (seq),
  revision INTEGER NOT NULL,
  at TEXT NOT NULL CHECK (at GLOB '????-??-??T??:??:??.???Z'),
  state TEXT NOT NULL,
  -- why, where the state does not say it by itself
  detail TEXT,
  PRIMARY KEY (screening, revision)
) STRICT, WITHOUT ROWID;
