"""The shift of f0 and Q by finite gain-bandwidth against first-order theory.

With eps = f0/GBW and A(s) = 2 pi GBW/s in every op-amp the relative shifts are polynomials in
eps; the formulas in `tests/reference/gbw_first_order.yaml` are their first-order terms. What is
left must fall with the square of eps.
"""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import yaml

from filtercheck.circuits import CIRCUITS
from filtercheck.network.elements import Amplifier, Capacitor, Element, Network, Resistor
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response
from filtercheck.network.stability import instability

REFERENCE = Path(__file__).parent.parent / "reference" / "gbw_first_order.yaml"
READ: dict[str, dict[str, Any]] = yaml.safe_load(REFERENCE.read_text("utf-8"))
FORMULAS = READ["formulas"]

Values = dict[str, float]
TOW_THOMAS: tuple[Element, ...] = (
    Resistor("Rin", "in", "m1"),
    Resistor("Rq", "bp", "m1"),
    Capacitor("C1", "bp", "m1"),
    Resistor("R3", "lp", "m1"),
    Amplifier("U1", "ground", "m1", "bp", finite_gain=False),
    Resistor("R4", "bp", "m2"),
    Capacitor("C2", "m2", "i"),
    Amplifier("U2", "ground", "m2", "i", finite_gain=False),
    Resistor("R5", "i", "m3"),
    Resistor("R6", "lp", "m3"),
    Amplifier("U3", "ground", "m3", "lp", finite_gain=False),
)


def known(name: str, *left_out: str) -> tuple[Element, ...]:
    circuit = CIRCUITS[name]
    given = [role for role in circuit.roles if role not in (*left_out, "Rb", "Rb1", "Rb2")]
    return tuple(
        Amplifier(e.name, e.plus, e.minus, e.out, finite_gain=False)
        if isinstance(e, Amplifier)
        else e
        for e in circuit.fitted(given)
    )


# For each topology its elements and, for w0 = 1 rad/s and a Q, the values that are not 1 ohm or
# 1 F: the usual design equations (common practice, no source).
DESIGNS: dict[str, tuple[tuple[Element, ...], Callable[[float], Values]]] = {
    "state-variable": (known("state-variable"), lambda q: {"Rbp": 3 * q - 1}),
    "state-variable-noninverting": (
        known("state-variable-noninverting", "Rg"),
        lambda q: {"Rbp": 2 * q - 1},
    ),
    "tow-thomas": (TOW_THOMAS, lambda q: {"Rq": q, "Rin": q}),
    "sallen-key-unity": (
        known("sallen-key-lowpass", "Rf", "Rg"),
        lambda q: {"C1": 2 * q, "C2": 1 / (2 * q)},
    ),
    "sallen-key-equal": (known("sallen-key-lowpass"), lambda q: {"Rf": 2 - 1 / q}),
    "multiple-feedback-lowpass": (
        known("multiple-feedback-lowpass"),
        lambda q: {"C1": 3 * q, "C2": 1 / (3 * q)},
    ),
    "multiple-feedback-bandpass": (
        known("multiple-feedback-bandpass", "Rg"),
        lambda q: {"R2": 2 * q, "Rin": 1 / (2 * q)},
    ),
    "multiple-feedback-bandpass-divided": (
        known("multiple-feedback-bandpass"),
        lambda q: {"R2": 2 * q, "Rin": q, "Rg": 1 / (2 * q - 1 / q)},
    ),
}


def with_bandwidth(elements: tuple[Element, ...], value: Values, eps: float) -> Response:
    """Return 1 as N/D with the poles of these elements, GBW = w0/eps in every op-amp."""
    functions = network_functions(Network(elements))
    values = {}
    for symbol in functions.denominator.symbols:
        number = value.get(symbol.element, 1.0)
        values[symbol] = {"conductance": 1 / number, "inverse bandwidth": eps}.get(
            symbol.kind, number
        )
    return Response((ratio(functions.denominator, functions.denominator, values),))


