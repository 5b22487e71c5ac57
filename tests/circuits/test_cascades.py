"""Cascades of state-variable and one-pole sections against the prototypes of scipy.signal.

Facts of the trade, common practice without a source: in the normalised state-variable section
(all resistors 1 ohm, capacitors 1 F) a damping resistor of 3 Q - 1 gives Q; a one-pole section
makes a real pole.
"""

from __future__ import annotations

from collections.abc import Callable
from math import factorial

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import signal

from filtercheck.circuits import CIRCUITS
from filtercheck.network.elements import Amplifier, Network
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response, product

Complex = NDArray[np.complex128]
OMEGA = np.geomspace(1e-3, 1e3, 601)  # [rad/s], in corners


def section(circuit: str, output: str, value: dict[str, float]) -> Response:
    """Return a section with ideal amplifiers; parts that are not named are 1 ohm or 1 F."""
    known = CIRCUITS[circuit]
    elements = tuple(
        Amplifier(e.name, e.plus, e.minus, e.out, finite_gain=False, finite_bandwidth=False)
        if isinstance(e, Amplifier)
        else e
        for e in known.fitted([r for r in known.roles if r not in known.optional])
    )
    functions = network_functions(Network(elements))
    values = {
        s: 1.0 / value.get(s.element, 1.0) if s.kind == "conductance" else value.get(s.element, 1.0)
        for s in functions.denominator.symbols
    }
    numerator = functions.numerators[known.outputs[output]]
    return Response((ratio(numerator, functions.denominator, values),))


def state_variable(output: str, q: float, w0: float = 1.0) -> Response:
    return section("state-variable", output, {"Rbp": 3 * q - 1, "R1": 1 / w0, "R2": 1 / w0})


def cascade(poles: Complex) -> Response:
    """Return a low-pass with these poles, a section for each pair and each real pole."""
    sections = []
    for pole in poles[poles.imag >= -1e-9]:
        if abs(pole.imag) < 1e-9 * abs(pole):
            sections.append(section("one-pole-lowpass", "lowpass", {"R": 1 / abs(pole)}))
        else:
            sections.append(state_variable("lowpass", abs(pole) / (-2 * pole.real), abs(pole)))
    return product(sections)


def reference_db(poles: Complex) -> NDArray[np.float64]:
    """Return prod |p| / prod |jw - p|, which is 0 dB at w = 0."""
    ratio_of_each = np.abs(1j * OMEGA[:, None] - poles) / np.abs(poles)
    return np.asarray(-20 * np.log10(ratio_of_each).sum(axis=1))


def test_second_order_sections_have_q_and_the_gains_of_the_trade() -> None:
    for q in (0.5, 1 / np.sqrt(2), 1.0, 5.0, 40.0):
        far, centre = np.array([0.0, np.inf]), np.array([1 / (2 * np.pi)])
        assert state_variable("lowpass", q).gain_db(far)[0] == pytest.approx(0, abs=1e-12)
        assert state_variable("highpass", q).gain_db(far)[1] == pytest.approx(0, abs=1e-12)
        assert state_variable("lowpass", q).phase_deg(far[:1])[0] == pytest.approx(180)
        bandpass = state_variable("bandpass", q).gain_db(centre)[0]
        assert bandpass == pytest.approx(20 * np.log10(q), abs=1e-11)
        (pole, _) = state_variable("lowpass", q).poles
        assert abs(pole) == pytest.approx(1, rel=1e-12)
        if q > 0.5:
            assert abs(pole) / (-2 * pole.real) == pytest.approx(q, rel=1e-12)


def test_third_order_butterworth_is_one_pole_and_a_section_of_q_1() -> None:
    built = product([section("one-pole-lowpass", "lowpass", {}), state_variable("lowpass", 1.0)])

    # |H|^2 = 1/(1 + w^6), the definition of a Butterworth response.
    want = -10 * np.log10(1 + OMEGA**6)
    np.testing.assert_allclose(built.gain_db(OMEGA / (2 * np.pi)), want, rtol=0, atol=1e-9)


@pytest.mark.parametrize(
    ("prototype", "order"),
    [
        *((signal.buttap, n) for n in range(1, 11)),
        *((lambda n: signal.cheb1ap(n, 0.1), n) for n in range(2, 9)),
        *((lambda n: signal.cheb1ap(n, 1.0), n) for n in range(2, 9)),
        *((signal.besselap, n) for n in range(2, 9)),
    ],
)
def test_cascades_reproduce_the_prototypes(
    prototype: Callable[[int], tuple[Complex, Complex, float]], order: int
) -> None:
    _, poles, _ = prototype(order)
    built = cascade(np.asarray(poles))

    assert len(built.poles) == order
    got = built.gain_db(OMEGA / (2 * np.pi))
    np.testing.assert_allclose(got, reference_db(np.asarray(poles)), rtol=0, atol=1e-9)


def test_resistors_and_capacitors_move_the_frequency_alike() -> None:
    by_resistors = state_variable("lowpass", 5.0, 2.0)
    halved = {"Rbp": 3 * 5.0 - 1, "C1": 0.5, "C2": 0.5}
    by_capacitors = section("state-variable", "lowpass", halved)
    freq_hz = OMEGA / (2 * np.pi)

    np.testing.assert_allclose(
        by_capacitors.gain_db(freq_hz), by_resistors.gain_db(freq_hz), rtol=0, atol=1e-9
    )


@pytest.mark.parametrize("order", range(1, 11))
def test_butterworth_high_pass_mirrors_the_low_pass(order: int) -> None:
    _, poles, _ = signal.buttap(order)
    sections = [state_variable("highpass", 1 / (-2 * p.real)) for p in poles if p.imag > 1e-9]
    if order % 2:
        sections.append(section("one-pole-highpass", "highpass", {}))
    built = product(sections)

    # |H|^2 = w^2n/(1 + w^2n), the definition of a Butterworth response.
    want = -10 * np.log10(1 + OMEGA ** (-2.0 * order))
    np.testing.assert_allclose(built.gain_db(OMEGA / (2 * np.pi)), want, rtol=0, atol=1e-9)


@pytest.mark.parametrize("order", range(1, 9))
def test_bessel_cascades_have_the_flattest_delay(order: int) -> None:
    # By hand from H = B(0)/B(s) with the reverse Bessel polynomial B: the delay of the phase is
    # 1 - w^2n/|B(jw)|^2 seconds; for n = 2, B = s^2 + 3 s + 3, it is (9 + 3 w^2)/(9 + 3 w^2 + w^4).
    _, poles, _ = signal.besselap(order, norm="delay")
    built = cascade(np.asarray(poles))
    bessel = [
        factorial(2 * order - k) / (2 ** (order - k) * factorial(k) * factorial(order - k))
        for k in range(order, -1, -1)
    ]
    omega = np.geomspace(1e-3, 1e2, 301)

    want = 1 - omega ** (2.0 * order) / np.abs(np.polyval(bessel, 1j * omega)) ** 2
    got = built.group_delay_s(omega / (2 * np.pi))
    np.testing.assert_allclose(got, want, rtol=1e-9, atol=1e-12)
