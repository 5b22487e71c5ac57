"""The worst board of a stage at given frequencies: coordinate ascent with exact line maxima.

Along one own value x a polynomial is a + b x, so |N|^2 and |D|^2 are quadratic in x, and the
logarithm of a product of their powers has its turning points where a sum of +-q'/q vanishes.
Candidates are the ends of the line and the point where each quadratic is least, near which a
resonance on the line must lie; Newton's method on the sum makes them exact.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.stage import Stage, at_frequency

SWEEPS = 40
NEWTON_STEPS = 4
SAMPLES = 9  # of a line along a common factor, in which the response is not affine
SMALLEST = 1e-300


@dataclass(frozen=True)
class Aim:
    """The sum of sign * ln|H| over frequencies, which the worst board makes largest."""

    terms: tuple[tuple[float, int], ...]  # (angular frequency, +1 or -1)


def heights(stage: Stage, aim: Aim, points: Real) -> Real:
    """Return the aim at boards of a box, shape (S,), from points of shape (S, P + T)."""
    values = stage.box.symbol_values(points)
    top, bottom = stage.numerator.at_points(values), stage.denominator.at_points(values)
    total = np.zeros(len(points))
    for omega, sign in aim.terms:
        total += sign * (
            _log(at_frequency(top, omega, stage.degree))
            - _log(at_frequency(bottom, omega, stage.degree))
        )
    return total


def _log(values: Complex) -> Real:
    return np.log(np.maximum(np.abs(values), SMALLEST))


def best_corner(stage: Stage, aim: Aim) -> Real:
    """Return the corner of the box where the aim is largest, shape (P + T,)."""
    total = np.zeros(())
    for omega, sign in aim.terms:
        for nodes, part in ((stage.numerators, sign), (stage.denominators, -sign)):
            corners = nodes.values[:, stage.true_corners]
            total = total + part * _log(at_frequency(corners, omega, stage.degree))
    corner, common = np.unravel_index(int(np.argmax(total)), total.shape)
    return stage.corner(int(corner), int(common))


def climb(stage: Stage, aim: Aim, start: Real) -> Real:
    """Return a board from which no single value can raise the aim, beginning at `start`."""
    point, height = start, float(heights(stage, aim, start[None, :])[0])
    if not len(stage.box.free):
        return point
    for _ in range(SWEEPS):
        candidates = _line_maxima(stage, aim, point)
        reached = heights(stage, aim, candidates)
        best = int(np.argmax(reached))
        if not reached[best] > height + 1e-12:
            break
        point, height = candidates[best], float(reached[best])
    return point


def _line_maxima(stage: Stage, aim: Aim, point: Real) -> Real:
    """Return the points on the lines through a board that may be highest, shape (S, P + T)."""
    box = stage.box
    own = np.array(box.own_free, dtype=int)
    count = len(own)
    found = []
    if count:
        ends = np.tile(point, (2 * count, 1))
        ends[np.arange(count), own] = box.low[own]
        ends[count + np.arange(count), own] = box.high[own]
        places = _turning_points(stage, aim, ends, count)  # (count, K)
        lines = np.tile(point, (places.size, 1))
        rows, columns = np.arange(places.size), np.repeat(own, places.shape[1])
        span = (box.high - box.low)[columns]
        lines[rows, columns] = np.clip(
            box.low[columns] + places.ravel() * span, box.low[columns], box.high[columns]
        )
        found.append(lines)
    for coordinate in box.free[box.free >= len(box.own_low)]:
        lines = np.tile(point, (SAMPLES, 1))
        lines[:, coordinate] = np.linspace(box.low[coordinate], box.high[coordinate], SAMPLES)
        found.append(lines)
    return np.concatenate(found)


def _turning_points(stage: Stage, aim: Aim, ends: Real, count: int) -> Real:
    """Return candidates on each line, as fractions of it, shape (count, K)."""
    values = stage.box.symbol_values(ends)
    top, bottom = stage.numerator.at_points(values), stage.denominator.at_points(values)
    start, change, weight = [], [], []
    for omega, sign in aim.terms:
        for polynomial, part in ((top, sign), (bottom, -sign)):
            z = at_frequency(polynomial, omega, stage.degree)
            start.append(z[:count])
            change.append(z[count:] - z[:count])
            weight.append(part)
    z0, dz = np.array(start), np.array(change)  # (M, count)
    w = np.array(weight, dtype=float)[:, None, None]
    with np.errstate(divide="ignore", invalid="ignore"):
        places = _inside(-np.real(z0 * np.conj(dz)) / np.abs(dz) ** 2, 0.0).T
        for _ in range(NEWTON_STEPS):
            rate = dz[:, :, None] / (z0[:, :, None] + dz[:, :, None] * places)
            slope = (w * np.real(rate)).sum(axis=0)
            bend = -(w * np.real(rate**2)).sum(axis=0)
            places = _inside(places - np.where(bend < 0.0, slope / bend, 0.0), places)
    return np.concatenate([places, np.zeros((count, 1)), np.ones((count, 1))], axis=1)


def _inside(places: Real, instead: Real | float) -> Real:
    """Return places on a line, those that are no numbers replaced."""
    return np.clip(np.where(np.isfinite(places), places, instead), 0.0, 1.0)
