"""A requirement as its file states it: numbers already read, nothing yet judged."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise
from math import inf
from typing import cast

from filtercheck.errors import InputError
from filtercheck.position import Position

# What a key of a requirement can hold once its texts are read: a number in SI units or dB, a
# word, or a list of those; a limit given over frequency is a list of (frequency, level).
Setting = float | str | tuple["Setting", ...]
Band = tuple[float, float]
Mask = tuple[tuple[float, float], ...]  # (frequency [Hz], level [dB]), rising in frequency


@dataclass(frozen=True)
class Sampling:
    """What a yield must be, and how sure that must be."""

    share: float  # of the boards
    confidence: float
    boards: int


@dataclass(frozen=True)
class Requirement:
    """One requirement; `settings` holds the keys that belong to its kind."""

    name: str
    kind: str
    output: str
    verify: str  # "worst-case", "nominal" or "yield"
    sampling: Sampling | None  # for "yield"
    settings: Mapping[str, Setting]
    places: Mapping[str, Position]  # of each key's value
    at: Position

    def number(self, key: str) -> float | None:
        """Return a number, or None where the key is left out."""
        value = self.settings.get(key)
        return float(value) if isinstance(value, float) else None

    def word(self, key: str, default: str) -> str:
        """Return a word, or the default where the key is left out."""
        value = self.settings.get(key)
        return value if isinstance(value, str) else default

    def interval(self, key: str) -> Band | None:
        """Return two numbers in rising order, or None where the key is left out; an upper
        end `up` is infinite.

        Raises
        ------
        InputError
            If the second is not above the first.
        """
        value = self.settings.get(key)
        if not isinstance(value, tuple):
            return None
        low, high = (end if isinstance(end, float) else inf for end in value)
        if not low < high:
            raise self.error(key, "the ends are not in rising order", "the lower end first")
        return low, high

    def mask(self, key: str) -> Mask | None:
        """Return a limit over frequency; a single level is one point, at 0 Hz.

        Raises
        ------
        InputError
            If the frequencies are not in rising order.
        """
        value = self.settings.get(key)
        if isinstance(value, float):
            return ((0.0, value),)
        if not isinstance(value, tuple):
            return None
        points = cast("Mask", value)
        if any(a[0] >= b[0] for a, b in pairwise(points)):
            raise self.error(
                key, "the frequencies are not in rising order", "each frequency above the last"
            )
        return points

    def error(self, key: str, problem: str, allowed: str, fix: str | None = None) -> InputError:
        """Return an error at the value of `key`, or at the requirement where that is missing."""
        at = self.places.get(key, self.at)
        found = at.text[at.column - 1 : at.column - 1 + at.width]
        return InputError(
            f"{self.name}: {problem}",
            at,
            found=found or "nothing",
            allowed=allowed,
            fix=fix or f"mend `{key}` of {self.name}",
        )
