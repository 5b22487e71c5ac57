"""The worked examples of handbooks and textbooks, read off within the tolerance stated there.

Sources and status of each value are in `tests/reference/worked_examples.yaml`.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from math import inf, pi
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml

from filtercheck.circuits import CIRCUITS
from filtercheck.network.curve import Curve
from filtercheck.network.elements import (
    GROUND,
    Amplifier,
    Capacitor,
    Element,
    Inductor,
    Network,
    Resistor,
)
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response, product

REFERENCE = Path(__file__).parent.parent / "reference" / "worked_examples.yaml"
EXAMPLES: list[dict[str, Any]] = yaml.safe_load(REFERENCE.read_text("utf-8"))["examples"]
PASSIVE: dict[str, Callable[[str, str, str], Element]] = {
    "R": Resistor,
    "C": Capacitor,
    "L": Inductor,
}
HALF_POWER_DB = 3.010299957


def element(row: list[Any]) -> Element:
    kind, name, *rest = row
    ends = rest if kind == "OA" else rest[:-1]
    nodes = [GROUND if str(node) == "0" else str(node) for node in ends]
    if kind == "OA":
        plus, minus, out = nodes
        return Amplifier(name, plus, minus, out, finite_gain=False, finite_bandwidth=False)
    a, b = nodes
    return PASSIVE[kind](name, a, b)


def stated(example: dict[str, Any]) -> dict[str, float]:
    return {row[1]: float(row[-1]) for row in example["netlist"] if row[0] != "OA"}


def response(example: dict[str, Any], node: str) -> Response:
    network = Network(tuple(element(row) for row in example["netlist"]))
    return valued(network, node, stated(example))


def valued(network: Network, node: str, value: dict[str, float]) -> Response:
    functions = network_functions(network)
    values = {
        s: 1 / value[s.element] if s.kind == "conductance" else value[s.element]
        for s in functions.denominator.symbols
    }
    return Response((ratio(functions.numerators[node], functions.denominator, values),))


def pairs(subject: Response) -> list[tuple[float, float | None]]:
    """Return f0 and Q of each pole pair, then the real poles with no Q."""
    upper = [p for p in subject.poles if p.imag > 1e-6 * abs(p)]
    real = [p for p in subject.poles if abs(p.imag) <= 1e-6 * abs(p)]
    found: list[tuple[float, float | None]] = [
        (abs(p) / (2 * pi), abs(p) / (-2 * p.real)) for p in upper
    ]
    return found + [(abs(p) / (2 * pi), None) for p in real]


def decibel(gain_db: float) -> float:
    return float(10 ** (gain_db / 20))


def read_off(quantity: str, text: str, subject: Response) -> Any:
    """Return what a claim is about, from the computed response."""
    curve = Curve(subject)
    at = float(text.removeprefix("at ").split()[0]) if text.startswith("at ") else 0.0
    band = tuple(float(x) for x in text.split()[1].split("..")) if text.startswith("band ") else ()
    match quantity:
        case "f0":
            return pairs(subject)[0][0]
        case "Q":
            return pairs(subject)[0][1]
        case "pole_f":
            return [f for f, _ in pairs(subject)]
        case "pole_Q":
            return [q for _, q in pairs(subject)]
        case "dcgain":
            return decibel(curve.gain_db(0.0))
        case "dcgain_db":
            return curve.gain_db(0.0)
        case "hfgain":
            return decibel(curve.gain_db(inf))
        case "hfgain_db":
            return curve.gain_db(inf)
        case "gain_at":
            return decibel(curve.gain_db(at))
        case "gain_db_at":
            return curve.gain_db(at)
        case "f3db":
            return curve.fall_hz(0.0, curve.gain_db(0.0) - HALF_POWER_DB, upward=True)
        case "f3db_hp":
            return curve.fall_hz(inf, curve.gain_db(inf) - HALF_POWER_DB, upward=False)
        case "f3db_lo" | "f3db_hi":
            peak = curve.highest()
            level = peak.gain_db - HALF_POWER_DB
            return curve.fall_hz(peak.freq_hz, level, upward=quantity == "f3db_hi")
        case "notch_f":
            return curve.lowest().freq_hz
        case "bw_notch":
            level = curve.gain_db(0.0) - HALF_POWER_DB
            below = curve.fall_hz(0.0, level, upward=True)
            above = curve.fall_hz(inf, level, upward=False)
            assert below is not None
            assert above is not None
            return above - below
        case "ripple_db":
            low, high = band
            return curve.highest((low, high)).gain_db - curve.lowest((low, high)).gain_db
        case "phase_at":
            return float(subject.phase_deg(np.array([1000.0]))[0])
        case "flat_db":
            return max(abs(curve.highest().gain_db), abs(curve.lowest().gain_db))
    raise NotImplementedError(f"nothing reads off {quantity}")


CLAIMS = [
    pytest.param(example, claim, id=f"{example['id']}-{claim['quantity']}")
    for example in EXAMPLES
    for claim in example["claims"]
]


@pytest.mark.parametrize(("example", "claim"), CLAIMS)
def test_claim(example: dict[str, Any], claim: dict[str, Any]) -> None:
    quantity, _, node = claim["quantity"].partition("@")
    found = read_off(quantity, claim["text"], response(example, node or example["output"]))
    tolerance = claim["tolerance"]
    limits = {"rel": tolerance} if claim["deviation_is"] == "relative" else {"abs": tolerance}
    wanted = claim["claimed"] if isinstance(claim["claimed"], list) else [claim["claimed"]]
    got = found if isinstance(found, list) else [found]

    assert len(got) == len(wanted)
    for one, claimed in zip(got, wanted, strict=True):
        if claimed is None:
            assert one is None
        else:
            assert one == pytest.approx(claimed, **{"rel": 0, "abs": 0, **limits})


def test_all_twenty_examples_are_here() -> None:
    assert len(EXAMPLES) == 20
    assert len({example["id"] for example in EXAMPLES}) == 20


# The examples whose circuit has a module: its sections in a row, and for each role the part.
BANDPASS = "multiple-feedback-bandpass"
KNOWN: dict[str, list[tuple[str, str]]] = {
    "SK04": [("sallen-key-lowpass", "R1=R1 R2=R2 C1=C2 C2=C1")],
    "MF01": [(BANDPASS, "Rin=R1A Rg=R1B C1=C1 C2=C2 R2=R2")],
    "MF02": [("multiple-feedback-lowpass", "Rin=R1 Rf=R3 R2=R2 C1=C1 C2=C2")],
    "CA05": [
        ("sallen-key-highpass", "C1=C11 C2=C21 R1=Ro1 R2=Rg1"),
        ("one-pole-highpass-inverting", "C=C12 Rin=R12 Rf=Rf"),
    ],
    "CA06": [(BANDPASS, f"Rin=R1A{k} Rg=R1B{k} C1=C1{k} C2=C2{k} R2=R2{k}") for k in (1, 2, 3)],
    "OP01": [("passive-lowpass", "R=R C=C"), ("noninverting-gain", "Rf=Rf Rg=R1")],
    "OP02": [("one-pole-lowpass", "R=R1 C=C1")],
    "MF05": [("multiple-feedback-highpass", "Cin=C1 Cf=C2 C2=C3 R1=R2 R2=R1")],
    "PL01": [("passive-lowpass", "R=R C=C")],
}


@pytest.mark.parametrize("name", KNOWN)
def test_the_circuit_of_an_example_responds_as_its_netlist(name: str) -> None:
    (example,) = (e for e in EXAMPLES if e["id"] == name)
    sections = []
    for circuit, text in KNOWN[name]:
        known = CIRCUITS[circuit]
        part = dict(pair.split("=") for pair in text.split())
        elements = tuple(
            replace(e, finite_gain=False, finite_bandwidth=False) if isinstance(e, Amplifier) else e
            for e in known.fitted(part)
        )
        (node,) = known.outputs.values()
        value = {role: stated(example)[own] for role, own in part.items()}
        sections.append(valued(Network(elements), node, value))
    built, drawn = product(sections), response(example, example["output"])

    freq_hz = np.array([0.0, *np.geomspace(1.0, 1e6, 61)])
    np.testing.assert_allclose(built.gain_db(freq_hz), drawn.gain_db(freq_hz), rtol=0, atol=1e-9)
    turn = np.radians(built.phase_deg(freq_hz) - drawn.phase_deg(freq_hz))
    np.testing.assert_allclose(np.exp(1j * turn), 1.0, atol=1e-9)
