"""Verify a share of random boards: how many of them meet a requirement, and how sure that is.

Every board is judged over the whole band: on a grid first, and where that leaves it in doubt,
by the exact extremes of its response. With k of n independent boards good, the share of all
boards lies with the confidence 1 - a between the a/2 quantile of Beta(k, n - k + 1) and the
1 - a/2 quantile of Beta(k + 1, n - k).

Source: Clopper and Pearson, "The use of confidence or fiducial limits illustrated in the case
of the binomial", Biometrika, vol. 26, no. 4, pp. 404-413, 1934 (from memory).
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cached_property
from hashlib import sha256

import numpy as np
from numpy.typing import NDArray

from filtercheck.model.requirement import Sampling
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.network.ratio import Real
from filtercheck.quantities import rounded
from filtercheck.requirements.kind import Wanted
from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.crowd import Screen, grid, power
from filtercheck.tolerance.limit import Claim, Poles
from filtercheck.tolerance.poles import lean, poles, sharpest
from filtercheck.wiring.drawing import Drawing
from filtercheck.wiring.variation import Variation

CHUNK = 1000  # boards that are worked out together
FIRST = 64  # boards that say where the grid lies

Flags = NDArray[np.bool_]


@dataclass(frozen=True, eq=False)
class _Crowd:
    """Some boards; what several limits ask of them is worked out once."""

    chain: Chain
    boards: Board

    def powers(self, omega: Real) -> Real:
        """Return |H|^2 on a grid, shape (S, F)."""
        if id(omega) not in self._powers:
            self._powers[id(omega)] = power(self.chain, self.boards, omega)
        return self._powers[id(omega)]

    @cached_property
    def _powers(self) -> dict[int, Real]:
        return {}

    @cached_property
    def sharpest(self) -> tuple[Real, Real]:
        """Size and Q of each board's sharpest pole."""
        size = q = np.zeros(len(self.boards[0]))
        for stage, points in zip(self.chain.stages, self.boards, strict=True):
            own_size, own_q = sharpest(stage, points)
            size, q = np.where(own_q > q, own_size, size), np.maximum(own_q, q)
        return size, q

    def poles_keep(self, claim: Poles) -> tuple[Flags, Flags]:
        """Return which boards keep a limit of their sharpest pole, and which are in doubt."""
        size, q = self.sharpest
        value = q if claim.quantity == "Q" else self.chain.freq_hz(1.0) * size
        excess = claim.sign * (value / claim.value - 1.0)
        return (excess <= 0.0) & (q > 0.5), np.abs(excess) < 1e-9


Test = Callable[[_Crowd], tuple[Flags, Flags]]  # which boards pass, and which are in doubt


@dataclass(frozen=True, eq=False)
class Sampled:
    """One requirement on random boards.

    `identity` seeds them: the same requirement draws the same boards, in any order of files and
    with any number of processes. `stable` says whether every board is known to be stable.
    """

    wanted: Wanted
    variation: Variation
    output: str
    nominal: Curve
    sampling: Sampling
    identity: str
    stable: bool

    def finding(self) -> Finding:
        """Return the share of good boards with its interval."""
        boards = self._drawn
        good = 0
        for start in range(0, self.sampling.boards, CHUNK):
            good += int(
                self._meets(tuple(points[start : start + CHUNK] for points in boards)).sum()
            )
        share = good / self.sampling.boards
        low, high = interval(good, self.sampling.boards, self.sampling.confidence)
        confidence = rounded(self.sampling.confidence, "percentage", digits=5)
        return Finding(
            subject="yield",
            sense="at least",
            limit=self.sampling.share,
            value=share,
            quantity="percentage",
            certain=low - self.sampling.share,
            reached=high - self.sampling.share,
            margin_quantity="percentage",
            freq_hz=None,
            note=f"{good} of {self.sampling.boards} boards are good; confidence {confidence}",
            interval=(low, high),
        )

    @cached_property
    def _drawn(self) -> Board:
        seed = list(sha256(self.identity.encode()).digest())
        return Drawing(self.variation, np.random.default_rng(seed)).boards(self.sampling.boards)

    @cached_property
    def _chain(self) -> Chain:
        return self.variation.chain(self.output)

    @cached_property
    def _first(self) -> Board:
        return tuple(points[:FIRST] for points in self._drawn)

    def _meets(self, boards: Board) -> Flags:
        """Return which boards meet the requirement."""
        good = self._are_stable(boards)
        doubtful = np.zeros(len(good), dtype=bool)
        crowd = _Crowd(self._chain, boards[: self._length])
        for test in self._tests:
            passes, unsure = test(crowd)
            doubtful |= unsure
            good &= passes | unsure
        for row in np.flatnonzero(good & doubtful):
            good[row] = self._measures(tuple(points[row] for points in boards[: self._length]))
        return good

    @property
    def _length(self) -> int:
        return len(self._chain.stages)

    def _measures(self, board: Board) -> bool:
        """Judge one board by the exact extremes of its response."""
        curve = Curve(self._chain.response(board))
        return all(finding.reached >= 0.0 for finding in self.wanted.findings(curve))

    def _are_stable(self, boards: Board) -> Flags:
        good = np.ones(len(boards[0]), dtype=bool)
        if not self.stable:
            for stage, points in zip(self.variation.whole.stages, boards, strict=True):
                good &= lean(poles(stage, points)) < 0.0
        return good

    @cached_property
    def _tests(self) -> Sequence[Test]:
        claims = (
            claim
            for index in range(len(list(self.wanted.findings(self.nominal))))
            for claim in self.wanted.claims(index, 0.0)
        )
        return [self._test(claim) for claim in claims]

    def _test(self, claim: Claim) -> Test:
        if isinstance(claim, Poles):
            return lambda crowd: crowd.poles_keep(claim)
        over = claim.reference
        reference = self._grid(over.band_hz) if over else np.empty(0)
        screen = Screen(self._chain, claim, self._grid(claim.band_hz), reference)

        def test(crowd: _Crowd) -> tuple[Flags, Flags]:
            standing = screen.standing(crowd.powers)
            unsure = ~(np.abs(standing.excess) > standing.doubt)
            return standing.excess <= 0.0, unsure

        return test

    def _grid(self, band_hz: tuple[float, float]) -> Real:
        """Return the grid of a band; equal bands have the same one."""
        if band_hz not in self._grids:
            band = (self._chain.omega(band_hz[0]), self._chain.omega(band_hz[1]))
            self._grids[band_hz] = grid(self._chain, self._first[: self._length], band)
        return self._grids[band_hz]

    @cached_property
    def _grids(self) -> dict[tuple[float, float], Real]:
        return {}


def interval(good: int, boards: int, confidence: float) -> tuple[float, float]:
    """Return the Clopper-Pearson interval of a share."""
    from scipy.special import betaincinv

    tail = (1.0 - confidence) / 2.0
    low = betaincinv(good, boards - good + 1, tail) if good else 0.0
    high = betaincinv(good + 1, boards - good, 1.0 - tail) if good < boards else 1.0
    return float(low), float(high)
