-- The indexes of pairs hold the lamp count and what else decides whether a row is shown, so that rows which are not are not read.
DROP INDEX judged_pairs_by_pair;
CREATE INDEX judged_pairs_by_pair ON judged_pairs (dimmer, lamp, created_at, verdict, lamp_count, plain, stale);
DROP INDEX judged_pairs_by_dimmer;
CREATE INDEX judged_pairs_by_dimmer ON judged_pairs (dimmer, created_at, verdict, lamp_count, plain);
DROP INDEX judged_pairs_by_lamp;
CREATE INDEX judged_pairs_by_lamp ON judged_pairs (lamp, created_at, verdict, lamp_count, plain);
