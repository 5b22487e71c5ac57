"""Stages in a row, up to an output, and boards of them."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from functools import cached_property
from math import pi

from filtercheck.network.curve import Curve
from filtercheck.network.ratio import Ratio, Real
from filtercheck.network.response import Response
from filtercheck.tolerance.box import widest
from filtercheck.tolerance.climb import Aim, best_corner, climb, heights
from filtercheck.tolerance.stage import Stage

Board = tuple[Real, ...]  # a point of the box of every stage


@dataclass(frozen=True, eq=False)
class Chain:
    """Stages whose responses multiply; `unit` is that of their angular frequency. [rad/s]"""

    stages: tuple[Stage, ...]
    unit: float

    def omega(self, freq_hz: float) -> float:
        """Return a frequency in the chain's unit; 0 and infinity are allowed."""
        return 2.0 * pi * freq_hz / self.unit

    def freq_hz(self, omega: float) -> float:
        return omega * self.unit / (2.0 * pi)

    @cached_property
    def relative(self) -> Chain:
        """The same for ratios of one board's responses at two frequencies: what does not depend
        on frequency cancels, and values that are in nothing else do not matter."""
        return Chain(tuple(_reduced(stage) for stage in self.stages), self.unit)

    @property
    def is_lighter(self) -> bool:
        """Whether `lightened` takes any value as exact that is not."""
        pairs = zip(self.stages, self.lightened.stages, strict=True)
        return any(len(a.box.free) > len(b.box.free) for a, b in pairs)

    def peak_hz(self, band_hz: tuple[float, float]) -> float:
        """Return where the board in the middle has its largest gain on a band."""
        if band_hz not in self._peaks:
            middle = tuple(stage.box.centre for stage in self.stages)
            self._peaks[band_hz] = Curve(self.response(middle)).highest(band_hz).freq_hz
        return self._peaks[band_hz]

    @cached_property
    def _peaks(self) -> dict[tuple[float, float], float]:
        return {}

    @cached_property
    def lightened(self) -> Chain:
        """The same with what hardly matters taken as exact."""
        return Chain(tuple(stage.lightened for stage in self.stages), self.unit)

    @property
    def nominal(self) -> Board:
        return tuple(stage.box.nominal for stage in self.stages)

    def worst(self, aim: Aim) -> Board:
        """Return the board where an aim is largest, as far as the ascent from the best corner
        finds it."""
        found = []
        for stage in self.stages:
            if aim not in stage.worst:
                stage.worst[aim] = climb(stage, aim, best_corner(stage, aim))
            found.append(stage.worst[aim])
        return tuple(found)

    def corner(self, aim: Aim) -> Board:
        """Return the board where an aim is largest among the corners of the boxes."""
        return tuple(best_corner(stage, aim) for stage in self.stages)

    def climbed(self, aim: Aim, start: Board) -> Board:
        """Return the board that the ascent from another one finds."""
        return tuple(
            climb(stage, aim, point) for stage, point in zip(self.stages, start, strict=True)
        )

    def heights(self, aim: Aim, board: Board) -> list[float]:
        """Return the value of an aim on a board, a summand for each stage."""
        return [
            float(heights(stage, aim, point[None, :])[0])
            for stage, point in zip(self.stages, board, strict=True)
        ]

    def change(self, low: float, high: float) -> float:
        """Return how much N and D of the board in the middle change between two frequencies, as
        a part of their size."""
        total = 0.0
        for stage in self.stages:
            middle = stage.box.centre[None, :]
            for one, other in zip(
                stage.responses(middle, low), stage.responses(middle, high), strict=True
            ):
                size = float(abs(one[0]) + abs(other[0]))
                total += float(abs(other[0] - one[0])) / size if size else 0.0
        return total

    def halves(self, omega: float) -> Iterator[Chain]:
        """Yield the chain with either half of a box, along the coordinate that matters most at a
        frequency: that along which N and D change most; nothing where none can be
        halved."""
        best: tuple[float, int, int] | None = None
        for k, stage in enumerate(self.stages):
            changes = stage.changes(omega)
            coordinate = widest(stage.box, changes)
            if coordinate is not None:
                change = float(changes[list(stage.box.free).index(coordinate)])
                if best is None or change > best[0]:
                    best = (change, k, coordinate)
        if best is None:
            return
        _, k, coordinate = best
        for box in self.stages[k].box.halves(coordinate):
            part = self.stages[k].within(box)
            yield replace(self, stages=(*self.stages[:k], part, *self.stages[k + 1 :]))

    def response(self, board: Board) -> Response:
        """Return the response of a board."""
        pairs = zip(self.stages, board, strict=True)
        return Response(tuple(self._ratio(stage, point) for stage, point in pairs))

    def _ratio(self, stage: Stage, point: Real) -> Ratio:
        values = stage.box.symbol_values(point[None, :])[0]
        return Ratio.of(
            stage.numerator.coefficients(values), stage.denominator.coefficients(values), self.unit
        )


def _reduced(stage: Stage) -> Stage:
    numerator, denominator = stage.numerator.without_common(), stage.denominator.without_common()
    gone = ~(numerator.members | denominator.members)
    return Stage(numerator, denominator, stage.box.fixed(gone, stage.box.nominal))
