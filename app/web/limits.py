"""Guessing slowed down: after some failures an account and a source wait, longer each time, never locked."""

from __future__ import annotations

import threading
import time
from collections import OrderedDict
from collections.abc import Callable

from app.errors import WeirbookError

FREE_TRIES = {"account": 5, "source": 20}
LONGEST_S = 60.0
FORGOTTEN_AFTER_S = 900.0
MOST_KEYS = 10_000


class TooMany(WeirbookError):
    """Too many failed tries; the account is not locked, it waits."""

    code = "too_many_tries"
    status = 429

    def __init__(self, seconds: float) -> None:
        self.retry_after = max(1, round(seconds))
        super().__init__(f"Too many tries. Wait {self.retry_after} s, then try again; nothing is locked.")


class Attempts:
    """Failed tries by key, in this process."""

    def __init__(self, clock: Callable[[], float] = time.monotonic) -> None:
        self._clock = clock
        self._lock = threading.Lock()
        self._failed: OrderedDict[tuple[str, str], tuple[int, float]] = OrderedDict()

    def check(self, account: str, source: str) -> None:
        """Let a try pass, or say how long to wait.

        Raises
        ------
        TooMany
            Before the wait is over.
        """
        now = self._clock()
        with self._lock:
            waits = [self._wait(kind, key, now) for kind, key in (("account", account), ("source", source))]
        if max(waits) > 0:
            raise TooMany(max(waits))

    def _wait(self, kind: str, key: str, now: float) -> float:
        count, last = self._failed.get((kind, key), (0, now))
        beyond = count - FREE_TRIES[kind]
        if beyond < 0 or now - last > FORGOTTEN_AFTER_S:
            return 0.0
        return last + min(LONGEST_S, 2.0**beyond) - now

    def failed(self, account: str, source: str) -> None:
        """Count a failed try."""
        now = self._clock()
        with self._lock:
            for key in (("account", account), ("source", source)):
                count, last = self._failed.pop(key, (0, now))
                self._failed[key] = (1 if now - last > FORGOTTEN_AFTER_S else count + 1, now)
            while len(self._failed) > MOST_KEYS:
                self._failed.popitem(last=False)

    def passed(self, account: str) -> None:
        """Forget an account's failures once its password was right."""
        with self._lock:
            self._failed.pop(("account", account), None)
