"""Extremes, crossings, phase and delay of responses: laws, closed forms and a graded search."""

from __future__ import annotations

from math import cos, inf, log10, pi, sqrt

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from filtercheck.network.curve import Curve
from filtercheck.network.ratio import Ratio
from filtercheck.network.response import Response, product

Real = NDArray[np.float64]


def second_order(f0_hz: float, q: float, zero: tuple[float, float] | None = None) -> Response:
    """Return a low-pass section, or one with a zero pair at f_z (in f0) of damping d."""
    if zero is None:
        numerator = np.array([1.0])
    else:
        place, damping = zero
        numerator = np.array([place**2, 2 * damping * place, 1.0])
    denominator = np.array([1.0, 1 / q, 1.0])
    return Response((Ratio(numerator, denominator, 0, 0, 2 * pi * f0_hz),))


def one_pole(f0_hz: float, *, high: bool = False) -> Response:
    ones = np.array([1.0, 1.0])
    return Response((Ratio(np.array([1.0]), ones, int(high), 0, 2 * pi * f0_hz),))


@pytest.mark.parametrize("q", [0.75, 5.0, 100.0, 1e4, 1e6])
@pytest.mark.parametrize("f0_hz", [0.317, 1234.5678, 9.87e6])
def test_a_resonance_is_found_however_narrow(q: float, f0_hz: float) -> None:
    curve = Curve(second_order(f0_hz, q))
    peak = curve.highest((f0_hz / 1e4, f0_hz * 1e4))

    # |H| is largest at f0 sqrt(1 - 1/(2 Q^2)), where it is Q/sqrt(1 - 1/(4 Q^2)).
    height_db = 20 * log10(q / sqrt(1 - 1 / (4 * q * q)))
    assert peak.gain_db == pytest.approx(height_db, abs=1e-6)
    assert peak.freq_hz == pytest.approx(f0_hz * sqrt(1 - 1 / (2 * q * q)), rel=1e-6)


@pytest.mark.parametrize("q", [0.3, 0.51, 0.70])
def test_below_half_power_damping_there_is_no_peak(q: float) -> None:
    # |H|^2 = 1/((1 - x^2)^2 + (x/Q)^2) falls everywhere while Q < 1/sqrt(2).
    band = (123.0, 45e3)
    curve = Curve(second_order(1e3, q))

    def height_db(x: float) -> float:
        return -10 * log10((1 - x * x) ** 2 + (x / q) ** 2)

    assert curve.highest(band).freq_hz == band[0]
    assert curve.highest(band).gain_db == pytest.approx(height_db(0.123), abs=1e-12)
    assert curve.lowest(band).freq_hz == band[1]
    assert curve.lowest(band).gain_db == pytest.approx(height_db(45.0), abs=1e-12)


def test_no_grid_of_the_usual_kind_would_have_found_it() -> None:
    response = second_order(1234.5678, 1e4)
    grid = np.geomspace(1.0, 1e6, 2001)

    assert response.gain_db(grid).max() < Curve(response).highest().gain_db - 20


sections = st.lists(
    st.builds(
        second_order,
        st.floats(10.0, 1e5),
        st.floats(0.3, 1e4),
        st.one_of(
            st.none(),
            st.tuples(st.floats(0.2, 5.0), st.one_of(st.just(0.0), st.floats(1e-4, 2.0))),
        ),
    ),
    min_size=1,
    max_size=4,
)


def graded(response: Response, low_hz: float, high_hz: float) -> Real:
    """Return a dense grid that closes in on every root, whatever its Q."""
    roots = np.concatenate([response.poles, response.zeros])
    steps = np.concatenate([[0.0], np.geomspace(1e-8, 3.0, 160)])
    around = [
        abs(r) / (2 * pi) * np.exp(sign * steps * max(1e-3, abs(r.real / r)))
        for r in roots
        for sign in (-1, 1)
    ]
    whole = np.concatenate([*around, np.geomspace(max(low_hz, 1e-3), min(high_hz, 1e9), 3000)])
    return np.asarray(whole[(whole >= low_hz) & (whole <= high_hz)])


def off_nulls(response: Response, freq_hz: Real) -> Real:
    """Return the frequencies that are not at a perfect null: there the gain has no floor, and
    which of two neighbouring floats lies lower is chance."""
    nulls = [abs(z) / (2 * pi) for z in response.zeros if abs(z.real) < 1e-12 * abs(z)]
    near = [np.abs(freq_hz / null - 1) < 1e-11 for null in nulls]
    return np.asarray(freq_hz[~np.any(near, axis=0)] if near else freq_hz)


