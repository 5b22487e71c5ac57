"""Limits on a level over frequency: how they are read, and how near a curve comes to them."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise
from math import inf, isnan, nan

import numpy as np

from filtercheck.model.requirement import Band, Mask, Requirement
from filtercheck.network.curve import EVERYWHERE, Curve, Point
from filtercheck.quantities import rounded
from filtercheck.tolerance import limit as tolerance
from filtercheck.tolerance.limit import Pull, levels_at


@dataclass(frozen=True)
class Approach:
    """Where a curve comes nearest to a limit, or goes farthest beyond it."""

    freq_hz: float
    gain_db: float
    limit_db: float
    margin_db: float


def nearest(curve: Curve, band_hz: Band, limit_db: Mask, sense: str) -> Approach:
    """Return the nearest approach to a limit on a band; the lowest frequency of equals.

    A limit is straight in dB over the logarithm of frequency between its points, so that on
    each stretch the distance is least where the slopes of curve and limit are equal, or at
    an end. A distance that is no number counts as nearest.
    """
    sign = 1.0 if sense == "at most" else -1.0
    best = Approach(nan, nan, nan, inf)
    for stretch, line in _stretches(band_hz, limit_db):
        freq_hz = curve.candidates_hz(stretch, line)
        gain_db = curve.response.gain_db(freq_hz)
        limit = levels_at(limit_db, freq_hz)
        with np.errstate(invalid="ignore"):
            margin = sign * (limit - gain_db)
        i = int(np.argmin(margin))
        if not margin[i] >= best.margin_db:
            best = Approach(*(float(x[i]) for x in (freq_hz, gain_db, limit, margin)))
    return best


def _stretches(band_hz: Band, limit_db: Mask) -> Iterator[tuple[Band, float]]:
    """Yield the pieces of the band on which the limit is straight, and its slope there."""
    low, high = band_hz
    inner = [freq for freq, _ in limit_db if low < freq < high]
    ends = [low, *inner, high]
    for stretch in pairwise(ends):
        if len(limit_db) == 1:
            yield stretch, 0.0
        else:
            below, above = levels_at(limit_db, np.array(stretch))
            yield stretch, float((above - below) / np.log(stretch[1] / stretch[0]))


def band(requirement: Requirement, key: str = "band") -> Band:
    """Return the band of a requirement."""
    return requirement.interval(key) or EVERYWHERE


def mask(requirement: Requirement, key: str, band_hz: Band) -> Mask | None:
    """Return a limit over a band.

    Raises
    ------
    InputError
        If the limit is given at several frequencies that do not span the band.
    """
    limit_db = requirement.mask(key)
    if limit_db and len(limit_db) > 1:
        first, last = limit_db[0][0], limit_db[-1][0]
        if first <= 0.0:
            raise requirement.error(
                key, "a sloped limit cannot start at 0 Hz", "frequencies above 0 Hz"
            )
        if first > band_hz[0] or last < band_hz[1]:
            raise requirement.error(
                key,
                f"the limit is given from {_hertz(first)} to {_hertz(last)} only",
                f"points that span the band, {_hertz(band_hz[0])} to {_hertz(band_hz[1])}",
                f"add points to `{key}`, or narrow `band`",
            )
    return limit_db


def crossed(floor: Mask, ceiling: Mask, band_hz: Band) -> bool:
    """Whether a floor lies above a ceiling somewhere on a band; both are piecewise straight,
    so it is enough to look at their points."""
    low, high = band_hz
    points = [low, high, *(f for f, _ in (*floor, *ceiling) if low < f < high)]
    if len(floor) == len(ceiling) == 1:
        return floor[0][1] > ceiling[0][1]
    freq_hz = np.array(points)
    return bool((levels_at(floor, freq_hz) > levels_at(ceiling, freq_hz)).any())


@dataclass(frozen=True)
class Reference:
    """What a relative limit is measured against, on the same board."""

    freq_hz: float | None  # the gain there, or
    passband_hz: Band | None  # the largest gain in there

    def of(self, curve: Curve) -> Point:
        """Return the point of reference of one board."""
        if self.freq_hz is not None:
            return Point(self.freq_hz, curve.gain_db(self.freq_hz))
        return curve.highest(self.passband_hz or EVERYWHERE)

    def any_of(self) -> tolerance.Reference:
        """Return it for a limit that is kept once it is kept from one frequency: the largest
        gain of a pass band is at least that anywhere in it."""
        return tolerance.Reference(self.span_hz, every=False)

    def divided(self, edge_hz: float, *, below: bool) -> tuple[tolerance.Reference, Band | None]:
        """Return the part of it below (or above) an edge, of which one frequency is enough, and
        the band of the other part, if there is one."""
        low, high = self.span_hz
        if low == high or (low >= edge_hz if below else high <= edge_hz):
            return self.any_of(), None
        near = (low, min(high, edge_hz)) if below else (max(low, edge_hz), high)
        beyond = (edge_hz, high) if below else (low, edge_hz)
        return tolerance.Reference(near, every=False), beyond if beyond[0] < beyond[1] else None

    def every_of(self, side: str) -> tolerance.Reference:
        """Return it for a limit, on one side of it, that must be kept from the largest gain,
        wherever in the pass band that is."""
        return tolerance.Reference(self.span_hz, every=True, side=side)

    @property
    def span_hz(self) -> Band:
        """Between what frequencies it lies; equal ends are one frequency."""
        if self.freq_hz is not None:
            return self.freq_hz, self.freq_hz
        return self.passband_hz or EVERYWHERE


def reference(requirement: Requirement) -> Reference:
    """Return what a relative requirement refers to.

    Raises
    ------
    InputError
        If it states both a frequency and a pass band, or neither.
    """
    freq_hz, passband_hz = requirement.number("reference"), requirement.interval("passband")
    if (freq_hz is None) == (passband_hz is None):
        both = freq_hz is not None
        raise requirement.error(
            "reference",
            "has two references" if both else "has no reference to measure from",
            "either `reference` (a frequency) or `passband` (a band, whose peak counts)",
            "delete one of them" if both else "add `reference: 100 Hz`, or `passband: [ , ]`",
        )
    return Reference(freq_hz, passband_hz)


def pull(*, raised_hz: float | None, lowered_hz: float | None) -> Pull | None:
    """Return the gain at one frequency less that at another; None where there are none."""
    if raised_hz is None or lowered_hz is None or isnan(raised_hz) or isnan(lowered_hz):
        return None
    return Pull(((raised_hz, 1), (lowered_hz, -1)))


def _hertz(freq_hz: float) -> str:
    return rounded(freq_hz, "frequency")
