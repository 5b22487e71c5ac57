"""Boxes and polynomials for the tests of `tolerance`, and their values by plain arithmetic."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Any

import numpy as np
from hypothesis import strategies as st
from numpy.typing import NDArray

from filtercheck.network.elements import Symbol
from filtercheck.network.polynomial import Polynomial
from filtercheck.tolerance.box import Box, Common
from filtercheck.tolerance.segment import Segment
from filtercheck.tolerance.stage import Stage

Real = NDArray[np.float64]
Complex = NDArray[np.complexfloating[Any, Any]]


def symbols(dynamic: Sequence[bool]) -> tuple[Symbol, ...]:
    """Return symbols of which some bring a power of s."""
    return tuple(
        Symbol(f"E{i}", "capacitance" if moves else "conductance")
        for i, moves in enumerate(dynamic)
    )


def coefficients(low: Sequence[float], high: Sequence[float], top: Sequence[int]) -> Stage:
    """Return a stage whose denominator is a0 + a1 s + ..., each a_k between its own limits, and
    whose numerator is the part of it with the powers of `top`."""
    order = len(low) - 1
    known = symbols([True] * order + [False] * (order + 1))
    term = {k: (1 << k) - 1 | 1 << (order + k) for k in range(order + 1)}
    ends = (np.array([1.0] * order + list(end)) for end in (low, high))
    own_low, own_high = ends
    return Stage(
        Polynomial(known, {term[k]: 1 for k in top}),
        Polynomial(known, dict.fromkeys(term.values(), 1)),
        Box(own_low, own_high, (own_low + own_high) / 2),
    )


def values_of(box: Box, point: Real) -> Real:
    """Return the values of the symbols at one board: own value times each factor it shares."""
    count = len(box.own_low)
    found = [float(value) for value in point[:count]]
    for k, common in enumerate(box.commons):
        found = [v * point[count + k] if common.mask >> i & 1 else v for i, v in enumerate(found)]
    return np.array(found)


def by_power(polynomial: Polynomial, values: Real) -> Mapping[int, float]:
    """Return the coefficient of each power of s, term by term."""
    found: dict[int, float] = {}
    for mask, coefficient in polynomial.terms.items():
        chosen = [i for i in range(len(values)) if mask >> i & 1]
        power = polynomial.lift + sum(polynomial.symbols[i].dynamic for i in chosen)
        product = coefficient * float(np.prod(values[chosen]))
        found[power] = found.get(power, 0.0) + product
    return found


def form_at(powers: Mapping[int, float], degree: int, x: complex, y: complex) -> complex:
    """Return y^degree P(x/y)."""
    return complex(sum(c * x**k * y ** (degree - k) for k, c in powers.items()))


def place(segment: Segment, t: float) -> tuple[complex, complex]:
    """Return jX and Y at t."""
    (x1, y1), (x2, y2) = segment.ends
    return 1j * (x1 * (1 - t) + x2 * t), complex(y1 * (1 - t) + y2 * t)


def boards(box: Box, random: np.random.Generator, count: int) -> Iterator[Real]:
    """Yield boards of a box, some of them at corners."""
    for k in range(count):
        spot = random.uniform(size=len(box.low))
        yield box.low + (box.high - box.low) * (np.round(spot) if k % 3 == 0 else spot)


@st.composite
def stages(draw: st.DrawFn, commons: int = 0) -> Stage:
    """Draw a stage with any two polynomials, and up to so many common factors."""
    count = draw(st.integers(1 + commons, 4))
    known = symbols(draw(st.lists(st.booleans(), min_size=count, max_size=count)))
    terms = st.dictionaries(
        st.integers(0, 2**count - 1), st.sampled_from([1, -1, 2, 3, -3]), min_size=1, max_size=8
    )
    lift = st.sampled_from([0, 0, 0, 1])
    low = np.array(draw(st.lists(st.floats(0.1, 3), min_size=count, max_size=count)))
    width = st.sampled_from([0.0, 0.01, 0.1, 0.5])
    widths = np.array(draw(st.lists(width, min_size=count, max_size=count)))
    shared = []
    for k in range(draw(st.integers(min(commons, 1), commons))):
        mask = sum(1 << i for i in range(count) if i % 2 == k % 2)
        start = draw(st.floats(0.5, 1.0))
        shared.append(Common(mask, start, start * (1 + draw(width))))
    nominal = np.array([*(low * (1 + widths / 2)), *((c.low + c.high) / 2 for c in shared)])
    return Stage(
        Polynomial(known, draw(terms), draw(lift)),
        Polynomial(known, draw(terms), draw(lift)),
        Box(low, low * (1 + widths), nominal, tuple(shared)),
    )


@st.composite
def segments(draw: st.DrawFn) -> Segment:
    """Draw a stretch or a single frequency, with 0 and infinity among the ends."""
    ends = st.one_of(st.sampled_from([0.0, np.inf]), st.floats(0.05, 20.0))
    low, high = sorted((draw(ends), draw(ends)))
    return Segment(low, high)
