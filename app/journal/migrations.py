"""The shape of the database, step by step.

A migration and the record that it ran share one transaction. Never change one
that was released; add the next.
"""

from __future__ import annotations

from sqlite_utils import Database
from sqlite_utils.migrations import Migrations

migrations = Migrations("weirbook")

_JOURNAL = """
CREATE TABLE journal (
  position INTEGER PRIMARY KEY,
  id TEXT NOT NULL,
  raw_digest TEXT NOT NULL,
  device TEXT NOT NULL,
  incarnation TEXT NOT NULL,
  n INTEGER NOT NULL,
  kind TEXT NOT NULL,
  about TEXT NOT NULL,
  author TEXT NOT NULL,
  carrier TEXT NOT NULL,
  received_at TEXT NOT NULL,
  held TEXT,
  raw BLOB NOT NULL,
  digest TEXT NOT NULL,
  UNIQUE (id, raw_digest)
) STRICT;
CREATE INDEX journal_device ON journal (device, incarnation, n);
CREATE INDEX journal_about ON journal (about, position);
CREATE TRIGGER journal_keeps BEFORE UPDATE ON journal
BEGIN SELECT RAISE(ABORT, 'the journal is never changed'); END;
CREATE TRIGGER journal_stays BEFORE DELETE ON journal
BEGIN SELECT RAISE(ABORT, 'the journal is never changed'); END;
"""

_RECORD = """
CREATE TABLE record (
  type TEXT NOT NULL,
  id TEXT NOT NULL,
  parent TEXT NOT NULL,
  at TEXT NOT NULL,
  position INTEGER NOT NULL,
  body TEXT,
  PRIMARY KEY (type, id)
) STRICT;
CREATE INDEX record_position ON record (position);
CREATE INDEX record_parent ON record (type, parent, at);
"""

_BESIDE = """
CREATE TABLE meta (key TEXT PRIMARY KEY, value TEXT NOT NULL) STRICT;
CREATE TABLE blob (digest TEXT PRIMARY KEY, media_type TEXT NOT NULL, bytes BLOB NOT NULL) STRICT;
CREATE TABLE account (
  person TEXT PRIMARY KEY,
  sign_in TEXT NOT NULL UNIQUE,
  password TEXT NOT NULL
) STRICT;
CREATE TABLE session (
  token_digest TEXT PRIMARY KEY,
  person TEXT NOT NULL,
  started_at TEXT NOT NULL,
  seen_at TEXT NOT NULL
) STRICT;
"""


_PARTS = """
CREATE TABLE part (
  digest TEXT NOT NULL,
  at INTEGER NOT NULL,
  size INTEGER NOT NULL,
  bytes BLOB NOT NULL,
  received_at TEXT NOT NULL,
  PRIMARY KEY (digest, at)
) STRICT;
"""


@migrations()
def m001_journal(db: Database) -> None:
    """The journal, append-only by trigger."""
    db.executescript(_JOURNAL)


@migrations()
def m002_records(db: Database) -> None:
    """The records, derived from the journal."""
    db.executescript(_RECORD)


@migrations()
def m003_beside(db: Database) -> None:
    """What is not derived: attachments, credentials, sessions, the store's own facts."""
    db.executescript(_BESIDE)


@migrations()
def m004_parts(db: Database) -> None:
    """What has come of attachments that are not whole yet."""
    db.executescript(_PARTS)
