"""Stability: oscillators on the edge, marginal poles, and Routh's criterion in whole numbers."""

from __future__ import annotations

import random
from fractions import Fraction
from itertools import pairwise, permutations
from math import pi, sqrt

import numpy as np
import pytest

from filtercheck.network.elements import (
    GROUND,
    INPUT,
    Amplifier,
    Capacitor,
    Element,
    Network,
    Resistor,
    Symbol,
)
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import Ratio, ratio
from filtercheck.network.response import Response, product
from filtercheck.network.stability import Instability, instability

OHM, FARAD = 10e3, 10e-9  # of all parts whose value is not given


def built(elements: tuple[Element, ...], node: str, **given: float) -> Response:
    """Return the response at a node; `given` are ohm, farad, or 1/(2 pi GBW) of an op-amp."""

    def number(symbol: Symbol) -> float:
        if symbol.kind == "conductance":
            return 1 / given.get(symbol.element, OHM)
        return given.get(symbol.element, FARAD)

    functions = network_functions(Network(elements))
    values = {symbol: number(symbol) for symbol in functions.denominator.symbols}
    return Response((ratio(functions.numerators[node], functions.denominator, values),))


def ideal(name: str, plus: str, minus: str, out: str) -> Amplifier:
    return Amplifier(name, plus, minus, out, finite_gain=False, finite_bandwidth=False)


def check_the_edge(found: list[Instability | None], freq_hz: float) -> None:
    """Assert what is found below, on and above the gain at which a circuit oscillates."""
    below, at, above = found

    assert below is None
    assert at is not None
    assert not at.certain
    assert at.freq_hz == pytest.approx(freq_hz, rel=1e-9)
    assert above is not None
    assert above.certain
    assert above.freq_hz == pytest.approx(freq_hz, rel=1e-3)


def test_wien_bridge_oscillates_from_a_gain_of_3() -> None:
    # By hand: 1 + (3 - K) s R C + (s R C)^2 with K = 1 + Rf/Rg; the signal enters through Rg.
    elements = (
        Resistor("R1", "out", "series"),
        Capacitor("C1", "series", "plus"),
        Resistor("R2", "plus", GROUND),
        Capacitor("C2", "plus", GROUND),
        Resistor("Rf", "out", "minus"),
        Resistor("Rg", "minus", INPUT),
        ideal("U1", "plus", "minus", "out"),
    )
    gains = (3 - 1e-4, 3, 3 + 1e-4)

    found = [instability(built(elements, "out", Rf=(k - 1) * OHM)) for k in gains]
    check_the_edge(found, 1 / (2 * pi * OHM * FARAD))


def test_phase_shift_oscillator_needs_a_gain_of_29() -> None:
    # The classical result, from memory. By hand, with x = s R C: three equal C-R sections, the
    # last R into the virtual ground, give x^3/(x^3 + 6 x^2 + 5 x + 1), so that the loop closes
    # to x^3 (1 + K) + 6 x^2 + 5 x + 1. At x = jw the even powers give w^2 = 1/6, the odd ones
    # w^2 (1 + K) = 5, hence K = 29.
    elements = (
        Capacitor("C1", "out", "a"),
        Resistor("R1", "a", GROUND),
        Capacitor("C2", "a", "b"),
        Resistor("R2", "b", GROUND),
        Capacitor("C3", "b", "c"),
        Resistor("R3", "c", "minus"),
        Resistor("Rin", INPUT, "minus"),
        Resistor("Rf", "minus", "out"),
        ideal("U1", GROUND, "minus", "out"),
    )
    gains = (29 * (1 - 1e-4), 29, 29 * (1 + 1e-4))

    found = [instability(built(elements, "out", Rf=k * OHM)) for k in gains]
    check_the_edge(found, 1 / (2 * pi * OHM * FARAD * sqrt(6)))


