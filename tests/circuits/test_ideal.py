"""Every circuit with ideal amplifiers against the standard form of its response.

The forms are typed here in w0, Q and gain, not read from the manuals: loops closed by hand for
the state-variable sections, the textbook forms for the others. A part that is left out is 0 ohm
where a wire stands in its place and infinite where nothing does, so that one formula covers a
circuit with and without its optional parts.
"""

from __future__ import annotations

import random
from collections.abc import Callable, Iterator, Mapping
from dataclasses import replace
from itertools import combinations
from math import inf

import numpy as np
import pytest
from numpy.typing import NDArray

from filtercheck.circuits import CIRCUITS
from filtercheck.network.elements import Amplifier, Network
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response

Complex = NDArray[np.complex128]
Parts = Mapping[str, float]
LEFT_OUT = {"Rb": 0.0, "Rb1": 0.0, "Rb2": 0.0, "Rf": 0.0, "Rg": inf}


def biquad(s: Complex, high: float, band: float, low: float, damping: float, w2: float) -> Complex:
    """Return (high s^2 + band s + low)/(s^2 + s w0/Q + w0^2)."""
    return (high * s**2 + band * s + low) / (s**2 + damping * s + w2)


def integrated(p: Parts, s: Complex, highpass: Complex) -> dict[str, Complex]:
    """Return a state-variable section's outputs: each integrator inverts."""
    bandpass = -highpass / (s * p["R1"] * p["C1"])
    lowpass = -bandpass / (s * p["R2"] * p["C2"])
    return {"highpass": highpass, "bandpass": bandpass, "lowpass": lowpass}


def state_variable(p: Parts, s: Complex) -> dict[str, Complex]:
    t1, t2 = p["R1"] * p["C1"], p["R2"] * p["C2"]
    noise_gain = 1 + p["Rhp"] / p["Rin"] + p["Rhp"] / p["Rlp"]
    share = p["Rg"] / (p["Rg"] + p["Rbp"])
    loops = noise_gain * share / (s * t1) + p["Rhp"] / p["Rlp"] / (s**2 * t1 * t2)
    return integrated(p, s, -p["Rhp"] / p["Rin"] / (1 + loops))


def state_variable_noninverting(p: Parts, s: Complex) -> dict[str, Complex]:
    t1, t2 = p["R1"] * p["C1"], p["R2"] * p["C2"]
    noise_gain = 1 + p["Rhp"] / p["Rlp"]
    total = 1 / p["Rin"] + 1 / p["Rbp"] + 1 / p["Rg"]
    loops = noise_gain / p["Rbp"] / total / (s * t1) + p["Rhp"] / p["Rlp"] / (s**2 * t1 * t2)
    return integrated(p, s, noise_gain / p["Rin"] / total / (1 + loops))


def sallen_key_lowpass(p: Parts, s: Complex) -> dict[str, Complex]:
    gain = 1 + p["Rf"] / p["Rg"]
    w2 = 1 / (p["R1"] * p["R2"] * p["C1"] * p["C2"])
    damping = (1 / p["R1"] + 1 / p["R2"]) / p["C1"] + (1 - gain) / (p["R2"] * p["C2"])
    return {"lowpass": biquad(s, 0, 0, gain * w2, damping, w2)}


def sallen_key_highpass(p: Parts, s: Complex) -> dict[str, Complex]:
    gain = 1 + p["Rf"] / p["Rg"]
    w2 = 1 / (p["R1"] * p["R2"] * p["C1"] * p["C2"])
    damping = (1 / p["C1"] + 1 / p["C2"]) / p["R2"] + (1 - gain) / (p["R1"] * p["C1"])
    return {"highpass": biquad(s, gain, 0, 0, damping, w2)}


def multiple_feedback_lowpass(p: Parts, s: Complex) -> dict[str, Complex]:
    w2 = 1 / (p["Rf"] * p["R2"] * p["C1"] * p["C2"])
    damping = (1 / p["Rin"] + 1 / p["Rf"] + 1 / p["R2"]) / p["C1"]
    return {"lowpass": biquad(s, 0, 0, -p["Rf"] / p["Rin"] * w2, damping, w2)}


def multiple_feedback_highpass(p: Parts, s: Complex) -> dict[str, Complex]:
    w2 = 1 / (p["R1"] * p["R2"] * p["Cf"] * p["C2"])
    damping = (p["Cin"] + p["Cf"] + p["C2"]) / (p["R2"] * p["Cf"] * p["C2"])
    return {"highpass": biquad(s, -p["Cin"] / p["Cf"], 0, 0, damping, w2)}


