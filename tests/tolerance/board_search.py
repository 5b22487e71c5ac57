"""The worst board by plain search: all corners, random boards, then descents from the worst of
them. It shares nothing with the program; what it finds is a board, so it bounds any proof."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from itertools import product
from math import inf, log

import numpy as np
from nodal import Drawing, Real
from scipy.optimize import minimize

# Of the equations solved before the descents, for each band.
EFFORT = 30_000
CORNERS, RANDOM = 1024, 100


@dataclass(frozen=True)
class Limit:
    """One limit over a band; two levels are at its ends, straight over the logarithm of f."""

    kind: str  # "gain", "attenuation" or "ripple"
    sense: str  # "at least" or "at most"
    band_hz: tuple[float, float]  # from 0, or to infinity, where there is no such end
    levels: tuple[float, ...]
    reference_hz: float = 0.0  # of an attenuation

    @property
    def searched_hz(self) -> tuple[float, float]:
        low, high = self.band_hz
        return (low or high * 1e-5, high if high < inf else low * 1e6)

    def level_db(self, freq_hz: Real) -> Real:
        low, high = self.searched_hz
        ends = [self.levels[0], self.levels[-1]]
        return np.asarray(np.interp(np.log(freq_hz), [log(low), log(high)], ends))

    def tightened(self, by_db: float, digits: int = 9) -> Limit:
        """Return the limit with its levels moved, and rounded."""
        levels = (round(level + self.tighter * by_db, digits) + 0.0 for level in self.levels)
        return replace(self, levels=tuple(levels))

    @property
    def tighter(self) -> float:
        """The sign of a move that makes the limit tighter."""
        return -1.0 if self.sense == "at most" else 1.0

    def margins_db(self, gain_db: Real, freq_hz: Real, reference_db: Real) -> Real:
        """Return the margin of each board at each frequency, of gains of shape (B, F); that of
        a ripple is between the frequency and the highest gain of the board."""
        level = self.level_db(freq_hz)
        if self.kind == "ripple":
            return np.asarray(level - gain_db.max(axis=1)[:, None] + gain_db)
        if self.kind == "attenuation":
            return np.asarray(reference_db[:, None] - gain_db - level)
        return np.asarray(level - gain_db if self.sense == "at most" else gain_db - level)


@dataclass(frozen=True)
class Worst:
    """The worst board found."""

    margin_db: float
    values: Real
    freq_hz: float


def worst(drawing: Drawing, limits: tuple[Limit, ...], seed: int) -> list[Worst]:
    """Search for the worst board of each limit; all have the same band."""
    rng = np.random.default_rng(seed)
    boards = drawing.low + (drawing.high - drawing.low) * _places(drawing, rng)
    count = min(max(EFFORT // len(boards), 12), 48)
    freq_hz = np.geomspace(*limits[0].searched_hz, count)
    gain_db = drawing.nodal.gain_db(boards, freq_hz)
    return [_descended(drawing, limit, boards, freq_hz, gain_db) for limit in limits]


def margin_of(drawing: Drawing, limit: Limit, values: Real, freq_hz: float) -> float:
    """Return the margin of one board at a frequency; of a ripple, from the board's peak, which
    is looked for near the highest of many points."""
    low, high = limit.searched_hz
    # Near enough to 0 and to infinity, where the equations themselves have no solution.
    at = np.clip([freq_hz], low * 1e-6, high * 1e6)
    board = values[None]
    gain_db = drawing.nodal.gain_db(board, at)
    if limit.kind != "ripple":
        reference_db = _reference_db(drawing, limit, board)
        return float(limit.margins_db(gain_db, at, reference_db)[0, 0])
    for _ in range(7):
        peak_hz = np.geomspace(low, high, 101)
        peak_db = drawing.nodal.gain_db(board, peak_hz)[0]
        i = int(np.argmax(peak_db))
        low, high = peak_hz[max(i - 1, 0)], peak_hz[min(i + 1, 100)]
    return float(limit.levels[0] - peak_db.max() + gain_db[0, 0])


def _places(drawing: Drawing, rng: np.random.Generator) -> Real:
    """Return places in the box, from 0 to 1 for each value: corners, random ones, the middle."""
    free = np.flatnonzero(drawing.low < drawing.high)
    corners = (
        np.array(list(product((0.0, 1.0), repeat=len(free))))
        if 2 ** len(free) <= CORNERS
        else rng.integers(0, 2, (CORNERS, len(free))).astype(float)
    )
    inside = np.vstack([corners, rng.random((RANDOM, len(free))), np.full((1, len(free)), 0.5)])
    places = np.zeros((len(inside), len(drawing.low)))
    places[:, free] = inside
    return places


def _reference_db(drawing: Drawing, limit: Limit, boards: Real) -> Real:
    if limit.kind != "attenuation":
        return np.zeros(len(boards))
    return drawing.nodal.gain_db(boards, np.array([limit.reference_hz]))[:, 0]


def _descended(drawing: Drawing, limit: Limit, boards: Real, freq_hz: Real, gain_db: Real) -> Worst:
    margin_db = limit.margins_db(gain_db, freq_hz, _reference_db(drawing, limit, boards))
    descent = _Descent(drawing, limit)
    best = Worst(inf, boards[-1], freq_hz[0])
    for b, i in _starts(margin_db):
        peak_hz = freq_hz[int(np.argmax(gain_db[b]))]
        found = descent.run(boards[b], [freq_hz[i], peak_hz])
        best = min(best, found, key=lambda one: one.margin_db)
    return best


def _starts(margin_db: Real) -> Iterator[tuple[int, int]]:
    """Yield places of (board, frequency): the worst boards of the frequencies where the worst
    margin is least, near them, and the worst frequency of the typical board."""
    envelope = np.concatenate([[inf], margin_db.min(axis=0), [inf]])
    dips = np.flatnonzero((envelope[1:-1] <= envelope[:-2]) & (envelope[1:-1] <= envelope[2:]))
    for i in dips[np.argsort(envelope[1:-1][dips])][:3]:
        yield int(np.argmin(margin_db[:, i])), int(i)
    yield len(margin_db) - 1, int(np.argmin(margin_db[-1]))


class _Descent:
    """Descents of the margin over the logarithms of the free values and of the frequencies, each
    scaled to its range."""

    def __init__(self, drawing: Drawing, limit: Limit) -> None:
        self._drawing, self._limit = drawing, limit
        self._free = np.flatnonzero(drawing.low < drawing.high)
        self._base = np.log(drawing.low)
        self._span = np.log(drawing.high) - self._base
        low, high = limit.searched_hz
        self._first, self._width = log(low), log(high / low)
        self._moving = 2 if limit.kind == "ripple" else 1

    def run(self, values: Real, freq_hz: list[float]) -> Worst:
        count = len(self._free)
        place = (np.log(values) - self._base)[self._free] / self._span[self._free]
        tone = (np.log(freq_hz[: self._moving]) - self._first) / self._width
        start = np.clip(np.concatenate([place, tone]), 0.0, 1.0)
        for _ in range(4):
            ended = minimize(
                self._margin,
                start,
                jac=True,
                method="L-BFGS-B",
                bounds=[(0.0, 1.0)] * len(start),
                options={"ftol": 1e-13, "gtol": 1e-7, "maxiter": 60},
            )
            # A descent can end where only a step to the other end of a range leads on.
            flips = np.repeat(ended.x[None], 2 * count, axis=0)
            flips[np.arange(2 * count), np.repeat(np.arange(count), 2)] = np.tile([0, 1], count)
            margins = [self._margin(flip)[0] for flip in flips]
            if min(margins, default=inf) >= ended.fun - 1e-7:
                break
            start = flips[int(np.argmin(margins))]
        freqs = self._freq_hz(ended.x)
        return Worst(float(ended.fun), self._values(ended.x), freqs[0])

    def _values(self, z: Real) -> Real:
        x = np.zeros(len(self._base))
        x[self._free] = z[: len(self._free)]
        values = np.exp(self._base + x * self._span)
        return np.asarray(np.clip(values, self._drawing.low, self._drawing.high))

    def _freq_hz(self, z: Real) -> list[float]:
        low, high = self._limit.searched_hz
        tones = np.exp(self._first + z[len(self._free) :] * self._width)
        return [float(f) for f in np.clip(tones, low, high)]

    def _margin(self, z: Real) -> tuple[float, Real]:
        """Return the margin and its slopes."""
        limit, nodal, values = self._limit, self._drawing.nodal, self._values(z)
        freqs = self._freq_hz(z)
        sign = limit.tighter
        margin = float(-sign * limit.level_db(np.array(freqs[:1]))[0])
        rise = -sign * (limit.levels[-1] - limit.levels[0])
        # With its weight, each gain that the margin is made of; a reference does not move.
        weights = {"attenuation": (-1.0, 1.0), "ripple": (1.0, -1.0)}.get(limit.kind, (sign,))
        if limit.kind == "attenuation":
            freqs = [freqs[0], limit.reference_hz]
        slope = np.zeros(len(z))
        slope[len(self._free)] = rise
        for k, (weight, f) in enumerate(zip(weights, freqs, strict=True)):
            gain_db, by_value, by_freq = nodal.slopes(values, f)
            margin += weight * gain_db
            slope[: len(self._free)] += weight * (by_value * self._span)[self._free]
            if k < self._moving:
                slope[len(self._free) + k] += weight * by_freq * self._width
        return margin, slope