def pole_pair(elements: tuple[Element, ...], value: Values, eps: float) -> tuple[float, float]:
    """Return w0 and Q of the pole pair next to w = 1."""
    poles = with_bandwidth(elements, value, eps).poles
    pair = min((p for p in poles if p.imag > 0), key=lambda p: abs(abs(p) - 1) + abs(p.imag - 1))
    return abs(pair), abs(pair) / (-2 * pair.real)


def shift(formula: str, q: float, noise_gain: float = 3.0) -> float:
    """Return a formula of the reference file: arithmetic in Q, and in N where it holds for any."""
    scope = {"__builtins__": {}, "Q": q, "N": noise_gain}
    return float(eval(formula, scope))  # noqa: S307  (written in the tests' own reference file)


def check_first_order(
    elements: tuple[Element, ...], value: Values, q: float, shift_f0: float, shift_q: float
) -> None:
    """Assert that what the first-order shifts leave falls with the square of eps."""
    steps = [1e-4 / q, 0.5e-4 / q]
    left: list[tuple[float, float]] = []
    for eps in steps:
        w0, q_is = pole_pair(elements, value, eps)
        left.append((w0 - 1 - shift_f0 * eps, q_is / q - 1 - shift_q * eps))
    for before, after in zip(*left, strict=True):
        # Second order: halving eps leaves a quarter; 1e-13 is what rounding leaves.
        assert abs(after - before / 4) <= 0.02 * abs(before) + 1e-13
        assert abs(before) <= 100 * (q * steps[0]) ** 2


@pytest.mark.parametrize("topology", DESIGNS)
@pytest.mark.parametrize("q", [0.8, 1.5, 5.0, 20.0])
def test_what_first_order_leaves_falls_with_the_square(topology: str, q: float) -> None:
    elements, design = DESIGNS[topology]
    shift_f0, shift_q = (shift(FORMULAS[topology][key], q) for key in ("df0", "dQ"))
    check_first_order(elements, design(q), q, shift_f0, shift_q)


@pytest.mark.parametrize("noise_gain", [2.25, 3.0, 6.0])
@pytest.mark.parametrize("q", [0.8, 1.5, 5.0, 20.0])
def test_the_noise_gain_of_the_summing_amplifier_sets_the_shift(
    noise_gain: float, q: float
) -> None:
    # By hand, with Rhp = Rlp = 1: N = 2 + 1/Rin, and the damping N Rg/(Rg + Rbp) is 1/Q.
    value = {"Rin": 1 / (noise_gain - 2), "Rbp": noise_gain * q - 1}
    shift_f0, shift_q = (shift(READ["noise_gain"][key], q, noise_gain) for key in ("df0", "dQ"))
    check_first_order(known("state-variable"), value, q, shift_f0, shift_q)


@pytest.mark.parametrize(("topology", "slope"), READ["reciprocal"].items())
@pytest.mark.parametrize("q", [10.0, 20.0])
@pytest.mark.parametrize("product", [0.1, 0.3, 0.5])
def test_q_rises_as_the_reciprocal(topology: str, slope: float, q: float, product: float) -> None:
    elements, design = DESIGNS[topology]
    _, raised = pole_pair(elements, design(q), product / (slope * q))

    assert raised == pytest.approx(q / (1 - product), rel=0.02)


@pytest.mark.parametrize("topology", READ["reciprocal"])
def test_a_two_integrator_loop_of_too_slow_op_amps_oscillates(topology: str) -> None:
    elements, design = DESIGNS[topology]
    q, eps = READ["oscillating"]["Q"], READ["oscillating"]["eps"]

    found = instability(with_bandwidth(elements, design(q), eps))
    assert found is not None
    assert found.certain
    assert instability(with_bandwidth(elements, design(q), eps / 10)) is None


def test_at_eps_0_the_designs_are_what_they_claim() -> None:
    for topology in DESIGNS:
        elements, design = DESIGNS[topology]
        w0, q = pole_pair(elements, design(5.0), 1e-12)
        assert w0 == pytest.approx(1, rel=1e-10)
        assert q == pytest.approx(5, rel=1e-9)


def test_every_formula_is_used() -> None:
    assert set(FORMULAS) == set(DESIGNS)
