"""One attempt to prove a limit for a part of the box, on a segment of the band.

The worst boards at both ends of the segment say in which direction each stage's theorem
(`certificate`) is tried, and how the level that is allowed is shared out among the stages: each
may have its worst there, and an equal part of what is left.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, inf, log, log1p

import numpy as np

from filtercheck.network.ratio import Real
from filtercheck.network.response import DECIBEL_PER_NEPER
from filtercheck.tolerance.certificate import Sides, ratio, relative_ratio
from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.climb import Aim
from filtercheck.tolerance.limit import Limit
from filtercheck.tolerance.segment import Segment, largest_product
from filtercheck.tolerance.stage import Stage

# Free values of a network whose corners are listed for a ratio of two frequencies.
MOST_LISTED = 16
# A worst board is beyond the limit when it is so by more than rounding.
CLEAR_DB = 1e-9


@dataclass(frozen=True)
class Attempt:
    """What is left to prove of one piece."""

    gap_db: float
    challenge: Board | None = None
    work: int = 0
    slack_db: float = 0.0  # what the worst boards at the ends leave: no gap is less than minus that


@dataclass(frozen=True, eq=False)
class Trial:
    """One piece and one reference."""

    chain: Chain
    segment: Segment
    reference: Segment | None
    limit: Limit

    def attempt(self) -> Attempt:
        """Try the theorem in the direction of the worst boards at the ends."""
        sign = self.limit.sign
        work = sum(stage.cost for stage in self.chain.stages) * len(self.others)
        worst: dict[tuple[int, int], Board] = {}
        least = inf
        shares: dict[tuple[int, int], list[float]] = {}
        for k, omega in enumerate(self.ends):
            for m, other in enumerate(self.others):
                aim = Aim(
                    ((omega, sign), (other, -sign)) if other is not None else ((omega, sign),)
                )
                board = self.chain.worst(aim)
                heights = self.chain.heights(aim, board)
                slack = self._allowed(omega) - sum(heights)
                if slack * DECIBEL_PER_NEPER < -CLEAR_DB:
                    return Attempt(-slack * DECIBEL_PER_NEPER, board, work)
                least = min(least, slack * DECIBEL_PER_NEPER)
                worst[k, m] = board
                shares[k, m] = [height + slack / len(heights) for height in heights]
        bulge = self._bulge(shares)
        total = bulge
        enough = exp(-min(bulge, 600.0) / len(self.chain.stages)) * (1.0 - 1e-12)
        for index, stage in enumerate(self.chain.stages):
            g = {
                (k, m): self._direction(stage, worst[k, m][index], shares[k, m][index], k, m)
                for k, m in worst
            }
            c = self._ratio(stage, g, enough)
            total += log(c) if 0.0 < c < inf else (inf if c else -inf)
        return Attempt(total * DECIBEL_PER_NEPER, None, work, least)

    @property
    def ends(self) -> tuple[float, ...]:
        return _ends(self.segment)

    @property
    def others(self) -> tuple[float | None, ...]:
        return _ends(self.reference) if self.reference else (None,)

    @property
    def sides(self) -> Sides:
        return Sides("numerators" if self.limit.sign > 0 else "denominators")

    def _allowed(self, omega: float) -> float:
        """Return what sign * ln|gain| may be."""
        return self.limit.excess_allowed_db(self.chain.freq_hz(omega)) / DECIBEL_PER_NEPER

    def _ratio(self, stage: Stage, g: dict[tuple[int, int], complex], enough: float) -> float:
        k, m = len(self.ends) - 1, len(self.others) - 1
        if self.reference is None:
            return ratio(stage, self.sides, self.segment, (g[0, 0], g[k, 0]), enough)
        if len(stage.box.own_free) > MOST_LISTED:
            return inf
        corners = ((g[0, 0], g[0, m]), (g[k, 0], g[k, m]))
        return relative_ratio(stage, self.sides, (self.segment, self.reference), corners)

    def _direction(self, stage: Stage, board: Real, share: float, k: int, m: int) -> complex:
        """Return g at one end: its size is what the stage is allowed, its angle that of 1/B."""
        below = 1 if self.sides.below == "denominators" else 0
        b = complex(stage.responses(board[None, :], self.ends[k])[below][0])
        other = self.others[m]
        if other is not None:
            b *= complex(stage.responses(board[None, :], other)[1 - below][0])
        return exp(min(share, 600.0)) * (b.conjugate() / abs(b) if b else 1.0)

    def _bulge(self, shares: dict[tuple[int, int], list[float]]) -> float:
        """Return by how much the stages' bounds together may exceed the limit between the ends,
        as a logarithm.

        The bound of each stage is linear in t between its shares, and in t' of the reference;
        the product of all, over the limit, is 1 at the ends.
        """
        goal = [self._allowed(omega) for omega in self.ends]
        if len(self.ends) == len(self.others) == 1:
            return 0.0
        rows, columns = range(len(self.ends)), range(len(self.others))
        levels = [
            np.array([[shares[k, m][i] for m in columns] for k in rows])
            for i in range(len(self.chain.stages))
        ]
        # Each taken from its largest, so that what is raised to powers is at most 1.
        tops = [float(level.max()) for level in levels]
        if -inf in tops:
            return 0.0  # a stage without any response: its bound is 0 on all of the segment
        bounds = [np.exp(level - top) for level, top in zip(levels, tops, strict=True)]
        least = min(goal)
        if len(self.ends) == 1:
            bounds, above = [one.T for one in bounds], 0.0
        else:
            bounds.append(np.exp(least - np.array(goal))[:, None])
            above = _above_chord(self.segment, goal[1] - goal[0])
        return log(largest_product(bounds)) + sum(tops) - least + above


def _above_chord(segment: Segment, change: float) -> float:
    """Return by how much a power of w may rise above its chord in t, as a logarithm, when its own
    changes so much over the segment.

    With w = X/Y and X, Y linear, the second derivative of w^-a, over w^-a, is at least
    -a max(dX/X, dY/Y)^2, and a function lies above its chord by at most an eighth of that.
    """
    if not change:
        return 0.0
    (x1, y1), (x2, y2) = segment.ends
    step = max(abs(x2 - x1) / min(x1, x2), abs(y2 - y1) / min(y1, y2))
    power = abs(change) / log(segment.high / segment.low)
    return log1p(power * step**2 / 8.0 * exp(abs(change))) if abs(change) < 600.0 else inf


def _ends(segment: Segment) -> tuple[float, ...]:
    return (segment.low,) if segment.is_point else (segment.low, segment.high)
