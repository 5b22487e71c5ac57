"""The ascent to the worst board against scipy on one value, and against many boards on several."""

from __future__ import annotations

from dataclasses import replace
from itertools import product
from math import isfinite, log

import numpy as np
import pytest
from boxes import Real, boards, by_power, coefficients, form_at, stages, values_of
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy.optimize import minimize_scalar

from filtercheck.tolerance.climb import Aim, best_corner, climb, heights
from filtercheck.tolerance.stage import Stage

AIMS = st.lists(
    st.tuples(st.floats(0.05, 20), st.sampled_from([1, -1])), min_size=1, max_size=2
).map(lambda terms: Aim(tuple(terms)))


def height(stage: Stage, aim: Aim, point: Real) -> float:
    """Return the sum of sign * ln|H| by plain arithmetic; infinite where H is 0 or infinite."""
    total = 0.0
    for omega, sign in aim.terms:
        values = values_of(stage.box, point)
        for polynomial, part in ((stage.numerator, sign), (stage.denominator, -sign)):
            size = abs(form_at(by_power(polynomial, values), 9, 1j * omega, 1.0))
            total += part * (log(size) if size else -np.inf)
    return total


def one_free(stage: Stage, index: int) -> Stage:
    """Return the stage with all values but one exact."""
    keep = np.arange(len(stage.box.own_low)) == index % len(stage.box.own_low)
    low = stage.box.own_low
    high = np.where(keep, np.maximum(stage.box.own_high, low * 1.3), low)
    return replace(stage, box=replace(stage.box, own_low=low, own_high=high, nominal=low.copy()))


def highest(stage: Stage, aim: Aim) -> float:
    """Return the largest height on the line of the free value, closed in on from a fine grid."""
    (index,) = stage.box.own_free
    low, high = stage.box.low[index], stage.box.high[index]

    def at(x: float) -> float:
        point = stage.box.low.copy()
        point[index] = x
        return -height(stage, aim, point)

    grid = np.linspace(low, high, 201)
    found = [at(x) for x in grid]
    for k in np.argsort(found)[:5]:
        ends = (grid[max(k - 1, 0)], grid[min(k + 1, 200)])
        found.append(
            float(minimize_scalar(at, bounds=ends, method="bounded", options={"xatol": 1e-12}).fun)
        )
    return -min(found)


@settings(max_examples=60)
@given(stages(), AIMS, st.integers(0, 3))
def test_on_one_value_the_ascent_finds_the_highest_point(
    stage: Stage, aim: Aim, index: int
) -> None:
    stage = one_free(stage, index)
    best = highest(stage, aim)
    assume(isfinite(best) and abs(best) < 12)  # else at a null, which is no maximum

    found = climb(stage, aim, best_corner(stage, aim))

    assert height(stage, aim, found) >= best - 1e-9
    assert float(heights(stage, aim, found[None, :])[0]) == pytest.approx(
        height(stage, aim, found), abs=1e-9
    )


def check_several(stage: Stage, aim: Aim, found: Real, seed: int) -> None:
    """Assert that no corner and no random board is higher."""
    reached = height(stage, aim, found)
    ends = zip(stage.box.low, stage.box.high, strict=True)
    corners = [np.array(corner) for corner in product(*ends)]
    others = [*corners, *boards(stage.box, np.random.default_rng(seed), 200)]
    assert max(height(stage, aim, point) for point in others) <= reached + 1e-9


@settings(max_examples=30)
@given(st.floats(0.2, 4), st.sampled_from([1, -1]), st.integers(0, 9))
def test_no_board_of_a_resonance_is_higher(omega: float, sign: int, seed: int) -> None:
    low = (0.9, 0.15, 0.9)
    stage = coefficients(low, (1.1, 0.2, 1.1), top=[0, 1])
    aim = Aim(((omega, sign),))

    check_several(stage, aim, climb(stage, aim, best_corner(stage, aim)), seed)


@settings(max_examples=30)
@given(st.floats(0.2, 4), st.floats(0.2, 4), st.integers(0, 9))
def test_no_board_of_a_ratio_of_two_frequencies_is_higher(
    omega: float, other: float, seed: int
) -> None:
    stage = coefficients((0.9, 0.5, 0.9), (1.1, 0.6, 1.1), top=[0, 2])
    aim = Aim(((omega, 1), (other, -1)))

    check_several(stage, aim, climb(stage, aim, best_corner(stage, aim)), seed)


@given(stages(commons=1), AIMS)
def test_the_ascent_ends_in_the_box_and_not_below_its_start(stage: Stage, aim: Aim) -> None:
    start = best_corner(stage, aim)
    found = climb(stage, aim, start)

    assert (found >= stage.box.low).all()
    assert (found <= stage.box.high).all()
    before, after = heights(stage, aim, np.array([start, found]))
    assert after >= before
