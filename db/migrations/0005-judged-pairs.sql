-- Which revision of which catalogue entries a verdict judged. The same verdict may be asked for several entries, and a mixed circuit
-- has one row a group of lamps. A row is only ever changed in `stale`.
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

CREATE INDEX judged_pairs_of_verdict ON judged_pairs (verdict);
CREATE INDEX judged_pairs_of_circuit ON judged_pairs (circuit_row);
CREATE INDEX judged_pairs_by_pair ON judged_pairs (dimmer, lamp, created_at, verdict);
CREATE INDEX judged_pairs_by_dimmer ON judged_pairs (dimmer, created_at, verdict);
CREATE INDEX judged_pairs_by_lamp ON judged_pairs (lamp, created_at, verdict);
CREATE INDEX judged_pairs_stale ON judged_pairs (created_at, verdict) WHERE stale = 1;
