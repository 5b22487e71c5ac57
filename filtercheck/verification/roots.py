"""Poles and zeros of a filter: where they are, how far they stray, what moves them."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from math import pi

import numpy as np

from filtercheck.model.inspection import Range, Root
from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.chain import Chain
from filtercheck.tolerance.poles import extreme_board, roots
from filtercheck.tolerance.stage import Stage
from filtercheck.wiring.variation import Variation

STEP = 1e-4  # of a value, to either side
REAL = 1e-9  # of a root's size: an imaginary part as small is none
SMALLEST = 1e-12  # in the unit of the chain: a root as small is at 0


def found(variation: Variation, chain: Chain, side: str) -> Iterator[Root]:
    """Yield the roots of the "numerators" or the "denominators", pairs once, in rising order."""
    every = [
        _Tracked(variation, chain, index, side, complex(root))
        for index, stage in enumerate(chain.stages)
        for root in _upper(roots(stage.named(side).at(stage.box.nominal[None, :]))[0])
    ]
    for one in sorted(every, key=lambda tracked: abs(tracked.nominal)):
        yield one.root()


def _upper(every: Complex) -> Complex:
    """Return the roots but for those at 0 or infinity, of a pair the upper one."""
    size = np.abs(every)
    kept = np.isfinite(size) & (size > SMALLEST) & (every.imag > -REAL * size)
    return every[kept]


@dataclass(frozen=True, eq=False)
class _Tracked:
    """One root, told from the others by being the nearest to where it is on the nominal board."""

    variation: Variation
    chain: Chain
    index: int  # of its stage
    side: str
    nominal: complex

    def root(self) -> Root:
        is_real = abs(self.nominal.imag) <= REAL * abs(self.nominal)
        size, q = self._numbers(self.stage.box.nominal[None, :])
        return Root(
            self._hertz(float(size[0])),
            None if is_real else float(q[0]),
            self._range(0, self._hertz(1.0)),
            None if is_real else self._range(1, 1.0),
            tuple(self._sensitivities()),
        )

    @property
    def stage(self) -> Stage:
        return self.chain.stages[self.index]

    def _hertz(self, omega: float) -> float:
        return omega * self.chain.unit / (2.0 * pi)

    def _numbers(self, points: Real) -> tuple[Real, Real]:
        return self._of(roots(self.stage.named(self.side).at(points)))

    def _of(self, every: Complex) -> tuple[Real, Real]:
        """Return size and Q of the root among those of many boards."""
        with np.errstate(divide="ignore", invalid="ignore"):
            distance = np.abs(every - self.nominal) / (np.abs(every) + abs(self.nominal))
            own = every[np.arange(len(every)), np.argmin(distance, axis=1)]
            return np.abs(own), np.abs(own) / (-2.0 * own.real)

    def _range(self, which: int, unit: float) -> Range:
        def end(sign: float) -> float:
            board = extreme_board(
                self.stage,
                lambda every: sign * self._of(every)[which],
                self.stage.box.nominal[None, :],
                self.side,
            )
            return float(self._numbers(board[None, :])[which][0]) * unit

        return end(-1.0), end(1.0)

    def _sensitivities(self) -> Iterator[tuple[str, float, float]]:
        point = self.stage.box.nominal
        for name, symbol, power in self.variation.varying(self.index):
            pair = np.tile(point, (2, 1))
            pair[0, symbol] *= 1.0 - STEP
            pair[1, symbol] *= 1.0 + STEP
            with np.errstate(divide="ignore", invalid="ignore"):
                size, q = (np.log(np.abs(values)) for values in self._numbers(pair))
            of_size, of_q = ((v[1] - v[0]) / (2.0 * STEP) * power for v in (size, q))
            yield name, float(of_size), float(of_q) if np.isfinite(of_q) else 0.0
