"""The poles of many boards at once, and the boards with the most extreme ones."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.stage import Stage

SWEEPS = 20


def poles(stage: Stage, points: Real) -> Complex:
    """Return the poles of boards, shape (S, K); poles at infinity are left at -infinity.

    Eigenvalues of companion matrices; the polynomials are scaled so that their outer
    coefficients are alike, which keeps poles some decades apart.
    """
    return roots(stage.terms[1].at(points))


def roots(coefficients: Real) -> Complex:
    """Return the roots of polynomials of one degree, shape (S, K), from (S, K + 1)."""
    degree = coefficients.shape[1] - 1
    if degree < 1:
        return np.empty((len(coefficients), 0), complex)
    scale = np.abs(coefficients[:, :1] / coefficients[:, -1:]) ** (1.0 / degree)
    scale = np.where((scale > 0.0) & np.isfinite(scale), scale, 1.0)
    scaled = coefficients * scale ** np.arange(degree + 1)
    companion = np.zeros((len(coefficients), degree, degree))
    companion[:, np.arange(1, degree), np.arange(degree - 1)] = 1.0
    companion[:, :, -1] = -scaled[:, :-1] / scaled[:, -1:]
    return np.asarray(np.linalg.eigvals(companion) * scale)


def extreme_board(
    stage: Stage,
    height: Callable[[Complex], Real],
    starts: Real,
    side: str = "denominators",
) -> Real:
    """Return the board whose poles make a height largest, by coordinate ascent from `starts`;
    or its zeros, those of the "numerators".

    Parameters
    ----------
    height : callable
        Poles of shape (S, K) -> heights of shape (S,).
    starts : float array, shape (S, P + T)
    """
    box, of = stage.box, stage.named(side)
    reached = height(roots(of.at(starts)))
    point, best = starts[int(np.argmax(reached))], float(reached.max())
    for _ in range(SWEEPS):
        lines = np.tile(point, (3 * len(box.free), 1))
        for k, coordinate in enumerate(box.free):
            lines[3 * k : 3 * k + 3, coordinate] = np.linspace(
                box.low[coordinate], box.high[coordinate], 3
            )
        reached = height(roots(of.at(lines))) if len(lines) else np.array([best])
        if not reached.max() > best + 1e-12 * abs(best):
            break
        point, best = lines[int(np.argmax(reached))], float(reached.max())
    return np.asarray(point)


def lean(found: Complex) -> Real:
    """Return the largest Re p/|p| of each board's poles, shape (S,) from (S, K): it is positive
    where a board oscillates."""
    with np.errstate(divide="ignore", invalid="ignore"):
        leaning = np.nan_to_num(found.real / np.abs(found), nan=-1.0)
    return np.asarray(leaning.max(axis=1, initial=-1.0))


def qualities(found: Complex) -> Real:
    """Return the Q of poles, |p|/(-2 Re p): 1/2 for real ones."""
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(np.abs(found) / (-2.0 * found.real))


def sharpest_of(found: Complex) -> tuple[Real, Real]:
    """Return size and Q of the pole with the highest Q of each board, from (S, K)."""
    q = qualities(found)
    rows, best = np.arange(len(found)), np.argmax(q, axis=1)
    return np.abs(found[rows, best]), q[rows, best]


def sharpest(stage: Stage, points: Real) -> tuple[Real, Real]:
    """Return size and Q of the sharpest pole of boards, each of shape (S,)."""
    return sharpest_of(poles(stage, points))