@settings(max_examples=150, deadline=None)
@given(sections, st.floats(1.0, 1e4), st.floats(1.1, 1e4), st.booleans(), st.booleans())
def test_nothing_lies_beyond_the_extremes(
    parts: list[Response], low_hz: float, span: float, from_zero: bool, open_end: bool
) -> None:
    response = product(parts)
    band = (0.0 if from_zero else low_hz, inf if open_end else low_hz * span)
    curve = Curve(response)
    freq_hz = graded(response, *band)
    gain_db = response.gain_db(off_nulls(response, freq_hz))

    assert response.gain_db(freq_hz).max() <= curve.highest(band).gain_db + 1e-9
    assert gain_db.min(initial=inf) >= curve.lowest(band).gain_db - 1e-9


def multiplied(parts: list[Response]) -> Response:
    """Return the same response as one ratio: its roots must be found among each other."""
    numerator, denominator = np.ones(1), np.ones(1)
    for part in parts:
        (one,) = part.factors
        moved = (1e3 * 2 * pi / one.omega0) ** np.arange(3)
        numerator = np.convolve(numerator, one.numerator * moved[: len(one.numerator)])
        denominator = np.convolve(denominator, one.denominator * moved)
    return Response((Ratio(numerator, denominator, 0, 0, 1e3 * 2 * pi),))


# Right half-plane zeros as well; zeros on the axis are tried above, in factors of their own.
whole = st.lists(
    st.builds(
        second_order,
        st.floats(30.0, 3e4),
        st.floats(0.3, 300.0),
        st.one_of(
            st.none(),
            st.tuples(st.floats(0.2, 5.0), st.floats(1e-2, 2.0).map(lambda d: d - 1.0)).filter(
                lambda zero: abs(zero[1]) > 1e-3
            ),
        ),
    ),
    min_size=1,
    max_size=3,
)


@settings(max_examples=150, deadline=None)
@given(whole)
def test_nothing_lies_beyond_the_extremes_of_one_high_ratio(parts: list[Response]) -> None:
    response = multiplied(parts)
    band = (1.0, 1e6)
    freq_hz = graded(response, *band)
    apart = product(parts).gain_db(freq_hz)
    curve = Curve(response)

    # The same response in factors is the reference. Where three resonances of Q = 300 coincide,
    # a part in 1e16 of the coefficients is 1e-6 dB: 8.7 * 1e-16 * 300^3, times a few roundings.
    assert apart.max() <= curve.highest(band).gain_db + 1e-6
    assert apart.min() >= curve.lowest(band).gain_db - 1e-6
    np.testing.assert_allclose(response.gain_db(freq_hz), apart, rtol=0, atol=1e-6)


@pytest.mark.parametrize("ahead", [1e-2, 1e-6, 1e-9])
def test_a_perfect_null_is_found_next_to_the_end_of_a_band(ahead: float) -> None:
    curve = Curve(second_order(1e3, 2.0, zero=(1.0, 0.0)))

    assert curve.lowest((10.0, 1e3 * (1 + ahead))).gain_db < -200
    assert curve.lowest((1e3 * (1 - ahead), inf)).gain_db < -200
    assert curve.lowest((1e3 * (1 + ahead), inf)).gain_db > 20 * log10(ahead)


@settings(max_examples=80, deadline=None)
@given(sections, st.floats(-60.0, 60.0))
def test_a_sloped_line_is_approached_nowhere_nearer(parts: list[Response], line: float) -> None:
    response = product(parts)
    band = (5.0, 2e5)
    curve = Curve(response)

    def above(freq_hz: Real) -> Real:
        return np.asarray(response.gain_db(freq_hz) - line * np.log(freq_hz))

    nearest = above(curve.candidates_hz(band, line))
    freq_hz = graded(response, *band)
    assert above(freq_hz).max() <= nearest.max() + 1e-9
    assert above(off_nulls(response, freq_hz)).min() >= nearest.min() - 1e-9


@pytest.mark.parametrize("fall_db", [0.01, 3.0, 60.0])
def test_corners_of_one_pole(fall_db: float) -> None:
    # By hand: |H|^2 = 1/(1 + x^2), which has fallen by d dB at x = sqrt(10^(d/10) - 1).
    x = sqrt(10 ** (fall_db / 10) - 1)

    down = Curve(one_pole(1e3)).fall_hz(0.0, -fall_db, upward=True)
    up = Curve(one_pole(1e3, high=True)).fall_hz(inf, -fall_db, upward=False)

    assert down == pytest.approx(1e3 * x, rel=1e-10)
    assert up == pytest.approx(1e3 / x, rel=1e-10)


