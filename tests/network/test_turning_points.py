"""Turning points, crossings and ends of responses whose every extreme is known in closed form."""

from __future__ import annotations

from math import cos, inf, log10, pi, sqrt

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import signal

from filtercheck.network.curve import Curve
from filtercheck.network.ratio import Ratio
from filtercheck.network.response import Response, product

Complex = NDArray[np.complex128]
CORNER_HZ = 1 / (2 * pi)  # of the prototypes, whose corner is at 1 rad/s


def factored(zeros: Complex, poles: Complex) -> Response:
    """Return prod (1 - s/z)/(1 - s/p), a factor for each pole pair or real pole."""
    nulls = sorted(z.imag for z in zeros if z.imag > 1e-9)
    factors = []
    for pole in poles[poles.imag > -1e-9]:
        size = abs(pole)
        if pole.imag < 1e-9:
            factors.append(Ratio(np.ones(1), np.array([1, 1 / size]), 0, 0, 1.0))
            continue
        top = np.array([1, 0, nulls.pop() ** -2]) if nulls else np.ones(1)
        bottom = np.array([1, -2 * pole.real / size**2, size**-2])
        factors.append(Ratio(top, bottom, 0, 0, 1.0))
    return Response(tuple(factors))


@pytest.mark.parametrize("order", range(2, 11))
@pytest.mark.parametrize("ripple_db", [0.01, 0.1, 1.0, 3.0])
def test_turns_of_a_chebyshev_response(order: int, ripple_db: float) -> None:
    # |H|^2 = 1/(1 + e^2 T_n(w)^2), T_n(w) = cos(n acos w): it turns at w = cos(k pi/n), where T_n
    # is 1 or -1, and at w = cos((2k + 1) pi/2n), where it is 0.
    _, poles, _ = signal.cheb1ap(order, ripple_db)
    curve = Curve(factored(np.empty(0, complex), np.asarray(poles)))
    top_db = 0.0 if order % 2 else ripple_db  # less the gain at 0 Hz, where `factored` is 0 dB
    turns = np.array([cos(k * pi / (2 * order)) for k in range(1, order)])
    levels = [top_db if k % 2 else top_db - ripple_db for k in range(1, order)]
    passband = (0.0, CORNER_HZ)

    low, *inner, high = curve.candidates_hz(passband)
    assert (low, high) == passband
    # Far below the corner the slope is rounding noise, whose roots mean nothing.
    found = np.array([f for f in inner if f > 1e-3 * CORNER_HZ])
    np.testing.assert_allclose(2 * pi * found, turns[::-1], rtol=1e-7)
    gain_db = curve.response.gain_db(found)
    np.testing.assert_allclose(gain_db, levels[::-1], rtol=0, atol=1e-9)
    assert curve.highest(passband).gain_db == pytest.approx(top_db, abs=1e-9)
    assert curve.lowest(passband).gain_db == pytest.approx(top_db - ripple_db, abs=1e-9)
    # The corner is where the gain falls below the ripple for good; the turns before only touch.
    corner = curve.fall_hz(0.0, top_db - ripple_db - 1e-9, upward=True)
    assert corner == pytest.approx(CORNER_HZ, rel=1e-6)


@pytest.mark.parametrize("order", range(2, 11))
@pytest.mark.parametrize("rejection_db", [20.0, 60.0])
def test_nulls_and_humps_of_an_inverse_chebyshev_response(order: int, rejection_db: float) -> None:
    # |H|^2 = 1/(1 + 1/(e^2 T_n(1/w)^2)): in the stop band w > 1 nulls at 1/cos((2k + 1) pi/2n),
    # humps as high as the rejection allows at 1/cos(k pi/n).
    zeros, poles, _ = signal.cheb2ap(order, rejection_db)
    curve = Curve(factored(np.asarray(zeros), np.asarray(poles)))
    angles = [k * pi / (2 * order) for k in range(1, order)]
    stopband = (CORNER_HZ, inf)

    inner = curve.candidates_hz(stopband)[1:-1]
    for k, angle in enumerate(angles, start=1):
        near = inner[np.argmin(np.abs(inner * 2 * pi * cos(angle) - 1))]
        assert near * 2 * pi * cos(angle) == pytest.approx(1, rel=1e-7)
        gain_db = curve.gain_db(near)
        assert gain_db < -200 if k % 2 else gain_db == pytest.approx(-rejection_db, abs=1e-9)
    assert curve.highest(stopband).gain_db == pytest.approx(-rejection_db, abs=1e-9)
    assert curve.lowest(stopband).gain_db < -200
    edge = curve.fall_hz(0.0, -rejection_db, upward=True)
    assert edge == pytest.approx(CORNER_HZ, rel=1e-9)


