"""The bound of the theorem against the polynomials themselves, at boards and frequencies."""

from __future__ import annotations

from math import isfinite

import numpy as np
import pytest
from boxes import (
    Real,
    boards,
    by_power,
    coefficients,
    form_at,
    place,
    segments,
    stages,
    values_of,
)
from hypothesis import event, given
from hypothesis import strategies as st

from filtercheck.tolerance.certificate import Sides, ratio, relative_ratio
from filtercheck.tolerance.segment import Segment
from filtercheck.tolerance.stage import Stage

# What rounding may add to a quotient of sums of a dozen terms.
ROUNDING = 1e-12
SIDES = st.sampled_from([Sides("numerators"), Sides("denominators")])
Direction = tuple[complex, complex]


def both(stage: Stage, point: Real, sides: Sides, at: tuple[complex, complex]) -> Direction:
    """Return A and B of a board, as forms of the stage's degree."""
    values = values_of(stage.box, point)
    top, bottom = (by_power(p, values) for p in (stage.numerator, stage.denominator))
    pair = (top, bottom) if sides.above == "numerators" else (bottom, top)
    above, below = (form_at(powers, stage.degree, *at) for powers in pair)
    return above, below


def toward(stage: Stage, sides: Sides, segment: Segment, size: tuple[float, float]) -> Direction:
    """Return a direction that turns B of the nominal board to the positive axis at both ends."""
    found = [both(stage, stage.box.nominal, sides, place(segment, t))[1] for t in (0.0, 1.0)]
    turns = [b.conjugate() / abs(b) if b else 1.0 for b in found]
    return size[0] * turns[0], size[1] * turns[1]


def check(above: complex, below: complex, c: float, g: complex) -> None:
    """Assert |A| <= c |g| |B| but for rounding."""
    assert abs(above) <= c * abs(g) * abs(below) * (1 + ROUNDING)


@given(
    stages(commons=2), segments(), SIDES, st.tuples(*[st.floats(0.2, 5)] * 2), st.integers(0, 99)
)
def test_no_board_exceeds_the_bound(
    stage: Stage, segment: Segment, sides: Sides, size: tuple[float, float], seed: int
) -> None:
    g = toward(stage, sides, segment, size)
    c = ratio(stage, sides, segment, g, 1.0)
    random = np.random.default_rng(seed)

    event(f"bounded: {isfinite(c)}")
    if isfinite(c):
        for point in boards(stage.box, random, 20):
            t = 0.0 if segment.is_point else float(random.uniform())
            above, below = both(stage, point, sides, place(segment, t))
            check(above, below, c, g[0] * (1 - t) + g[1] * t)


@given(
    stages(commons=1),
    st.tuples(segments(), segments()),
    SIDES,
    st.lists(st.floats(0.2, 5), min_size=4, max_size=4),
    st.integers(0, 99),
)
def test_no_board_exceeds_the_bound_of_a_ratio_of_two_frequencies(
    stage: Stage, parts: tuple[Segment, Segment], sides: Sides, size: list[float], seed: int
) -> None:
    other = Sides(sides.below)
    one, two = toward(stage, sides, parts[0], (1, 1)), toward(stage, other, parts[1], (1, 1))
    g = (
        (size[0] * one[0] * two[0], size[1] * one[0] * two[1]),
        (size[2] * one[1] * two[0], size[3] * one[1] * two[1]),
    )
    c = relative_ratio(stage, sides, parts, g)
    random = np.random.default_rng(seed)

    event(f"bounded: {isfinite(c)}")
    if isfinite(c):
        for point in boards(stage.box, random, 20):
            t, u = (0.0 if part.is_point else float(random.uniform()) for part in parts)
            first = both(stage, point, sides, place(parts[0], t))
            second = both(stage, point, other, place(parts[1], u))
            start = g[0][0] * (1 - u) + g[0][1] * u
            here = start * (1 - t) + (g[1][0] * (1 - u) + g[1][1] * u) * t
            check(first[0] * second[0], first[1] * second[1], c, here)


def largest(stage: Stage, omega: float, other: float | None = None) -> float:
    """Return the largest |H|, or |H|/|H at another frequency|, of a dense grid of boards."""
    free = stage.box.free
    lines = [np.linspace(stage.box.low[i], stage.box.high[i], 41) for i in free]
    points = np.tile(stage.box.nominal, (41 ** len(free), 1))
    points[:, free] = np.array([axis.ravel() for axis in np.meshgrid(*lines)]).T
    found = []
    for point in points:
        top, bottom = (
            by_power(p, values_of(stage.box, point)) for p in (stage.numerator, stage.denominator)
        )
        gains = [
            abs(form_at(top, 2, 1j * w, 1.0) / form_at(bottom, 2, 1j * w, 1.0))
            for w in (omega, omega if other is None else other)
        ]
        found.append(gains[0] if other is None else gains[0] / gains[1])
    return max(found)


@pytest.mark.parametrize("omega", [0.3, 0.9, 1.0, 1.1, 3.0])
def test_the_bound_at_one_frequency_is_reached(omega: float) -> None:
    # 1/(1 + a s + b s^2): at one frequency D is a rectangle in the plane, whose point nearest to
    # 0 is the worst board; with g at right angles to the side there the bound is exact.
    stage = coefficients((1.0, 0.19, 0.99), (1.0, 0.21, 1.01), top=[0])
    here = Segment(omega, omega)
    worst = largest(stage, omega)
    real = np.clip(0.0, 1 - 1.01 * omega**2, 1 - 0.99 * omega**2)
    nearest = complex(real, 0.19 * omega)
    g = nearest.conjugate() / abs(nearest)

    c = ratio(stage, Sides("numerators"), here, (g, g), 1.0)

    # Some 1e-12 of the sizes of the terms, 1 + 0.2 + 1 here, is kept free for rounding.
    assert c == pytest.approx(1 / abs(nearest), rel=1e-10)
    assert c >= 1 / abs(nearest)
    assert worst * (1 - 1e-12) <= c <= worst * (1 + 1e-3)


@given(st.floats(-0.7, 0.7), st.floats(0.2, 4.0))
def test_no_direction_gives_a_bound_below_the_worst_board(turn: float, omega: float) -> None:
    stage = coefficients((1.0, 0.19, 0.99), (1.0, 0.21, 1.01), top=[0])
    middle = complex(1 - omega**2, 0.2 * omega)
    g = middle.conjugate() / abs(middle) * np.exp(1j * turn)

    c = ratio(stage, Sides("numerators"), Segment(omega, omega), (g, g), 1.0)

    real = np.clip(0.0, 1 - 1.01 * omega**2, 1 - 0.99 * omega**2)
    assert c >= 1 / abs(complex(real, 0.19 * omega)) * (1 - 1e-6)


def test_the_bound_of_a_ratio_is_not_below_the_worst_board() -> None:
    stage = coefficients((1.0, 0.19, 0.99), (1.0, 0.21, 1.01), top=[0])
    one, two = Segment(0.98, 0.98), Segment(0.5, 0.5)
    worst = largest(stage, 0.98, 0.5)
    directions = (complex(r, i) / abs(complex(r, i)) for r in (0.0, 0.03, 0.05) for i in (-0.2, -1))

    bounds = [
        relative_ratio(stage, Sides("numerators"), (one, two), ((g, g),) * 2) for g in directions
    ]

    assert min(bounds) < 1.1 * worst
    assert min(bounds) >= worst * (1 - 1e-6)
