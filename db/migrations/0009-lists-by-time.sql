-- The index by time holds everything that a list of verdicts can be filtered by: a walk through it reads no row that it does not show.
DROP INDEX verdicts_by_time;
CREATE INDEX verdicts_by_time ON verdicts (created_at, seq, grade, lamp_count, mains_voltage, mains_frequency, model_version);