def second_order(f0_hz: float, q: float) -> Response:
    return Response((Ratio(np.ones(1), np.array([1, 1 / q, 1]), 0, 0, 2 * pi * f0_hz),))


def dip(f0_hz: float, depth: float, q: float = 1.0) -> Response:
    """Return a response of 1 at both ends and of `depth` at f0: zeros less damped than poles."""
    top, bottom = np.array([1, depth / q, 1]), np.array([1, 1 / q, 1])
    return Response((Ratio(top, bottom, 0, 0, 2 * pi * f0_hz),))


@pytest.mark.parametrize("f0_hz", [1e-3, 0.05, 1.0, 1e7])
def test_without_a_band_the_whole_axis_is_searched(f0_hz: float) -> None:
    q = 7.0
    peak = Curve(second_order(f0_hz, q)).highest()
    bottom = Curve(dip(f0_hz, 0.1)).lowest()

    # |H| is largest at f0 sqrt(1 - 1/(2 Q^2)), where it is Q/sqrt(1 - 1/(4 Q^2)).
    assert peak.freq_hz == pytest.approx(f0_hz * sqrt(1 - 1 / (2 * q * q)), rel=1e-6)
    assert peak.gain_db == pytest.approx(20 * log10(q / sqrt(1 - 1 / (4 * q * q))), abs=1e-9)
    assert bottom.freq_hz == pytest.approx(f0_hz, rel=1e-6)
    assert bottom.gain_db == pytest.approx(-20, abs=1e-9)


@pytest.mark.parametrize("f0_hz", [0.03, 50.0, 1234.5, 9e6])
@pytest.mark.parametrize("place", [0.3, 1.0, 1.7])
@pytest.mark.parametrize("q", [0.4, 20.0])
def test_a_perfect_null_is_met_to_rounding(f0_hz: float, place: float, q: float) -> None:
    # By hand: 1 - (x/place)^2 over 1 + x/Q - x^2, x = jf/f0, vanishes at f0 times place. A root of
    # the slope's interpolant alone would be off by up to 1e-11, the shortest piece.
    top, bottom = np.array([1, 0, place**-2]), np.array([1, 1 / q, 1])
    null = Curve(Response((Ratio(top, bottom, 0, 0, 2 * pi * f0_hz),))).lowest()

    assert null.freq_hz == pytest.approx(f0_hz * place, rel=1e-14)
    assert null.gain_db < -250


@pytest.mark.parametrize("f0_hz", [1e-3, 1e7])
@pytest.mark.parametrize("start", [0.0, 1e-4, 1e4, inf])
def test_crossings_are_found_at_any_frequency_and_from_any_start(
    f0_hz: float, start: float
) -> None:
    # By hand, with |H|^2 = ((1 - x^2)^2 + (d x)^2)/((1 - x^2)^2 + x^2), Q = 1, at half power:
    # (1 - x^2)^2 = x^2 (1 - 2 d^2), so that x - 1/x = -+b, b = sqrt(1 - 2 d^2).
    depth = 0.1
    b = sqrt(1 - 2 * depth**2)
    lower = sqrt(1 + b * b / 4) - b / 2
    curve = Curve(dip(f0_hz, depth))
    upward = start < 1
    found = curve.fall_hz(start * f0_hz, -10 * log10(2), upward=upward)

    assert found == pytest.approx(f0_hz * (lower if upward else 1 / lower), rel=1e-10)


