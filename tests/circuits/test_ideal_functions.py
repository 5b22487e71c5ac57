"""The ideal transfer function that each circuit's manual states, read from the manual itself."""

from __future__ import annotations

import random
import re

import numpy as np
import pytest

from filtercheck.circuits import CIRCUITS
from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import Amplifier, Network
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response

# The quantities that the manuals define in words, once more as arithmetic.
MEANT = {
    "w1": "1/(R1*C1)",
    "w2": "1/(R2*C2)",
    "d": "Rg/(Rg + Rbp)",
    "a": "(1/Rin)/(1/Rin + 1/Rbp + 1/Rg)",
    "b": "(1/Rbp)/(1/Rin + 1/Rbp + 1/Rg)",
    "Rp": "1/(1/Rin + 1/Rg)",
}
GAIN_K = {"sallen": "1 + Rf/Rg", "state": "1 + Rhp/Rlp"}


def stated(circuit: Circuit) -> dict[str, str]:
    """Return the formulas of the manual as Python: `A B` is a product, `^` a power."""
    found: dict[str, str] = {}
    last = ""
    for line in circuit.manual.splitlines():
        match = re.match(r"    (\w+) += (.+)", line)
        if match and match[1] in {*circuit.outputs, "D"}:
            last = match[1]
            found[last] = match[2]
        elif last and line.startswith("     "):
            found[last] += line
        else:
            last = ""
    return {
        name: re.sub(r"(?<=[\w)]) +(?=[\w(])", "*", text).replace("^", "**")
        for name, text in found.items()
    }


def value_of(circuit: Circuit, output: str, parts: dict[str, float], freq_hz: float) -> complex:
    formulas = stated(circuit)
    names: dict[str, complex] = {**parts, "s": 2j * np.pi * freq_hz}
    scope: dict[str, object] = {"__builtins__": {}}
    for name, text in MEANT.items():
        if set(re.findall(r"[A-Z]\w*", text)) <= set(parts):
            names[name] = eval(text, scope, names)  # noqa: S307  (formulas of this file)
    for prefix, text in GAIN_K.items():
        if circuit.name.startswith(prefix):
            names["K"] = eval(text, scope, names)  # noqa: S307
    if "D" in formulas:
        names["D"] = eval(formulas["D"], scope, names)  # noqa: S307  (of our own manual)
    return complex(eval(formulas[output], scope, names))  # noqa: S307


@pytest.mark.parametrize("circuit", CIRCUITS.values(), ids=lambda circuit: circuit.name)
@pytest.mark.parametrize("seed", [1, 2, 3])
def test_the_manual_states_the_response(circuit: Circuit, seed: int) -> None:
    rng = random.Random(f"{circuit.name} {seed}")
    parts = {
        role: 10 ** (rng.uniform(3.5, 4.5) if takes == "resistance" else rng.uniform(-8.5, -7.5))
        for role, takes in circuit.roles.items()
        if takes != "amplifier"
    }
    network = Network(
        tuple(
            Amplifier(e.name, e.plus, e.minus, e.out, finite_gain=False, finite_bandwidth=False)
            if isinstance(e, Amplifier)
            else e
            for e in circuit.fitted(circuit.roles)
        )
    )
    functions = network_functions(network)
    values = {
        s: 1 / parts[s.element] if s.kind == "conductance" else parts[s.element]
        for s in functions.denominator.symbols
    }
    freq_hz = np.geomspace(1.0, 1e6, 31)
    for output, node in circuit.outputs.items():
        response = Response((ratio(functions.numerators[node], functions.denominator, values),))
        turn = np.exp(1j * np.radians(response.phase_deg(freq_hz)))
        got = 10 ** (response.gain_db(freq_hz) / 20) * turn
        want = [value_of(circuit, output, parts, f) for f in freq_hz]
        np.testing.assert_allclose(got, want, rtol=1e-9)


@pytest.mark.parametrize("circuit", CIRCUITS.values(), ids=lambda circuit: circuit.name)
def test_every_output_has_its_formula(circuit: Circuit) -> None:
    assert set(circuit.outputs) <= set(stated(circuit))
