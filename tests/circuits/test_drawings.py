"""Every circuit against an independent nodal solution of its drawing.

The drawings are typed here once more, from the modules' docstrings, as lists of elements
between nodes; the solver below shares nothing with the program and works with 50 digits.
"""

from __future__ import annotations

import random
from collections.abc import Iterator
from dataclasses import replace
from itertools import combinations

import mpmath
import numpy as np
import pytest

from filtercheck.circuits import CIRCUITS
from filtercheck.network.elements import Amplifier, Network, Symbol, symbols
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response

# Kind, role and nodes; for an op-amp (U) the nodes are +, -, output. "0" is ground.
TWO_INTEGRATORS = """
R R1 hp m1 | C C1 m1 bp | U A1 p1 m1 bp | R Rb1 p1 0
R R2 bp m2 | C C2 m2 lp | U A2 p2 m2 lp | R Rb2 p2 0
"""
DRAWINGS: dict[str, tuple[str, dict[str, str]]] = {
    "state-variable": (
        "R Rin in s | R Rhp hp s | R Rlp lp s | R Rbp bp t | R Rg t 0 | U A0 t s hp |"
        + TWO_INTEGRATORS,
        {"highpass": "hp", "bandpass": "bp", "lowpass": "lp"},
    ),
    "state-variable-noninverting": (
        "R Rin in t | R Rbp bp t | R Rg t 0 | R Rhp hp s | R Rlp lp s | U A0 t s hp |"
        + TWO_INTEGRATORS,
        {"highpass": "hp", "bandpass": "bp", "lowpass": "lp"},
    ),
    "one-pole-lowpass": ("R R in p | C C p 0 | U A p o o", {"lowpass": "o"}),
    "one-pole-highpass": ("C C in p | R R p 0 | U A p o o", {"highpass": "o"}),
    "one-pole-lowpass-inverting": (
        "R Rin in m | R Rf m o | C C m o | U A p m o | R Rb p 0",
        {"lowpass": "o"},
    ),
    "one-pole-highpass-inverting": (
        "C C in x | R Rin x m | R Rf m o | U A p m o | R Rb p 0",
        {"highpass": "o"},
    ),
    "passive-lowpass": ("R R in o | C C o 0", {"lowpass": "o"}),
    "passive-highpass": ("C C in o | R R o 0", {"highpass": "o"}),
    "unity-gain": ("U A in o o", {"out": "o"}),
    "inverting-gain": ("R Rin in m | R Rf m o | U A p m o | R Rb p 0", {"out": "o"}),
    "noninverting-gain": ("R Rg m 0 | R Rf m o | U A in m o", {"out": "o"}),
    "sallen-key-lowpass": (
        "R R1 in x | R R2 x p | C C1 x o | C C2 p 0 | U A p m o | R Rf o m | R Rg m 0",
        {"lowpass": "o"},
    ),
    "sallen-key-highpass": (
        "C C1 in x | C C2 x p | R R1 x o | R R2 p 0 | U A p m o | R Rf o m | R Rg m 0",
        {"highpass": "o"},
    ),
    "multiple-feedback-lowpass": (
        "R Rin in x | R Rf x o | C C1 x 0 | R R2 x m | C C2 m o | U A p m o | R Rb p 0",
        {"lowpass": "o"},
    ),
    "multiple-feedback-highpass": (
        "C Cin in x | C Cf x o | R R1 x 0 | C C2 x m | R R2 m o | U A p m o | R Rb p 0",
        {"highpass": "o"},
    ),
    "multiple-feedback-bandpass": (
        "R Rin in x | R Rg x 0 | C C1 x o | C C2 x m | R R2 m o | U A p m o | R Rb p 0",
        {"bandpass": "o"},
    ),
}
# Where an optional part is left out: "join" its two nodes, or leave them "apart".
LEFT_OUT = {"Rb": "join", "Rb1": "join", "Rb2": "join", "Rf": "join", "Rg": "apart"}

Drawn = list[tuple[str, str, list[str]]]


def drawn(text: str, left_out: set[str]) -> Drawn:
    elements = []
    for row in text.replace("\n", " | ").split("|"):
        if row.strip():
            kind, role, *nodes = row.split()
            elements.append((kind, role, nodes))
    for role in left_out:
        _, _, (a, b) = next(e for e in elements if e[1] == role)
        elements = [e for e in elements if e[1] != role]
        if LEFT_OUT[role] == "join":
            keep, gone = (b, a) if b == "0" else (a, b)
            elements = [(k, r, [keep if n == gone else n for n in ns]) for k, r, ns in elements]
    return elements


