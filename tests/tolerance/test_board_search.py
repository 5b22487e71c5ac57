"""The tests' own nodal analysis and search, on what can be worked by hand."""

from __future__ import annotations

from math import log10, pi

import numpy as np
import pytest
from board_search import Limit, margin_of, worst
from nodal import Drawing, elements, exact, within
from random_circuits import circuit


def test_a_pole_is_where_it_is_by_hand() -> None:
    # 1/(2 pi R C) = 1 kHz.
    drawing = Drawing(
        elements("R R in o | C C o 0"),
        {"R": exact(1e4), "C": exact(1 / (2 * pi * 1e7))},
        "o",
    )
    (voltage,) = drawing.nodal.voltage(drawing.typical[None], np.array([1e3, 1e4]))

    np.testing.assert_allclose(voltage, [1 / (1 + 1j), 1 / (1 + 10j)], rtol=1e-12)
    np.testing.assert_allclose(drawing.nodal.poles(drawing.typical), [-2 * pi * 1e3])


def test_an_inductor_and_an_op_amp_are_as_by_hand() -> None:
    # L/R = 1 ms; a follower has A/(1 + A), and 1/A = 1/A0 + s/(2 pi GBW) = 1e-3 + 2e-3 j.
    drawing = Drawing(
        elements("R R in p | L L p 0 | U A p o o"),
        {
            "R": exact(1e3),
            "L": exact(1.0),
            "A.gain_bandwidth": exact(1e6),
            "A.open_loop_gain": exact(1e3),
        },
        "o",
    )
    voltage = drawing.nodal.voltage(drawing.typical[None], np.array([2e3]))[0, 0]
    s = 2j * pi * 2e3

    assert voltage == pytest.approx(s * 1e-3 / (1 + s * 1e-3) / (1 + 1e-3 + 2e-3j), rel=1e-12)


@pytest.mark.parametrize("seed", range(0, 100, 7))
def test_slopes_are_those_of_differences(seed: int) -> None:
    drawing = circuit(seed).drawing
    freq_hz, step = 700.0, 1e-5
    gain_db, by_value, by_freq = drawing.nodal.slopes(drawing.typical, freq_hz)
    up, down = (
        drawing.typical * np.exp(sign * step * np.eye(len(drawing.typical))) for sign in (1, -1)
    )
    at = np.array([freq_hz])
    around = drawing.nodal.gain_db(up, at) - drawing.nodal.gain_db(down, at)
    ends_hz = freq_hz * np.exp([-step, step])
    low_db, high_db = drawing.nodal.gain_db(drawing.typical[None], ends_hz)[0]

    assert gain_db == pytest.approx(drawing.nodal.gain_db(drawing.typical[None], at)[0, 0])
    np.testing.assert_allclose(by_value, around[:, 0] / (2 * step), rtol=1e-4, atol=1e-5)
    assert by_freq == pytest.approx((high_db - low_db) / (2 * step), rel=1e-4, abs=1e-5)


def test_the_search_finds_the_worst_divider() -> None:
    # R2/(R1 + R2) of equal resistors with 10 % is least at 0.9/(0.9 + 1.1) = 0.45.
    drawing = Drawing(
        elements("R R1 in o | R R2 o 0"),
        {"R1": within(1e3, 10, 10), "R2": within(1e3, 10, 10)},
        "o",
    )
    limit = Limit("gain", "at least", (10.0, 1000.0), (-7.0,))
    (found,) = worst(drawing, (limit,), seed=0)

    assert found.margin_db == pytest.approx(20 * log10(0.45) + 7.0, abs=1e-9)


def test_the_search_finds_a_worst_board_inside_the_box() -> None:
    # A series L and C short the output at 1/(2 pi sqrt(L C)), which with 10 % of C passes over
    # 1 kHz: what is left there is the loss resistor, 20 log10(1/101), at no corner.
    drawing = Drawing(
        elements("R R1 in o | L L o a | C C a b | R R2 b 0"),
        {
            "R1": exact(100.0),
            "L": exact(0.1),
            "C": within(1.03 / (0.1 * (2 * pi * 1e3) ** 2), 10, 10),
            "R2": exact(1.0),
        },
        "o",
    )
    limit = Limit("gain", "at least", (999.0, 1001.0), (-30.0,))
    (found,) = worst(drawing, (limit,), seed=0)

    assert found.margin_db == pytest.approx(20 * log10(1 / 101) + 30.0, abs=1e-6)
    assert (drawing.low[2] < found.values[2]) & (found.values[2] < drawing.high[2])


@pytest.mark.parametrize("seed", range(0, 60, 3))
def test_what_the_search_finds_is_a_board_with_that_margin(seed: int) -> None:
    one = circuit(seed)
    for limits in one.requirements:
        for limit, found in zip(limits, worst(one.drawing, limits, seed), strict=True):
            margin_db = margin_of(one.drawing, limit, found.values, found.freq_hz)

            assert margin_db == pytest.approx(found.margin_db, abs=1e-7)
            assert ((one.drawing.low <= found.values) & (found.values <= one.drawing.high)).all()
