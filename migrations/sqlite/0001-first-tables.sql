-- The first tables. Times are epoch milliseconds UTC; counts stay below 2^53, so that they are
-- exact as JavaScript numbers. Text sorts by code point (BINARY collation over UTF-8).

-- Who this store is, to receivers of its messages; two stores never share a name.
CREATE TABLE instance (
  one INTEGER PRIMARY KEY CHECK (one = 1),
  id TEXT NOT NULL
) STRICT;

INSERT INTO instance (one, id) VALUES (1, lower(hex(randomblob(16))));

-- Names ---------------------------------------------------------------------------------------

CREATE TABLE mixes (
  id INTEGER PRIMARY KEY,
  name TEXT NOT NULL UNIQUE,
  -- Events of the whole since the store was made, late ones included; and the late ones.
  events INTEGER NOT NULL DEFAULT 0 CHECK (events BETWEEN 0 AND 9007199254740991),
  late INTEGER NOT NULL DEFAULT 0 CHECK (late BETWEEN 0 AND events),
  -- End of the last judged window.
  judged_to_ms INTEGER
) STRICT;

CREATE TABLE strands (
  id INTEGER PRIMARY KEY,
  mix_id INTEGER NOT NULL REFERENCES mixes (id),
  name TEXT NOT NULL,
  -- Points to the strand's last verdict; null before the first and after it was forgotten.
  verdict_end_ms INTEGER,
  UNIQUE (mix_id, name)
) STRICT;

-- Ids are dense within a mix, because short ids make short packed tallies.
CREATE TABLE categories (
  mix_id INTEGER NOT NULL REFERENCES mixes (id),
  id INTEGER NOT NULL CHECK (id >= 0),
  name TEXT NOT NULL,
  PRIMARY KEY (mix_id, id),
  UNIQUE (mix_id, name)
) STRICT, WITHOUT ROWID;

-- Tallies -------------------------------------------------------------------------------------

-- One row for each window that any strand of the mix has a tally in: finds a strand's windows by
-- point look-ups, and the next window to judge without unpacking anything.
CREATE TABLE windows (
  mix_id INTEGER NOT NULL REFERENCES mixes (id),
  start_ms INTEGER NOT NULL,
  end_ms INTEGER NOT NULL CHECK (end_ms > start_ms),
  on_time INTEGER NOT NULL CHECK (on_time IN (0, 1)),
  PRIMARY KEY (mix_id, start_ms, end_ms)
) STRICT, WITHOUT ROWID;

-- The end is in the key: after the length of a mix's windows was changed, the windows of both
-- lengths that begin together stay apart.
CREATE TABLE tallies (
  mix_id INTEGER NOT NULL,
  start_ms INTEGER NOT NULL,
  end_ms INTEGER NOT NULL,
  strand_id INTEGER NOT NULL REFERENCES strands (id),
  -- Format byte 1, then varints: number of entries, and (category id, on time, late) by id.
  counts BLOB NOT NULL,
  PRIMARY KEY (mix_id, start_ms, end_ms, strand_id),
  FOREIGN KEY (mix_id, start_ms, end_ms) REFERENCES windows (mix_id, start_ms, end_ms)
) STRICT, WITHOUT ROWID;

CREATE TABLE partitions (
  collector TEXT NOT NULL,
  id TEXT NOT NULL,
  name TEXT NOT NULL,
  position INTEGER NOT NULL CHECK (position >= 0),
  inside_long_line INTEGER NOT NULL CHECK (inside_long_line IN (0, 1)),
  fingerprint TEXT,
  first_ms INTEGER,
  watermark_ms INTEGER,
  ended INTEGER NOT NULL CHECK (ended IN (0, 1)),
  quiet_since_ms INTEGER,
  waiting TEXT,
  PRIMARY KEY (collector, id)
) STRICT, WITHOUT ROWID;

-- Judging -------------------------------------------------------------------------------------

-- A digest may be met in a verdict before its text is kept.
CREATE TABLE configs (
  id INTEGER PRIMARY KEY,
  digest TEXT NOT NULL UNIQUE,
  text TEXT
) STRICT;