def solved(
    elements: Drawn, value: dict[str, float], opamp: dict[str, tuple[float, float]], f_hz: float
) -> dict[str, mpmath.mpc]:
    """Solve Kirchhoff's current laws, with a row V_out (1/A0 + s tau) = V+ - V- for each op-amp."""
    s = 2j * mpmath.pi * mpmath.mpf(f_hz)
    unknown = sorted({n for _, _, ns in elements for n in ns} - {"0", "in"})
    size = len(unknown)
    place = {n: i for i, n in enumerate(unknown)}
    matrix, right = mpmath.zeros(size), mpmath.zeros(size, 1)
    driven = [ns[2] for k, _, ns in elements if k == "U"]

    def add(row: str, node: str, amount: mpmath.mpc) -> None:
        if row == "0" or row == "in" or node == "0":
            return
        if node == "in":
            right[place[row]] -= amount
        else:
            matrix[place[row], place[node]] += amount

    for kind, role, ns in elements:
        if kind == "U":
            plus, minus, out = ns
            inverse_gain, tau = map(mpmath.mpf, opamp[role])
            add(out, out, inverse_gain + s * tau)
            add(out, plus, mpmath.mpf(-1))
            add(out, minus, mpmath.mpf(1))
            continue
        y = 1 / mpmath.mpf(value[role]) if kind == "R" else s * mpmath.mpf(value[role])
        for here, there in (ns, ns[::-1]):
            if here not in driven:
                add(here, here, y)
                add(here, there, -y)
    solution = mpmath.lu_solve(matrix, right)
    return {n: solution[place[n]] for n in unknown}


def computed(
    circuit: str,
    output: str,
    given: list[str],
    value: dict[str, float],
    opamp: dict[str, tuple[float, float]],
) -> Response:
    known = CIRCUITS[circuit]
    network = Network(
        tuple(
            replace(e, finite_gain=opamp[e.name][0] > 0, finite_bandwidth=opamp[e.name][1] > 0)
            if isinstance(e, Amplifier)
            else e
            for e in known.fitted(given)
        )
    )
    functions = network_functions(network)

    def number(symbol: Symbol) -> float:
        match symbol.kind:
            case "conductance":
                return 1.0 / value[symbol.element]
            case "capacitance":
                return value[symbol.element]
            case "inverse gain":
                return opamp[symbol.element][0]
        return opamp[symbol.element][1]

    values = {symbol: number(symbol) for e in network.elements for symbol in symbols(e)}
    numerator = functions.numerators[known.outputs[output]]
    return Response((ratio(numerator, functions.denominator, values),))


# Whether the open-loop gain and the gain-bandwidth are finite.
MODELS = {"ideal": (0, 0), "gain": (1, 0), "bandwidth": (0, 1), "both": (1, 1)}


def cases() -> Iterator[tuple[str, tuple[str, ...], str]]:
    """Yield each circuit with each choice of its optional parts and each model of op-amps."""
    for circuit, known in CIRCUITS.items():
        active = any(takes == "amplifier" for takes in known.roles.values())
        for count in range(len(known.optional) + 1):
            for left_out in combinations(known.optional, count):
                for model in MODELS if active else ("ideal",):
                    yield circuit, left_out, model


def test_every_circuit_and_output_is_drawn_here() -> None:
    assert set(DRAWINGS) == set(CIRCUITS)
    for circuit, (_, outputs) in DRAWINGS.items():
        assert set(outputs) == set(CIRCUITS[circuit].outputs)


@pytest.mark.parametrize(("circuit", "left_out", "model"), list(cases()))
def test_responses_agree_with_the_nodal_solution(
    circuit: str, left_out: tuple[str, ...], model: str
) -> None:
    text, outputs = DRAWINGS[circuit]
    elements = drawn(text, set(left_out))
    rng = random.Random(f"{circuit} {left_out} {model}")
    value: dict[str, float] = {}
    opamp: dict[str, tuple[float, float]] = {}
    for kind, role, _ in elements:
        if kind == "U":
            # Each op-amp has its own, so that none can take another's place unnoticed.
            finite_gain, finite_bandwidth = MODELS[model]
            inverse_gain, tau = 10 ** rng.uniform(-6, -3), 10 ** rng.uniform(-8, -6)
            opamp[role] = (finite_gain * inverse_gain, finite_bandwidth * tau)
        else:
            value[role] = 10 ** (rng.uniform(3.5, 4.5) if kind == "R" else rng.uniform(-8.5, -7.5))
    freq_hz = np.array([0.0, *np.geomspace(1.0, 1e6, 21)])  # the corners lie near 1 kHz
    given = [role for _, role, _ in elements]
    with mpmath.workdps(50):
        exact = [solved(elements, value, opamp, f) for f in freq_hz]
    for output, node in outputs.items():
        response = computed(circuit, output, given, value, opamp)
        got = 10 ** (response.gain_db(freq_hz) / 20) * np.exp(
            1j * np.radians(response.phase_deg(freq_hz))
        )
        want = np.array([complex(solution[node]) for solution in exact])
        np.testing.assert_allclose(got, want, rtol=1e-9, atol=0)