def test_three_buffered_poles_in_an_inverting_loop_need_a_gain_of_8() -> None:
    # By hand: (1 + x)^3 + K with x = s R C; at x = jw, 3 w = w^3, and 1 - 3 w^2 + K = 0.
    poles: list[Element] = []
    for i, (start, end) in enumerate((("inverted", "a"), ("a", "b"), ("b", "out"))):
        poles += [
            Resistor(f"R{i}", start, f"{end} plus"),
            Capacitor(f"C{i}", f"{end} plus", GROUND),
            ideal(f"B{i}", f"{end} plus", end, end),
        ]
    elements = (
        *poles,
        Resistor("Rin", INPUT, "minus"),
        Resistor("Rg", "out", "minus"),
        Resistor("Rf", "minus", "inverted"),
        ideal("U1", GROUND, "minus", "inverted"),
    )
    gains = (8 * (1 - 1e-4), 8, 8 * (1 + 1e-4))

    found = [instability(built(elements, "out", Rf=k * OHM)) for k in gains]
    check_the_edge(found, sqrt(3) / (2 * pi * OHM * FARAD))


def test_feedback_to_the_wrong_input_runs_away_at_a_real_pole() -> None:
    # By hand: s tau V_out = V_plus, and half of V_out comes back: s = +1/(2 tau), GBW/2.
    latch = (
        Resistor("R1", INPUT, "plus"),
        Resistor("R2", "plus", "out"),
        Amplifier("U1", "plus", GROUND, "out", finite_gain=False),
    )
    amplifier = (
        Resistor("R1", INPUT, "minus"),
        Resistor("R2", "minus", "out"),
        Amplifier("U1", GROUND, "minus", "out", finite_gain=False),
    )
    gbw_hz = 3e6

    found = instability(built(latch, "out", U1=1 / (2 * pi * gbw_hz)))
    assert found is not None
    assert found.certain
    assert found.freq_hz == pytest.approx(gbw_hz / 2, rel=1e-12)
    assert instability(built(amplifier, "out", U1=1 / (2 * pi * gbw_hz))) is None


def test_a_pole_at_0_hz_counts_although_a_zero_hides_it() -> None:
    # By hand: x = s R C/(1 + s R C), out = -x/(s R C): -1/(1 + s R C), finite at 0 Hz.
    elements = (
        Capacitor("C1", INPUT, "a"),
        Resistor("R1", "a", GROUND),
        ideal("U1", "a", "x", "x"),
        Resistor("R2", "x", "minus"),
        Capacitor("C2", "minus", "out"),
        ideal("U2", GROUND, "minus", "out"),
    )
    response = built(elements, "out")

    assert response.gain_db(np.zeros(1))[0] == pytest.approx(0, abs=1e-12)
    assert instability(response) == Instability(certain=False, freq_hz=0.0)
    # Nor does a zero of a section before it make an integrator stable.
    differentiator = Response((Ratio(np.ones(1), np.ones(2), 1, 0, 1e4),))
    integrator = Response((Ratio(np.ones(1), np.ones(1), -1, 1, 1e4),))
    assert instability(product([differentiator, integrator])) == instability(integrator)


def second_order(damping: float, freq_hz: float) -> Response:
    """Return 1/(1 + 2 d x + x^2), whose poles have the real part -d, as a part of their size."""
    denominator = np.array([1.0, 2 * damping, 1.0])
    return Response((Ratio(np.ones(1), denominator, 0, 0, 2 * pi * freq_hz),))


@pytest.mark.parametrize("freq_hz", [1e-3, 50.0, 1e9])
@pytest.mark.parametrize(
    ("damping", "certain"),
    [
        (0.5, None),
        (1e-6, None),
        (1e-11, None),
        (1e-13, False),  # too near the axis to be told from one on it
        (0.0, False),
        (-1e-13, False),
        (-1e-11, True),
        (-1e-6, True),
        (-0.5, True),
    ],
)
def test_damping_of_a_pole_pair(damping: float, freq_hz: float, certain: bool | None) -> None:
    found = instability(second_order(damping, freq_hz))

    if certain is None:
        assert found is None
    else:
        assert found is not None
        assert found.certain is certain
        assert found.freq_hz == pytest.approx(freq_hz, rel=1e-9)


