"""A state-variable section with Q and the speed of its op-amps to choose, and its nodal equations.

All resistors are 10 kΩ but Rbp = (3 Q - 1) 10 kΩ, both capacitors 15.915494309 nF: f0 = 1 kHz, and
H = -1/(1 + s/(Q w0) + (s/w0)^2) with ideal op-amps (Kerwin, Huelsman and Newcomb, IEEE J.
Solid-State Circuits, 1967, from memory; it follows from the equations below).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from math import log10, pi
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from filtercheck import pipeline
from filtercheck.model.part import OpAmp, Part, Passive
from filtercheck.model.verdict import Verdict

Real = NDArray[np.float64]

RESISTORS = ("Rin", "Rhp", "Rlp", "Rbp", "Rg", "R1", "R2")
CAPACITORS = ("C1", "C2")
AMPLIFIERS = ("A0", "A1", "A2")
OHM, FARAD, F0_HZ = 10e3, 15.915494309e-9, 1000.0


def text(q: float, slowness: float, requirements: str) -> str:
    """Return the filter's file; `slowness` is f0 over gain-bandwidth, 0 for ideal op-amps."""
    rows = [f"  {r}: {{resistance: 10k, tolerance: 1 %}}" for r in RESISTORS if r != "Rbp"]
    rows.append(f"  Rbp: {{resistance: {(3 * q - 1) * OHM:.10g}, tolerance: 1 %}}")
    rows += [f"  {c}: {{capacitance: 15.915494309 nF, tolerance: 5 %}}" for c in CAPACITORS]
    gbw = F0_HZ / slowness if slowness else 0.0
    figure = f"{{min: {0.7 * gbw:.10g}, typical: {gbw:.10g}, max: {1.3 * gbw:.10g}}}"
    given = f"{{gain_bandwidth: {figure}, open_loop_gain: ideal}}" if slowness else "ideal"
    rows += [f"  {a}: {{amplifier: {given}}}" for a in AMPLIFIERS]
    fit = ", ".join(f"{name}: {name}" for name in (*RESISTORS, *CAPACITORS, *AMPLIFIERS))
    return "\n".join(
        [
            "format: filtercheck-filter/1",
            "filter: section",
            f"sections: [{{circuit: state-variable, name: sv, fit: {{{fit}}}}}]",
            "parts:",
            *rows,
            "outputs: {out: sv.lowpass}",
            "requirements:",
            requirements,
        ]
    )


def verdicts(folder: Path, q: float, slowness: float, requirements: str) -> dict[str, Verdict]:
    """Return the verdicts by requirement."""
    file = folder / "section.filter.yaml"
    file.write_text(text(q, slowness, requirements), "utf-8")
    run = pipeline.judged([str(file)])
    assert not run.faults, run.faults[0]
    return {verdict.requirement: verdict for verdict in run.verdicts}


def numbers(parts: tuple[Part, ...]) -> dict[str, float]:
    """Return the values of a board: ohm, farad, hertz of gain-bandwidth."""
    found = {}
    for part in parts:
        if isinstance(part, Passive):
            found[part.designator] = part.value
        elif isinstance(part, OpAmp) and part.gain_bandwidth:
            found[part.designator] = part.gain_bandwidth.typical
    return found


def equations(value: Mapping[str, float]) -> tuple[Real, Real, Real]:
    """Return K, M and e of the section's nodal equations (K + s M) v = e V_in.

    The unknowns are the voltages at A0's, A1's and A2's outputs h, b, l and at their inverting
    inputs x, y, z; p = b Rg/(Rg + Rbp) is A0's other input. An op-amp without a value is ideal.

        x (1/Rin + 1/Rhp + 1/Rlp) - h/Rhp - l/Rlp = V_in/Rin
        (y - h)/R1 + s C1 (y - b) = 0        (z - b)/R2 + s C2 (z - l) = 0
        x - p + s h/(2 pi GBW0) = 0    y + s b/(2 pi GBW1) = 0    z + s l/(2 pi GBW2) = 0
    """
    g = {name: 1 / value[name] for name in RESISTORS}
    c1, c2 = value["C1"], value["C2"]
    part = value["Rg"] / (value["Rg"] + value["Rbp"])
    k = np.array(
        [
            [-g["Rhp"], 0, -g["Rlp"], g["Rin"] + g["Rhp"] + g["Rlp"], 0, 0],
            [-g["R1"], 0, 0, 0, g["R1"], 0],
            [0, -g["R2"], 0, 0, 0, g["R2"]],
            [0, -part, 0, 1, 0, 0],
            [0, 0, 0, 0, 1, 0],
            [0, 0, 0, 0, 0, 1],
        ]
    )
    m = np.zeros((6, 6))
    m[1, 1], m[1, 4], m[2, 2], m[2, 5] = -c1, c1, -c2, c2
    for row, name in enumerate(AMPLIFIERS):
        m[3 + row, row] = 1 / (2 * pi * value[name]) if name in value else 0.0
    return k, m, np.array([g["Rin"], 0, 0, 0, 0, 0])


def poles(value: Mapping[str, float]) -> NDArray[Any]:
    """Return the natural frequencies: (K + s M) v = 0 where -M v = v K/s. [rad/s]"""
    k, m, _ = equations(value)
    found = np.linalg.eigvals(-np.linalg.solve(k, m))
    return np.asarray(1 / found[np.abs(found) > 1e-12 * np.abs(found).max()])


def gain_db(value: Mapping[str, float], freq_hz: float) -> float:
    """Return the gain from the signal to l."""
    k, m, e = equations(value)
    return 20 * log10(abs(np.linalg.solve(k + 2j * pi * freq_hz * m, e)[2]))


def boards(q: float, slowness: float, count: int) -> Iterator[dict[str, float]]:
    """Yield random boards, most values at an end of their tolerance."""
    random = np.random.default_rng(11)
    for _ in range(count):
        yield {
            name: nominal * (1 + tolerance * float(np.clip(random.uniform(-3, 3), -1, 1)))
            for name, (nominal, tolerance) in stated(q, slowness).items()
        }


def stated(q: float, slowness: float) -> dict[str, tuple[float, float]]:
    """Return nominal value and tolerance of each part."""
    found = dict.fromkeys(RESISTORS, (OHM, 0.01))
    found["Rbp"] = ((3 * q - 1) * OHM, 0.01)
    found |= dict.fromkeys(CAPACITORS, (FARAD, 0.05))
    return found | {name: (F0_HZ / slowness, 0.3) for name in AMPLIFIERS if slowness}
