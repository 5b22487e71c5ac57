"""Forms on a stretch of frequencies are Y^d P(jX/Y), at its ends 0 and infinity as well."""

from __future__ import annotations

from math import inf, isinf, sqrt

import numpy as np
import pytest
from boxes import Complex, Real, form_at, place, segments
from hypothesis import given
from hypothesis import strategies as st

from filtercheck.tolerance.segment import (
    Segment,
    largest_product,
    powers,
    times_linear,
)

PLACES = (0.0, 0.25, 0.5, 0.9, 1.0)
REAL = st.lists(st.floats(-3, 3), min_size=1, max_size=6)


def summed(form: Complex, t: float) -> complex:
    """Return the sum of c_j (1 - t)^(d - j) t^j."""
    last = len(form) - 1
    return complex(sum(c * (1 - t) ** (last - j) * t**j for j, c in enumerate(form)))


@given(segments(), REAL)
def test_the_form_of_a_polynomial_is_the_polynomial(
    segment: Segment, coefficients: list[float]
) -> None:
    degree = len(coefficients) - 1
    form = np.array(coefficients) @ segment.powers(degree)

    for t in (0.0,) if segment.is_point else PLACES:
        x, y = place(segment, t)
        expected = form_at(dict(enumerate(coefficients)), degree, x, y)
        scale = sum(
            abs(c) * abs(x) ** k * abs(y) ** (degree - k) for k, c in enumerate(coefficients)
        )
        assert abs(summed(form, t) - expected) <= 1e-12 * scale


@given(st.tuples(*[st.complex_numbers(max_magnitude=3)] * 4), REAL)
def test_the_form_on_any_straight_pair_is_the_polynomial(
    ends: tuple[complex, complex, complex, complex], coefficients: list[float]
) -> None:
    degree = len(coefficients) - 1
    x, y = (ends[0], ends[1]), (ends[2], ends[3])
    form = np.array(coefficients) @ powers(x, y, degree)

    for t in PLACES:
        at = (x[0] * (1 - t) + x[1] * t, y[0] * (1 - t) + y[1] * t)
        expected = form_at(dict(enumerate(coefficients)), degree, *at)
        assert abs(summed(form, t) - expected) <= 1e-12 * sum(map(abs, coefficients)) * 7.0**degree


@given(segments())
def test_the_ends_are_the_frequencies(segment: Segment) -> None:
    for (x, y), omega in zip(segment.ends, (segment.low, segment.high), strict=True):
        assert x >= 0
        assert y >= 0
        if isinf(omega):
            assert (x > 0, y) == (True, 0)
        else:
            assert x / y == pytest.approx(omega, rel=1e-14)


@pytest.mark.parametrize(
    ("low", "high", "middle"), [(1.0, 4.0, 2.0), (0.5, 8.0, 2.0), (0.0, 3.0, 1.5), (2.0, inf, 4.0)]
)
def test_the_middle_by_hand(low: float, high: float, middle: float) -> None:
    # sqrt(w1 w2) between two; X = sqrt(w) t, Y = 1/sqrt(w) from 0, so that the middle is w/2;
    # from w to infinity it is 2 w likewise.
    assert Segment(low, high).middle == pytest.approx(middle, rel=1e-14)


def test_the_middle_of_all_frequencies_is_finite() -> None:
    assert Segment(0.0, inf).middle == 1.0


@given(segments().filter(lambda segment: not segment.is_point))
def test_halves_cover(segment: Segment) -> None:
    first, second = segment.halves()

    assert (first.low, first.high) == (segment.low, second.low)
    assert second.high == segment.high
    assert segment.low <= first.high <= segment.high


@given(REAL, st.complex_numbers(max_magnitude=3), st.complex_numbers(max_magnitude=3))
def test_times_linear_is_a_product(form: list[float], start: complex, end: complex) -> None:
    grown = times_linear(np.array(form, complex), start, end)

    for t in PLACES:
        expected = summed(np.array(form, complex), t) * (start * (1 - t) + end * t)
        assert abs(summed(grown, t) - expected) <= 1e-12 * sum(map(abs, form)) * 6


def lines(*pairs: tuple[float, float]) -> list[Real]:
    """Return functions that are linear in t as `largest_product` takes them, (2, 1)."""
    return [np.array(pair)[:, None] for pair in pairs]


@given(st.lists(st.tuples(st.floats(0, 10), st.floats(0, 10)), min_size=1, max_size=4))
def test_no_product_of_lines_exceeds_its_bound(pairs: list[tuple[float, float]]) -> None:
    bound = largest_product(lines(*pairs))
    for t in np.linspace(0, 1, 21):
        value = float(np.prod([a * (1 - t) + b * t for a, b in pairs]))
        assert value <= bound * (1 + 1e-12)
    assert bound <= float(np.prod([max(pair) for pair in pairs])) * (1 + 1e-12)


def test_the_bound_of_a_product_by_hand() -> None:
    # (1 - t) t has the Bernstein coefficients 0, 1/2, 0.
    assert largest_product(lines((1.0, 0.0), (0.0, 1.0))) == 0.5
    assert largest_product(lines((2.0, 3.0))) == 3.0
    assert sqrt(largest_product(lines((2.0, 3.0), (2.0, 3.0)))) == pytest.approx(3.0)


@given(st.lists(st.lists(st.floats(0, 10), min_size=4, max_size=4), min_size=1, max_size=3))
def test_no_product_in_two_directions_exceeds_its_bound(ends: list[list[float]]) -> None:
    tables = [np.array(four).reshape(2, 2) for four in ends]
    bound = largest_product(tables)
    for t in np.linspace(0, 1, 7):
        for u in np.linspace(0, 1, 7):
            row, column = np.array([1 - t, t]), np.array([1 - u, u])
            value = float(np.prod([row @ table @ column for table in tables]))
            assert value <= bound * (1 + 1e-12)
