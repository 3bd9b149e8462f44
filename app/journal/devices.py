"""What the journal knows of each device: how far it got, what is missing, where its own chain breaks.

A device numbers its entries and names the digest of the one before. A gap means
that an entry has not come; two entries with one number mean that the device
was copied; a digest that does not fit means that its store was changed or put
back. None of it is a reason to refuse: everything is kept and told.
"""

from __future__ import annotations

import sqlite3
from dataclasses import dataclass

_DEVICES = """
SELECT device, incarnation, max(n), count(DISTINCT n), count(*), max(received_at),
  (SELECT carrier FROM journal AS last WHERE last.device = j.device AND last.incarnation = j.incarnation
   ORDER BY position DESC LIMIT 1)
FROM journal AS j WHERE n > 0 GROUP BY device, incarnation ORDER BY max(received_at) DESC
"""
_BREAKS = """
SELECT count(*) FROM journal AS one JOIN journal AS before
  ON before.device = one.device AND before.incarnation = one.incarnation AND before.n = one.n - 1
WHERE one.device = ? AND one.incarnation = ? AND one.n > 1
  AND json_extract(CAST(one.raw AS TEXT), '$.prev') IS NOT before.raw_digest
  AND NOT EXISTS (SELECT 1 FROM journal AS other WHERE other.device = one.device
    AND other.incarnation = one.incarnation AND other.n = one.n - 1
    AND other.raw_digest = json_extract(CAST(one.raw AS TEXT), '$.prev'))
"""


@dataclass(frozen=True)
class Known:
    """One store of one device.

    Attributes
    ----------
    device, incarnation : str
        The device, and the random name of its local store.
    last, entries : int
        Its highest number, and how many entries of it are in the journal.
    missing, doubled, breaks : int
        Numbers that never came, numbers that came twice with different
        content, entries that do not follow the one before.
    seen : str
        When its last entry came.
    carrier : str
        Who was signed in then.
    """

    device: str
    incarnation: str
    last: int
    entries: int
    missing: int
    doubled: int
    breaks: int
    seen: str
    carrier: str


def known_devices(connection: sqlite3.Connection) -> list[Known]:
    """Return every store of every device, the last seen first."""
    found = []
    for device, incarnation, last, distinct, count, seen, carrier in connection.execute(_DEVICES).fetchall():
        breaks = connection.execute(_BREAKS, (device, incarnation)).fetchone()[0]
        doubled = count - distinct
        found.append(Known(device, incarnation, last, count, last - distinct, doubled, breaks, seen, carrier))
    return found
