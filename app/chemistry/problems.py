"""Collect everything that is wrong before saying so.

An analyst who typed four wrong numbers wants four sentences, not four
attempts. A :class:`Problems` gathers them under dotted paths and raises once.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

from app.errors import Fields, InputError

#: No quantity of this laboratory comes near it; beyond it sums lose their meaning.
LARGEST = 1e12


def in_words(value: float) -> str:
    """Return a bound as a person writes it: ``1400``, ``0.1``.

    Parameters
    ----------
    value : float
        A finite number.

    Returns
    -------
    str
    """
    return f"{value:.10g}"


class Problems:
    """The wrong fields found so far.

    Parameters
    ----------
    prefix : str
        Put before every path, e.g. ``"calibration."``.
    """

    def __init__(self, prefix: str = "") -> None:
        self.prefix = prefix
        self.fields: Fields = {}

    def add(self, path: str, words: str) -> None:
        """Note one sentence about one field.

        Parameters
        ----------
        path : str
            Dotted path of the field.
        words : str
            What is wrong, in an analyst's words.
        """
        self.fields.setdefault(self.prefix + path, []).append(words)

    def number(
        self,
        path: str,
        value: float,
        *,
        above: float | None = None,
        least: float | None = None,
        most: float | None = None,
    ) -> None:
        """Note a number that is not finite or lies outside its bounds.

        Parameters
        ----------
        path : str
            Dotted path of the field.
        value : float
            The number.
        above, least, most : float, optional
            Bounds: strictly above, at least, at most.
        """
        if isinstance(value, bool) or not math.isfinite(value):
            self.add(path, "must be a finite number")
        elif abs(value) > LARGEST:
            self.add(path, f"is larger than {in_words(LARGEST)}, which no measurement is")
        elif above is not None and value <= above:
            self.add(path, f"must be above {in_words(above)}")
        elif least is not None and value < least:
            self.add(path, f"must be {in_words(least)} or more")
        elif most is not None and value > most:
            self.add(path, f"must be {in_words(most)} or less")

    def readings(self, path: str, values: Sequence[float]) -> None:
        """Note readings that are missing or are no numbers, under the one path of their list.

        Parameters
        ----------
        path : str
            Dotted path of the list.
        values : sequence of float
            The readings.
        """
        if not values:
            self.add(path, "needs at least one reading")
        for i, value in enumerate(values):
            if isinstance(value, bool) or not math.isfinite(value):
                self.add(path, f"reading {i + 1} must be a finite number")
            elif abs(value) > LARGEST:
                self.add(path, f"reading {i + 1} is larger than {in_words(LARGEST)}, which no measurement is")

    def stop(self, message: str) -> None:
        """Raise what was noted, if anything was.

        Parameters
        ----------
        message : str
            What cannot be done because of it.

        Raises
        ------
        InputError
            With every field noted so far.
        """
        if self.fields:
            raise InputError(message, self.fields)
