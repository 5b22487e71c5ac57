"""Preferred values of resistors and capacitors: the series E3 to E192.

Source: IEC 60063:2015 (the tables as transcribed in tests/reference/iec60063.yaml). E48, E96
and E192 are the decade's geometric series rounded to three digits, but for one member of
E192: 920, not 919. E24 keeps historical members, and E12, E6 and E3 are every second, fourth
and eighth of it.
"""

from __future__ import annotations

from bisect import bisect_left, bisect_right
from fractions import Fraction
from functools import cache
from math import isfinite

_DECADE = "10 11 12 13 15 16 18 20 22 24 27 30 33 36 39 43 47 51 56 62 68 75 82 91"
_E24 = tuple(int(member) for member in _DECADE.split())
SERIES = ("E3", "E6", "E12", "E24", "E48", "E96", "E192")


@cache
def members(series: str) -> tuple[int, ...]:
    """Return the members of one decade, as whole numbers of two or three digits.

    Raises
    ------
    ValueError
        If there is no such series.
    """
    if series not in SERIES:
        raise ValueError(f"there is no series {series}")
    count = int(series[1:])
    if count <= 24:
        return _E24[:: 24 // count]
    rule = (round(10 ** (2 + i / count)) for i in range(count))
    return tuple(920 if count == 192 and member == 919 else member for member in rule)


def is_member(value: float, series: str) -> bool:
    """Whether a value is, to the last digit, a member of the series in some decade."""
    return value in _near(value, series)


def neighbours(value: float, series: str) -> tuple[float, float]:
    """Return the members next below and next above a value; 0 or infinity beyond all floats."""
    near = _near(value, series)
    return near[bisect_left(near, value) - 1], near[bisect_right(near, value)]


def nearest(value: float, series: str) -> float:
    """Return the member nearest to a value by ratio; the lower one of two equally near."""
    if is_member(value, series):
        return value
    below, above = neighbours(value, series)
    if not isfinite(above):
        return below
    return above if Fraction(value) ** 2 > Fraction(below) * Fraction(above) else below


def _near(value: float, series: str) -> tuple[float, ...]:
    """Return the members of the value's decade and of one on either side, rising."""
    if not (isfinite(value) and value > 0.0):
        raise ValueError(f"a preferred value is positive: {value}")
    exponent = int(f"{value:e}".partition("e")[2])
    # Whole decades, because several members may round to one of the smallest floats.
    return tuple(m for e in (-1, 0, 1) for m in _decade(series, exponent + e))


@cache
def _decade(series: str, exponent: int) -> tuple[float, ...]:
    """Return the members from 10^exponent up to ten times that, each rounded once."""
    decade = members(series)
    shift = exponent - len(str(decade[0])) + 1
    return tuple(float(f"{member}e{shift}") for member in decade)
