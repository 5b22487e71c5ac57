"""That no board of a box has a pole on a path in the complex plane: zero exclusion.

A path is s = X(t)/Y(t) with complex X and Y linear in t: the imaginary axis, a ray from the
origin, an arc about it. With the denominator's forms D_vj on the path (`segment`, `corners`)
and g(t) linear, Re (g D)_vj > 0 for all nodes v and all j shows that D has no zero on the path,
for any board of the box; the proof is that of `certificate`, without A.

Poles move continuously with the values. So where a path closes a region and one board has so
many poles inside, every board of the box has as many: stability from one stable board and the
imaginary axis (a denominator whose degree keeps), bounds of Q from rays, of f0 from arcs.

Source: Zadeh and Desoer, Linear System Theory (1963; from memory) for zero exclusion.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise
from math import cos, inf, pi, sin, sqrt, tan

import numpy as np

from filtercheck.network.ratio import Complex
from filtercheck.tolerance.box import widest
from filtercheck.tolerance.faces import keep, weighted
from filtercheck.tolerance.poles import poles
from filtercheck.tolerance.segment import Segment, powers, times_linear, times_size
from filtercheck.tolerance.stage import Stage

Ends = tuple[complex, complex]


@dataclass(frozen=True)
class Path:
    """s = X/Y, where X and Y are linear between their two values."""

    x: Ends
    y: Ends

    def halves(self) -> tuple[Path, Path]:
        x, y = (self.x[0] + self.x[1]) / 2.0, (self.y[0] + self.y[1]) / 2.0
        return Path((self.x[0], x), (self.y[0], y)), Path((x, self.x[1]), (y, self.y[1]))

    def at(self, end: int) -> Path:
        """Return one end as a path of its own, that does not move."""
        return Path((self.x[end], self.x[end]), (self.y[end], self.y[end]))

    def row(self, end: int, degree: int) -> Complex:
        """Return Y^d, X Y^(d-1), ..., X^d at one end."""
        return np.array([self.x[end] ** k * self.y[end] ** (degree - k) for k in range(degree + 1)])


def ray(segment: Segment, angle: float) -> Path:
    """Return the points of a segment of sizes |s|, at one angle; pi/2 is the imaginary axis."""
    turn = 1j if angle == pi / 2.0 else complex(cos(angle), sin(angle))
    (x1, y1), (x2, y2) = segment.ends
    return Path((turn * x1, turn * x2), (y1, y2))


def arc(size: float, start: float, end: float) -> Path:
    """Return the points of one size |s| between two angles, less than a full turn apart.

    s = size e^(jm) (1 + j tau)/(1 - j tau) has the angle m + 2 arctan tau.
    """
    middle, reach = (start + end) / 2.0, tan((end - start) / 4.0)
    turn = size * complex(cos(middle), sin(middle))
    return Path(
        (turn * (1 - 1j * reach), turn * (1 + 1j * reach)), (1 + 1j * reach, 1 - 1j * reach)
    )


@dataclass(frozen=True)
class Doubt:
    """Where exclusion failed: a part of the box, and a point that a pole may reach."""

    stage: Stage
    at: complex


def doubt_on_ray(
    stage: Stage, angle: float, budget: int, probe: Callable[[Stage], bool] = lambda _: False
) -> Doubt | None:
    """Return the same as `doubt` for all points at one angle; pi/2 is the imaginary axis."""
    sizes = np.sort(np.abs(poles(stage, stage.box.nominal[None, :])[0]))
    # Cut between poles that lie far apart, the axis is proved with fewer pieces.
    cuts = [sqrt(a * b) for a, b in pairwise(sizes) if b > 9.0 * a > 0.0]
    for low, high in pairwise([0.0, *cuts, inf]):
        found = doubt(stage, ray(Segment(low, high), angle), budget, probe)
        if found is not None:
            return found
    return None


def doubt(
    stage: Stage, path: Path, budget: int, probe: Callable[[Stage], bool] = lambda _: False
) -> Doubt | None:
    """Return None once no board of the box has a pole on the path, else where that failed.

    Parameters
    ----------
    budget : int
        How many numbers may be computed before the attempt ends.
    probe : callable
        Asked about each part of the box before it is divided; true ends the attempt there.
    """
    if stage.is_large and not _doubt(stage.lightened, path, budget, probe):
        return None
    return _doubt(stage, path, budget, probe)


def _doubt(stage: Stage, path: Path, budget: int, probe: Callable[[Stage], bool]) -> Doubt | None:
    left, work = [(stage, path)], 0
    while left:
        part, stretch = left.pop()
        work += part.cost
        if _excluded(part, stretch):
            continue
        middle = stretch.halves()[0].at(1)
        if work > budget:
            return Doubt(part, _place(middle))
        if _excluded(part, middle):
            left.extend((part, half) for half in reversed(stretch.halves()))
        elif probe(part):
            return Doubt(part, _place(middle))
        else:
            coordinate = _widest(part, middle)
            if coordinate is None:
                return Doubt(part, _place(middle))
            left.extend((part.within(box), stretch) for box in part.box.halves(coordinate))
    return None


def _place(point: Path) -> complex:
    return point.x[0] / point.y[0] if point.y[0] else complex(inf)


def _excluded(stage: Stage, path: Path) -> bool:
    """Whether one direction shows it; where corners are too many to list, some boards say which."""
    of, box = stage.terms[1], stage.box
    seen = of.at(box.ends(box.centre)) if stage.is_large else stage.denominators.values
    g = [_direction(seen @ path.row(end, of.degree)) for end in (0, 1)]
    forms = powers(path.x, path.y, of.degree)
    turned = times_linear(forms, g[0], g[1])
    slack = times_size(stage.doubt("denominators") @ np.abs(forms), g[0], g[1])
    if stage.is_large:
        right = weighted(of, box, stage.degrees, turned)
        return keep(None, right, box, np.tile(slack, stage.common_nodes))
    return bool((stage.denominators.values @ np.real(turned) > slack).all())


def _direction(values: Complex) -> complex:
    """Return g that turns the nodes towards the positive axis: against the middle of the
    sector they span, as seen from their mean."""
    mean = complex(values.mean())
    if mean == 0.0:
        return 1.0
    angles = np.angle(values / mean)
    middle = (float(angles.min()) + float(angles.max())) / 2.0
    turned = mean / abs(mean) * complex(cos(middle), sin(middle))
    return turned.conjugate() / abs(mean)


def _widest(stage: Stage, point: Path) -> int | None:
    """Return the coordinate along which the denominator changes most at a point; None where all
    are too narrow to halve."""
    box = stage.box
    row = point.row(0, stage.terms[1].degree)
    low, high = np.split(stage.terms[1].at(box.ends(box.centre)) @ row, 2)
    return widest(box, np.abs(high - low))
