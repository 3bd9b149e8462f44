"""Identity of entries: UUID version 7 (RFC 9562).

The id is an identity and an idempotency key, never an order: nothing sorts by
it, so a clock set back does no harm.
"""

from __future__ import annotations

import os
import uuid


def uuid7(unix_ms: int) -> str:
    """Return a UUID version 7 for a time in milliseconds since 1970.

    Parameters
    ----------
    unix_ms : int
        Milliseconds since 1970-01-01T00:00:00Z.

    Returns
    -------
    str
    """
    random = int.from_bytes(os.urandom(10), "big")
    number = (unix_ms & (2**48 - 1)) << 80 | random
    number = number & ~(0xF << 76) | 0x7 << 76
    number = number & ~(0x3 << 62) | 0x2 << 62
    return str(uuid.UUID(int=number))