def test_the_worst_is_named_first_in_whatever_order() -> None:
    sound, marginal, wild = second_order(0.7, 1e3), second_order(0.0, 10.0), second_order(-0.1, 1e6)
    integrator = Response((Ratio(np.ones(1), np.ones(1), -1, 1, 1e4),))

    for order in permutations((sound, marginal, wild, integrator)):
        found = instability(product(order))
        assert found is not None
        assert found.certain
        assert found.freq_hz == pytest.approx(1e6)
    for order in permutations((sound, marginal, integrator)):
        found = instability(product(order))
        assert found is not None
        assert not found.certain


def test_zeros_in_the_right_half_plane_are_no_harm() -> None:
    all_pass = Ratio(np.array([1.0, -1.0]), np.array([1.0, 1.0]), 0, 0, 1e4)

    assert instability(Response((all_pass,))) is None


def test_a_response_without_poles_is_stable() -> None:
    assert instability(Response((Ratio(np.array([2.0]), np.ones(1), 0, 0, 1.0),))) is None


def in_the_right_half_plane(ascending: list[int]) -> int | None:
    """Return how many roots lie there, by Routh's array; None where it breaks down."""
    descending = [Fraction(c) for c in ascending[::-1]]
    above, below = descending[0::2], descending[1::2]
    first = [above[0]]
    while below:
        if below[0] == 0:
            return None
        first.append(below[0])
        padded = [*below, Fraction(0)]
        factor = above[0] / below[0]
        above, below = (
            below,
            [above[k + 1] - factor * padded[k + 1] for k in range(len(above) - 1)],
        )
    return sum(a * b < 0 for a, b in pairwise(first))


def test_routh_array_on_examples_by_hand() -> None:
    # In turn: (s + 1)(s + 2)(s + 3); s^3 + 3 s + 4 = (s + 1)(s^2 - s + 4), a zero in the first
    # column; s^3 + s^2 + 3 s + 4, whose first column is 1, 1, -1, 4; (s - 1)(s - 2); s^2 + 1.
    assert in_the_right_half_plane([6, 11, 6, 1]) == 0
    assert in_the_right_half_plane([4, 3, 0, 1]) is None
    assert in_the_right_half_plane([4, 3, 1, 1]) == 2
    assert in_the_right_half_plane([2, -3, 1]) == 2
    assert in_the_right_half_plane([1, 0, 1]) is None


def multiplied(a: list[int], b: list[int]) -> list[int]:
    whole = [0] * (len(a) + len(b) - 1)
    for i, x in enumerate(a):
        for k, y in enumerate(b):
            whole[i + k] += x * y
    return whole


@pytest.mark.parametrize("degree", range(1, 9))
@pytest.mark.parametrize("decades", [0, 6])
def test_polynomials_of_whole_numbers_agree_with_the_criterion_of_routh(
    degree: int, decades: int
) -> None:
    rng = random.Random(degree)
    counts = {True: 0, False: 0}
    for _ in range(200):
        # A product of factors of low degree, each with roots of another size, is often stable.
        ascending = [rng.randint(1, 9)]
        while len(ascending) <= degree:
            left = degree + 1 - len(ascending)
            size = 10 ** rng.randint(0, decades)
            factor = [rng.randint(1, 9) * size**k for k in range(min(left, rng.randint(1, 3)) + 1)]
            ascending = multiplied(ascending, factor)
        wanted = in_the_right_half_plane(ascending)
        if wanted is None:
            continue
        coefficients = np.array([float(c) for c in ascending])
        found = instability(Response((Ratio(np.ones(1), coefficients, 0, 0, 1e3),)))
        assert (found is None) == (wanted == 0)
        assert found is None or found.certain
        counts[wanted == 0] += 1
    assert counts[True] > 20
    assert degree < 3 or counts[False] > 20