@pytest.mark.parametrize("order", range(1, 11))
@pytest.mark.parametrize("fall_db", [0.5, 3.0, 80.0])
def test_corners_of_butterworth_responses(order: int, fall_db: float) -> None:
    # By formula: |H|^2 = 1/(1 + x^2n) has fallen by d dB at x = (10^(d/10) - 1)^(1/2n); the
    # pole pairs have Q = 1/(2 cos a), a = pi (2 k + 1 - n % 2)/(2 n) off the real axis.
    x = (10 ** (fall_db / 10) - 1) ** (1 / (2 * order))
    angles = [pi * (2 * k + 1 + order % 2) / (2 * order) for k in range(order // 2)]
    pairs = [second_order(1e3, 1 / (2 * cos(a))) for a in angles]
    low = product([*pairs, *([one_pole(1e3)] if order % 2 else [])])

    down = Curve(low).fall_hz(0.0, -fall_db, upward=True)
    inside = Curve(low).fall_hz(1e3 * x / 7, low.gain_db(np.zeros(1))[0] - fall_db, upward=True)
    assert down == pytest.approx(1e3 * x, rel=1e-10)
    assert inside == pytest.approx(1e3 * x, rel=1e-10)


def band_pass(f0_hz: float, q: float) -> Response:
    ratio = Ratio(np.array([1 / q]), np.array([1.0, 1 / q, 1.0]), 1, 0, 2 * pi * f0_hz)
    return Response((ratio,))


@pytest.mark.parametrize("q", [0.2, 3.0, 1e4])
@pytest.mark.parametrize("fall_db", [0.1, 3.0102999566398, 40.0])
def test_corners_of_a_band_pass_to_both_sides(q: float, fall_db: float) -> None:
    # By hand: |H|^2 = 1/(1 + (Q (x - 1/x))^2); with b = sqrt(10^(d/10) - 1)/Q the corners are
    # at x = sqrt(1 + b^2/4) -+ b/2, whose product is 1.
    b = sqrt(10 ** (fall_db / 10) - 1) / q
    upper = sqrt(1 + b * b / 4) + b / 2
    curve = Curve(band_pass(777.0, q))
    peak = curve.highest()

    assert peak.freq_hz == pytest.approx(777.0, rel=1e-7)
    below = curve.fall_hz(peak.freq_hz, -fall_db, upward=False)
    above = curve.fall_hz(peak.freq_hz, -fall_db, upward=True)
    assert below == pytest.approx(777.0 / upper, rel=1e-10)
    assert above == pytest.approx(777.0 * upper, rel=1e-10)


def test_a_start_that_has_fallen_already_is_the_corner() -> None:
    curve = Curve(one_pole(1e3))

    assert curve.fall_hz(5e3, -3.0, upward=True) == 5e3
    assert curve.fall_hz(5e3, -3.0, upward=False) == 5e3


@pytest.mark.parametrize("upward", [True, False])
def test_the_level_of_an_asymptote_is_never_reached_far_away(upward: bool) -> None:
    # Two shelves that fall from 1 to 0.18 each: the level itself is the limit at infinity.
    top, bottom = np.array([1.0, 0.9, 0.18]), np.array([1.0, 1.1, 1.0])
    curve = Curve(Response(tuple(Ratio(top, bottom, 0, 0, 2 * pi * f) for f in (1e4, 100.0))))
    end_db = curve.gain_db(inf)

    for level_db in (end_db, np.nextafter(end_db, inf), np.nextafter(end_db, -inf)):
        found = curve.fall_hz(10.0, level_db, upward=upward)
        assert found is None or 10.0 < found < 1e21


def test_corners_that_do_not_exist() -> None:
    low, high = Curve(one_pole(1e3)), Curve(one_pole(1e3, high=True))

    assert low.fall_hz(10.0, -3.0, upward=False) is None
    assert high.fall_hz(10e3, -3.0, upward=True) is None


def test_the_first_crossing_counts() -> None:
    # A null at twice the pole frequency: the gain falls to it and rises again beyond.
    response = second_order(1e3, 5.0, zero=(2.0, 0.0))
    crossing = Curve(response).fall_hz(0.0, response.gain_db(np.zeros(1))[0] - 20, upward=True)

    assert crossing is not None
    assert 1e3 < crossing < 2e3
    fine = response.gain_db(np.linspace(1.0, crossing * (1 - 1e-9), 20000))
    assert (fine > response.gain_db(np.zeros(1))[0] - 20).all()


def test_ends_of_the_axis() -> None:
    freq_hz = np.array([0.0, inf])

    np.testing.assert_array_equal(one_pole(1e3).gain_db(freq_hz), [0.0, -inf])
    np.testing.assert_array_equal(one_pole(1e3, high=True).gain_db(freq_hz), [-inf, 0.0])
    notch = second_order(1e3, 1.0, zero=(2.0, 0.0)).gain_db(freq_hz)
    np.testing.assert_allclose(notch, [20 * log10(4.0), 0.0], atol=1e-12)


@pytest.mark.parametrize("seed", range(20))
def test_the_gain_of_a_product_is_right_over_any_span(seed: int) -> None:
    rng = np.random.default_rng(seed)
    factors = [
        Ratio(
            rng.uniform(0.5, 2.0, rng.integers(1, 4)) * rng.choice([-1.0, 1.0]),
            rng.uniform(0.5, 2.0, rng.integers(1, 5)),
            int(rng.integers(-2, 3)),
            0,
            10 ** rng.uniform(-3, 9),
        )
        for _ in range(3)
    ]
    freq_hz = np.geomspace(1e-6, 1e12, 37)
    got = Response(tuple(factors)).gain_db(freq_hz)

    def exact_db(f: float) -> float:
        total = mpmath.mpf(0)
        for one in factors:
            x = 2j * mpmath.pi * mpmath.mpf(f) / mpmath.mpf(one.omega0)
            top = sum(mpmath.mpf(c) * x**k for k, c in enumerate(one.numerator))
            bottom = sum(mpmath.mpf(c) * x**k for k, c in enumerate(one.denominator))
            total += 20 * mpmath.log10(abs(x**one.order * top / bottom))
        return float(total)

    with mpmath.workdps(40):
        want = [exact_db(f) for f in freq_hz]
    np.testing.assert_allclose(got, want, rtol=0, atol=1e-9)


def test_zeros_and_poles_at_0_hz_of_different_factors_cancel() -> None:
    # By hand: (s/a)/(1 + s/a) times 3 (1 + s/b)/(s/b) is 3 b/a at 0 Hz and 3 at infinity.
    rise = Ratio(np.array([1.0]), np.array([1.0, 1.0]), 1, 0, 2 * pi * 1e3)
    fall = Ratio(np.array([3.0, 3.0]), np.array([1.0]), -1, 1, 2 * pi * 5e3)

    ends = Response((rise, fall)).gain_db(np.array([0.0, inf]))
    np.testing.assert_allclose(ends, [20 * log10(15.0), 20 * log10(3.0)], rtol=0, atol=1e-12)
    assert Response((fall,)).gain_db(np.zeros(1))[0] == inf


def test_a_response_of_zero_is_nothing_at_all() -> None:
    curve = Curve(Response((Ratio(np.zeros(1), np.array([1.0, 1.0]), 0, 0, 1.0),)))

    assert curve.highest().gain_db == -inf
    assert curve.lowest().gain_db == -inf
    assert curve.gain_db(inf) == -inf
    assert curve.fall_hz(10.0, -3.0, upward=True) == 10.0


def test_a_flat_response_has_no_turns() -> None:
    flat = Response((Ratio(np.array([3.0]), np.array([1.0]), 0, 0, 1.0),))
    curve = Curve(flat)

    assert list(curve.candidates_hz((0.0, inf))) == [0.0, inf]
    assert curve.highest().gain_db == pytest.approx(20 * log10(3.0))
    assert curve.lowest().gain_db == pytest.approx(20 * log10(3.0))


def test_an_all_pass_is_flat_to_rounding() -> None:
    wide = Ratio(np.array([1.0, -0.2, 1.0]), np.array([1.0, 0.2, 1.0]), 0, 0, 2 * pi * 1e3)
    curve = Curve(Response((wide,)))

    assert abs(curve.highest().gain_db) < 1e-12
    assert abs(curve.lowest().gain_db) < 1e-12


def test_phase_is_continuous_and_ends_where_it_must() -> None:
    response = product([second_order(1e3, 0.6), second_order(2e3, 3.0), one_pole(700.0)])
    freq_hz = np.geomspace(1e-3, 1e9, 200_001)
    phase = response.phase_deg(freq_hz)

    assert np.abs(np.diff(phase)).max() < 1.0
    assert phase[0] == pytest.approx(0.0, abs=1e-3)
    assert phase[-1] == pytest.approx(-450.0, abs=1e-3)  # five poles, 90 degrees each
    # One point alone has the same phase as within a sweep.
    assert response.phase_deg(freq_hz[-1:])[0] == phase[-1]


def test_phase_of_an_inverting_response_is_continuous_from_180_degrees() -> None:
    low = second_order(1e3, 5.0).factors[0]
    inverting = Response((Ratio(-low.numerator, low.denominator, 0, 0, low.omega0),))
    freq_hz = np.geomspace(1e-3, 1e9, 100_001)
    phase = product([inverting, one_pole(3e3)]).phase_deg(freq_hz)

    assert np.abs(np.diff(phase)).max() < 1.0
    assert phase[0] == pytest.approx(180.0, abs=1e-3)
    assert phase[-1] == pytest.approx(180.0 - 270.0, abs=1e-3)


def phase_deg(f0_hz: float, q: float, zero: tuple[float, float] | None, freq_hz: Real) -> Real:
    """Return the phase of `second_order` by hand: each pair turns by 180 degrees in all, up for
    zeros in the left half-plane, down for poles and for zeros in the right one."""
    x = freq_hz / f0_hz
    turned = -np.arctan2(x / q, 1 - x * x)
    if zero is not None:
        place, damping = zero
        turned += np.copysign(np.arctan2(abs(2 * damping * place) * x, place**2 - x * x), damping)
    return np.asarray(np.degrees(turned))


kinds = st.tuples(
    st.floats(10.0, 1e5),
    st.floats(0.3, 1e3),
    st.one_of(
        st.none(),
        st.tuples(
            st.floats(0.2, 5.0), st.floats(1e-3, 2.0).flatmap(lambda d: st.sampled_from([d, -d]))
        ),
    ),
)


@settings(max_examples=100, deadline=None)
@given(st.lists(kinds, min_size=1, max_size=4))
def test_phase_is_the_sum_of_what_the_roots_turn(
    parts: list[tuple[float, float, tuple[float, float] | None]],
) -> None:
    freq_hz = np.geomspace(1e-2, 1e8, 301)
    response = product([second_order(*part) for part in parts])

    want = np.sum([phase_deg(*part, freq_hz) for part in parts], axis=0)
    np.testing.assert_allclose(response.phase_deg(freq_hz), want, rtol=0, atol=1e-7)


@pytest.mark.parametrize("count", [3, 6, 10])
def test_phase_of_one_ratio_goes_round_more_than_once(count: int) -> None:
    # By hand: prod (1 - s/w_k)/(1 + s/w_k) turns by -2 atan(w/w_k) for each k, 1800 degrees in
    # all with ten of them.
    corners = 2.0 ** np.arange(count)
    numerator, denominator = np.ones(1), np.ones(1)
    for corner in corners:
        numerator = np.convolve(numerator, [1, -1 / corner])
        denominator = np.convolve(denominator, [1, 1 / corner])
    all_pass = Response((Ratio(numerator, denominator, 0, 0, 1.0),))
    omega = np.geomspace(1e-3, 1e6, 181)

    want = -2 * np.degrees(np.arctan(omega[:, None] / corners)).sum(axis=1)
    got = all_pass.phase_deg(omega / (2 * pi))
    np.testing.assert_allclose(got, want, rtol=0, atol=1e-7)
    assert want[-1] < -180 * count + 1


def test_group_delay_is_minus_the_derivative_of_the_phase() -> None:
    response = product([second_order(1e3, 8.0), one_pole(500.0, high=True)])

    def phase(omega: mpmath.mpf) -> mpmath.mpf:
        s = mpmath.mpc(0, omega) / (2 * mpmath.pi)
        low = 1 / (1 + s / 8000 + (s / 1000) ** 2)
        return mpmath.arg(low * (s / 500) / (1 + s / 500))

    for f in (10.0, 900.0, 1000.0, 5000.0):
        with mpmath.workdps(40):
            want = -mpmath.diff(phase, 2 * mpmath.pi * f)
        assert response.group_delay_s(np.array([f]))[0] == pytest.approx(float(want), rel=1e-9)


def test_group_delay_at_0_hz_of_a_high_pass_is_finite() -> None:
    # By hand: the phase is 90 degrees - atan(f/fc), whose delay at 0 Hz is 1/(2 pi fc).
    delay = one_pole(100.0, high=True).group_delay_s(np.zeros(1))[0]

    assert delay == pytest.approx(1 / (2 * pi * 100.0), rel=1e-12)