def test_a_level_that_is_touched_is_reached_and_one_below_is_not() -> None:
    curve = Curve(dip(1e3, 0.25, q=50.0))
    bottom_db = 20 * log10(0.25)

    touched = curve.fall_hz(10.0, bottom_db + 1e-7, upward=True)
    assert touched == pytest.approx(1e3, rel=1e-5)
    assert curve.fall_hz(10.0, curve.lowest().gain_db, upward=True) == pytest.approx(1e3, rel=1e-7)
    assert curve.fall_hz(10.0, bottom_db - 1e-7, upward=True) is None
    assert curve.fall_hz(inf, bottom_db - 1e-7, upward=False) is None


def test_the_nearest_of_several_crossings_counts() -> None:
    # Narrow dips of -6, -20 and -6 dB; between them the gain is back at 0 dB.
    shallow, deep = 0.5, 0.1
    curve = Curve(product([dip(1e2, shallow, 50.0), dip(1e3, deep, 50.0), dip(1e4, shallow, 50.0)]))

    for start, level_db, upward, wanted_hz in (
        (1.0, -3.0, True, 1e2),
        (1.0, -12.0, True, 1e3),
        (300.0, -3.0, True, 1e3),
        (300.0, -3.0, False, 1e2),
        (3e3, -12.0, False, 1e3),
        (3e3, -3.0, True, 1e4),
        (inf, -3.0, False, 1e4),
    ):
        found = curve.fall_hz(start, level_db, upward=upward)
        assert found is not None
        assert found == pytest.approx(wanted_hz, rel=0.05)
        assert (found < wanted_hz) == upward
        assert curve.gain_db(found) == pytest.approx(level_db, abs=1e-9)
    assert curve.fall_hz(3e3, -12.0, upward=True) is None
    assert curve.fall_hz(300.0, -12.0, upward=False) is None


def test_a_start_at_the_level_itself_has_fallen_to_it() -> None:
    one_pole = Ratio(np.ones(1), np.ones(2), 0, 0, 2 * pi * 1e3)
    flat = Curve(Response((Ratio(np.ones(1), np.ones(1), 0, 0, 1.0),)))

    assert Curve(Response((one_pole,))).fall_hz(0.0, 0.0, upward=True) == 0.0
    assert flat.fall_hz(50.0, 0.0, upward=True) == 50.0
    assert flat.fall_hz(50.0, 0.0, upward=False) == 50.0
    assert flat.fall_hz(50.0, -1e-9, upward=True) is None


def test_of_equal_gains_the_lowest_frequency_is_named() -> None:
    flat = Curve(Response((Ratio(np.array([2.0]), np.ones(1), 0, 0, 1.0),)))

    assert flat.highest((10.0, 100.0)).freq_hz == 10.0
    assert flat.lowest((10.0, 100.0)).freq_hz == 10.0


@pytest.mark.parametrize("level_db", [60.0, 0.0, -60.0])
def test_an_integrator_falls_from_infinity_and_a_differentiator_rises_to_it(
    level_db: float,
) -> None:
    # By hand: f1/f and f/f1 are at the level where f/f1 or f1/f is 10^(-L/20).
    integrator = Curve(Response((Ratio(np.ones(1), np.ones(1), -1, 1, 2 * pi * 50),)))
    differentiator = Curve(Response((Ratio(np.ones(1), np.ones(1), 1, 0, 2 * pi * 50),)))
    times = 10 ** (level_db / 20)

    assert integrator.highest().gain_db == differentiator.highest().gain_db == inf
    assert integrator.lowest().gain_db == differentiator.lowest().gain_db == -inf
    for start in (0.0, 1e-9):
        found = integrator.fall_hz(start, level_db, upward=True)
        assert found == pytest.approx(50 / times, rel=1e-12)
    for start in (inf, 1e9):
        found = differentiator.fall_hz(start, level_db, upward=False)
        assert found == pytest.approx(50 * times, rel=1e-12)