CREATE TABLE verdicts (
  mix_id INTEGER NOT NULL REFERENCES mixes (id),
  end_ms INTEGER NOT NULL,
  strand_id INTEGER NOT NULL REFERENCES strands (id),
  start_ms INTEGER NOT NULL CHECK (start_ms < end_ms),
  verdict TEXT NOT NULL,
  events INTEGER NOT NULL CHECK (events >= 0),
  reason TEXT NOT NULL,
  config_id INTEGER NOT NULL REFERENCES configs (id),
  version TEXT NOT NULL,
  -- JSON, deflated without a header (RFC 1951).
  evidence BLOB,
  PRIMARY KEY (mix_id, end_ms, strand_id)
) STRICT, WITHOUT ROWID;

CREATE TABLE batches (
  end_ms INTEGER NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 0),
  mixes TEXT NOT NULL,
  families TEXT NOT NULL,
  PRIMARY KEY (end_ms, number)
) STRICT, WITHOUT ROWID;

CREATE TABLE strand_states (
  strand_id INTEGER PRIMARY KEY REFERENCES strands (id),
  state TEXT NOT NULL
) STRICT;

CREATE TABLE alerts (
  id TEXT PRIMARY KEY,
  mix_id INTEGER NOT NULL REFERENCES mixes (id),
  strand_id INTEGER NOT NULL REFERENCES strands (id),
  state TEXT NOT NULL,
  raised_at_ms INTEGER NOT NULL,
  body TEXT NOT NULL
) STRICT, WITHOUT ROWID;

CREATE INDEX alerts_by_time ON alerts (raised_at_ms, id);
CREATE INDEX alerts_open ON alerts (raised_at_ms, id) WHERE state <> 'normal';

-- Outbox --------------------------------------------------------------------------------------

CREATE TABLE messages (
  sequence INTEGER PRIMARY KEY,
  id TEXT NOT NULL UNIQUE,
  sender TEXT NOT NULL,
  created_at_ms INTEGER NOT NULL,
  body TEXT NOT NULL,
  state TEXT NOT NULL CHECK (state IN ('due', 'given-up')),
  attempts INTEGER NOT NULL DEFAULT 0,
  next_attempt_ms INTEGER NOT NULL,
  last_error TEXT
) STRICT;

CREATE INDEX messages_due ON messages (sender, created_at_ms, sequence) WHERE state = 'due';

CREATE TABLE digest_entries (
  sequence INTEGER PRIMARY KEY,
  sender TEXT NOT NULL,
  alert_id TEXT NOT NULL,
  event TEXT NOT NULL,
  created_at_ms INTEGER NOT NULL
) STRICT;

CREATE INDEX digest_entries_by_sender ON digest_entries (sender, sequence);

-- Totals since the store was made -------------------------------------------------------------

CREATE TABLE accepted_totals (
  collector TEXT PRIMARY KEY,
  count INTEGER NOT NULL CHECK (count BETWEEN 0 AND 9007199254740991)
) STRICT, WITHOUT ROWID;

CREATE TABLE rejected_totals (
  collector TEXT NOT NULL,
  reason TEXT NOT NULL,
  count INTEGER NOT NULL CHECK (count BETWEEN 0 AND 9007199254740991),
  PRIMARY KEY (collector, reason)
) STRICT, WITHOUT ROWID;

-- At most 64 categories of a mix, those met first, and `(rest)` for the others.
CREATE TABLE category_totals (
  mix_id INTEGER NOT NULL REFERENCES mixes (id),
  category TEXT NOT NULL,
  count INTEGER NOT NULL CHECK (count BETWEEN 0 AND 9007199254740991),
  PRIMARY KEY (mix_id, category)
) STRICT, WITHOUT ROWID;

CREATE TABLE verdict_totals (
  mix_id INTEGER NOT NULL REFERENCES mixes (id),
  verdict TEXT NOT NULL,
  count INTEGER NOT NULL CHECK (count BETWEEN 0 AND 9007199254740991),
  PRIMARY KEY (mix_id, verdict)
) STRICT, WITHOUT ROWID;

CREATE TABLE delivery_totals (
  sender TEXT NOT NULL,
  outcome TEXT NOT NULL CHECK (outcome IN ('delivered', 'failed', 'gave-up')),
  count INTEGER NOT NULL CHECK (count BETWEEN 0 AND 9007199254740991),
  PRIMARY KEY (sender, outcome)
) STRICT, WITHOUT ROWID;
