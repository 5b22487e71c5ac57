"""The worked examples of handbooks and textbooks, read off within the tolerance stated there.

Sources and status of each value are in `tests/reference/worked_examples.yaml`.
"""

from __future__ import annotations

from collections.abc import Callable
from math import inf, pi
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml

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
from filtercheck.network.response import Response

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


def response(example: dict[str, Any], node: str) -> Response:
    rows = example["netlist"]
    functions = network_functions(Network(tuple(element(row) for row in rows)))
    stated = {row[1]: float(row[-1]) for row in rows if row[0] != "OA"}
    values = {
        s: 1 / stated[s.element] if s.kind == "conductance" else stated[s.element]
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
