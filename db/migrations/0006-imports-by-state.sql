-- What a start looks for: imports that an earlier process left unfinished.
CREATE INDEX imports_by_state ON imports (state, id);