def multiple_feedback_bandpass(p: Parts, s: Complex) -> dict[str, Complex]:
    w2 = (1 / p["Rin"] + 1 / p["Rg"]) / (p["R2"] * p["C1"] * p["C2"])
    damping = (1 / p["C1"] + 1 / p["C2"]) / p["R2"]
    return {"bandpass": biquad(s, 0, -1 / (p["Rin"] * p["C1"]), 0, damping, w2)}


def low(rate: float, s: Complex) -> Complex:
    return np.asarray(rate / (s + rate))


def high(rate: float, s: Complex) -> Complex:
    return np.asarray(s / (s + rate))


FORMS: dict[str, Callable[[Parts, Complex], dict[str, Complex]]] = {
    "state-variable": state_variable,
    "state-variable-noninverting": state_variable_noninverting,
    "one-pole-lowpass": lambda p, s: {"lowpass": low(1 / (p["R"] * p["C"]), s)},
    "one-pole-highpass": lambda p, s: {"highpass": high(1 / (p["R"] * p["C"]), s)},
    "one-pole-lowpass-inverting": lambda p, s: {
        "lowpass": -p["Rf"] / p["Rin"] * low(1 / (p["Rf"] * p["C"]), s)
    },
    "one-pole-highpass-inverting": lambda p, s: {
        "highpass": -p["Rf"] / p["Rin"] * high(1 / (p["Rin"] * p["C"]), s)
    },
    "passive-lowpass": lambda p, s: {"lowpass": low(1 / (p["R"] * p["C"]), s)},
    "passive-highpass": lambda p, s: {"highpass": high(1 / (p["R"] * p["C"]), s)},
    "unity-gain": lambda p, s: {"out": np.ones_like(s)},
    "inverting-gain": lambda p, s: {"out": np.full_like(s, -p["Rf"] / p["Rin"])},
    "noninverting-gain": lambda p, s: {"out": np.full_like(s, 1 + p["Rf"] / p["Rg"])},
    "sallen-key-lowpass": sallen_key_lowpass,
    "sallen-key-highpass": sallen_key_highpass,
    "multiple-feedback-lowpass": multiple_feedback_lowpass,
    "multiple-feedback-highpass": multiple_feedback_highpass,
    "multiple-feedback-bandpass": multiple_feedback_bandpass,
}


def computed(circuit: str, parts: Parts) -> dict[str, Response]:
    """Return the response at each output when only `parts` and ideal amplifiers are fitted."""
    known = CIRCUITS[circuit]
    amplifiers = [role for role, takes in known.roles.items() if takes == "amplifier"]
    elements = tuple(
        replace(e, finite_gain=False, finite_bandwidth=False) if isinstance(e, Amplifier) else e
        for e in known.fitted([*parts, *amplifiers])
    )
    functions = network_functions(Network(elements))
    values = {
        s: 1 / parts[s.element] if s.kind == "conductance" else parts[s.element]
        for s in functions.denominator.symbols
    }
    return {
        output: Response((ratio(functions.numerators[node], functions.denominator, values),))
        for output, node in known.outputs.items()
    }


def cases() -> Iterator[tuple[str, tuple[str, ...]]]:
    for circuit, known in CIRCUITS.items():
        for count in range(len(known.optional) + 1):
            for left_out in combinations(known.optional, count):
                yield circuit, left_out


def test_every_circuit_has_its_form_here() -> None:
    assert set(FORMS) == set(CIRCUITS)


@pytest.mark.parametrize(("circuit", "left_out"), list(cases()))
@pytest.mark.parametrize("seed", range(3))
def test_the_response_has_its_standard_form(
    circuit: str, left_out: tuple[str, ...], seed: int
) -> None:
    rng = random.Random(f"{circuit} {seed}")
    parts = {
        role: 10 ** (rng.uniform(3, 5) if takes == "resistance" else rng.uniform(-9, -7))
        for role, takes in CIRCUITS[circuit].roles.items()
        if takes != "amplifier"
    }
    given = {role: value for role, value in parts.items() if role not in left_out}
    freq_hz = np.geomspace(1e-1, 1e7, 49)  # the corners lie near 1 kHz
    gone = {role: LEFT_OUT[role] for role in left_out}
    s = np.asarray(2j * np.pi * freq_hz, dtype=np.complex128)
    wanted = FORMS[circuit]({**given, **gone}, s)
    found = computed(circuit, given)

    assert set(wanted) == set(found)
    for output, response in found.items():
        turn = np.exp(1j * np.radians(response.phase_deg(freq_hz)))
        got = 10 ** (response.gain_db(freq_hz) / 20) * turn
        np.testing.assert_allclose(got, wanted[output], rtol=1e-9, atol=0)
