"""Zero exclusion against the Routh-Hurwitz condition, and against the poles of random boards."""

from __future__ import annotations

from math import acos, inf, pi, sqrt

import numpy as np
import pytest
from boxes import boards, by_power, coefficients, symbols, values_of
from hypothesis import event, given, settings
from hypothesis import strategies as st

from filtercheck.network.polynomial import Polynomial
from filtercheck.tolerance.box import Box
from filtercheck.tolerance.exclusion import arc, doubt, doubt_on_ray, ray
from filtercheck.tolerance.segment import Segment
from filtercheck.tolerance.stage import Stage

BUDGET = 200_000_000  # numbers; more than any clear path here needs
EVERYWHERE = Segment(0.0, inf)
AXIS = ray(EVERYWHERE, pi / 2)


def is_clear(stage: Stage) -> bool:
    """Whether the axis is shown to be clear, by either way to ask."""
    shown = doubt(stage, AXIS, BUDGET) is None
    assert (doubt_on_ray(stage, pi / 2, BUDGET) is None) == shown
    return shown


@pytest.mark.parametrize("margin", [1.0001, 1.01, 1.3, 3.0])
@pytest.mark.parametrize("width", [0.01, 0.2, 0.6])
def test_third_order_is_stable_where_the_worst_corner_is(margin: float, width: float) -> None:
    # a0 + a1 s + a2 s^2 + a3 s^3 with positive coefficients is stable where a1 a2 > a0 a3: in a
    # box, where the lowest a1 a2 is above the highest a0 a3. That is `margin` here.
    a0, a2, a3 = 2.0, 0.7, 0.3
    a1 = margin * a0 * a3 * (1 + width) ** 2 / a2
    low = (a0, a1, a2, a3)

    assert is_clear(coefficients(low, [a * (1 + width) for a in low], top=[0]))


@pytest.mark.parametrize("margin", [0.9999, 0.99, 0.8])
@pytest.mark.parametrize("width", [0.2, 0.6])
def test_third_order_is_not_shown_stable_where_a_corner_is_not(margin: float, width: float) -> None:
    a0, a2, a3 = 2.0, 0.7, 0.3
    a1 = margin * a0 * a3 * (1 + width) ** 2 / a2
    low = (a0, a1, a2, a3)
    high = [a * (1 + width) for a in low]
    assert high[1] * high[2] > low[0] * low[3]  # some boards are stable

    assert not is_clear(coefficients(low, high, top=[0]))


@pytest.mark.parametrize(("x", "stable"), [(1.0001, True), (1.1, True), (0.9999, False)])
def test_second_order_is_stable_where_its_damping_is_positive(x: float, stable: bool) -> None:
    # 1 + (x - y) s + s^2 with x from here on, up by 1, and y from 0.5 to 1: stable where x > y.
    known = symbols([True, True, True])
    bottom = Polynomial(known, {0: 1, 1: 1, 2: -1, 5: 1})
    # The power s^2 needs a second dynamic value; times x, which changes no sign.
    box = Box(np.array([x, 0.5, 1.0]), np.array([x + 1, 1.0, 1.0]), np.array([x + 0.5, 0.7, 1.0]))

    assert is_clear(Stage(Polynomial(known, {0: 1}), bottom, box)) == stable


# A fault that these tests found: where a path is not clear the box is halved until a value is
# exact to the last digit, and that ends in a ValueError before the budget ends it.

# a0 + a1 s + s^2: |p| = sqrt(a0) and Q = sqrt(a0)/a1, here 0.9487 to 1.0488 and 4.5175 to 5.5201.
RESONANCE = coefficients((0.9, 0.19, 1.0), (1.1, 0.21, 1.0), top=[0])
LOWEST_Q, HIGHEST_Q = sqrt(0.9) / 0.21, sqrt(1.1) / 0.19
BEYOND_Q = ((HIGHEST_Q * 0.999, False), (HIGHEST_Q * 1.001, True), (0.6, True))


@pytest.mark.parametrize(
    ("q", "clear"),
    [(LOWEST_Q * 0.999, True), (LOWEST_Q * 1.001, False), (5.0, False), *BEYOND_Q],
)
def test_rays_are_clear_beyond_the_extremes_of_q(q: float, clear: bool) -> None:
    angle = acos(-1 / (2 * q))

    assert (doubt(RESONANCE, ray(EVERYWHERE, angle), BUDGET) is None) == clear
    assert (doubt_on_ray(RESONANCE, angle, BUDGET) is None) == clear


@pytest.mark.parametrize(
    ("size", "clear"),
    [(0.9, True), (0.9487 * 0.999, True), (0.9487 * 1.001, False), (1.0, False), (1.05, True)],
)
def test_arcs_are_clear_beyond_the_extremes_of_size(size: float, clear: bool) -> None:
    path = arc(size, pi / 2, acos(-1 / (2 * 4.0)))

    assert (doubt(RESONANCE, path, BUDGET) is None) == clear


@given(st.floats(0.1, 10), st.floats(pi / 2, 3.0), st.floats(0.01, 1.0), st.floats(0, 1))
def test_an_arc_keeps_its_size_and_turns_between_its_angles(
    size: float, start: float, turn: float, t: float
) -> None:
    path = arc(size, start, start + turn)
    s = (path.x[0] * (1 - t) + path.x[1] * t) / (path.y[0] * (1 - t) + path.y[1] * t)

    assert abs(s) == pytest.approx(size, rel=1e-12)
    angle = float(np.angle(s)) % (2 * pi)
    assert start - 1e-9 <= angle <= start + turn + 1e-9
    ends = [path.x[k] / path.y[k] for k in (0, 1)]
    assert [float(np.angle(end)) % (2 * pi) for end in ends] == pytest.approx([start, start + turn])


def poles_of(stage: Stage, count: int) -> list[np.ndarray]:
    """Return the poles of random boards with no negative imaginary part."""
    found = []
    for point in boards(stage.box, np.random.default_rng(3), count):
        powers = by_power(stage.denominator, values_of(stage.box, point))
        roots = np.roots([powers[k] for k in sorted(powers, reverse=True)])
        found.append(roots[roots.imag >= 0])
    return found


@settings(max_examples=40)
@given(
    st.lists(st.floats(0.1, 3), min_size=3, max_size=5),
    st.sampled_from([0.01, 0.1, 0.4]),
    st.floats(0.51, 20),
    st.floats(0.2, 3),
)
def test_no_pole_crosses_a_path_that_is_clear(
    low: list[float], width: float, q: float, size: float
) -> None:
    stage = coefficients(low, [a * (1 + width) for a in low], top=[0])
    angle = acos(-1 / (2 * q))
    clear_ray = doubt(stage, ray(EVERYWHERE, angle), 40_000_000) is None
    clear_axis = doubt(stage, AXIS, 40_000_000) is None
    clear_arc = doubt(stage, arc(size, pi / 2, angle), 40_000_000) is None
    event(f"ray {clear_ray}, axis {clear_axis}, arc {clear_arc}")
    found = poles_of(stage, 60)

    if clear_ray:
        assert len({int((np.angle(p) < angle).sum()) for p in found}) == 1
    if clear_axis:
        assert len({int((p.real > 0).sum()) for p in found}) == 1
    if clear_ray and clear_axis and clear_arc:
        sector = [p[(np.angle(p) < angle) & (np.angle(p) > pi / 2)] for p in found]
        assert len({int((np.abs(p) < size).sum()) for p in sector}) == 1
