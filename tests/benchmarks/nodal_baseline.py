"""The baseline of the other benchmarks: one state-variable section, solved board by board.

    python tests/benchmarks/nodal_baseline.py

The matrices are typed by hand from the drawing in `filtercheck/circuits/state_variable.py`,
with Rb1 and Rb2 as wires. The unknowns are the seven voltages in the order of `NODES`. Four
rows are Kirchhoff's current law at the inputs of the op-amps; the three rows of the driven nodes
are the law of an op-amp without loss at 0 Hz:

    V_out s tau - V_plus + V_minus = 0,  tau = 1/(2 pi GBW)

For each board and frequency the equations (G + s C) V = b are solved anew, by LAPACK, in batches.
Run by itself, the script holds the baseline against values worked by hand.
"""

from __future__ import annotations

from collections.abc import Mapping
from os import environ

# One thread: CPU time must not depend on how many cores the machine has. It counts only before
# numpy is loaded, so the other benchmarks import this module, or `filter_files`, first.
environ.update(OPENBLAS_NUM_THREADS="1", OMP_NUM_THREADS="1", MKL_NUM_THREADS="1")

import numpy as np
import numpy.typing as npt

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

NODES = ("minus0", "plus0", "highpass", "minus1", "bandpass", "minus2", "lowpass")
RESISTORS = ("Rin", "Rhp", "Rlp", "Rbp", "Rg", "R1", "R2")
CAPACITORS = ("C1", "C2")
AMPLIFIERS = ("A0", "A1", "A2")

TOLERANCE = {"R": 0.01, "C": 0.05, "A": 0.3}  # by the first letter of the role
GBW_HZ = 1e6
# Systems in one batch: they then stay in the processor's cache, which makes the baseline twice
# as fast as batches of 100 000, and takes a few MB.
CHUNK = 4000


def nominal(q: float) -> dict[str, float]:
    """Return the section for 1 kHz in ohm, farad and hertz: its gain is -1, its quality factor q.

    R C = 10 kohm 15.9155 nF = 1/(2 pi 1 kHz), and Rbp/Rg = 3 q - 1.
    """
    value = dict.fromkeys(RESISTORS, 10e3) | dict.fromkeys(CAPACITORS, 15.9155e-9)
    value |= dict.fromkeys(AMPLIFIERS, GBW_HZ)
    return value | {"Rbp": 10e3 * (3.0 * q - 1.0)}


def boards(q: float, count: int, seed: int = 1) -> dict[str, Real]:
    """Draw boards, each value uniform within its tolerance; arrays of shape (N,)."""
    draw = np.random.default_rng(seed)
    return {
        role: value * (1.0 + TOLERANCE[role[0]] * draw.uniform(-1.0, 1.0, count))
        for role, value in nominal(q).items()
    }


def matrices(value: Mapping[str, Real]) -> tuple[Real, Real, Real]:
    """Return G and C, both of shape (N, 7, 7), and b of shape (N, 7, 1) for 1 V at the input."""
    count = len(value["Rin"])
    g = np.zeros((count, 7, 7))
    c = np.zeros((count, 7, 7))
    b = np.zeros((count, 7, 1))
    rin, rhp, rlp, rbp, rg, r1, r2 = (1.0 / value[role] for role in RESISTORS)
    minus0, plus0, hp, minus1, bp, minus2, lp = range(7)
    # The summing node: Rin to the source, Rhp to the high-pass, Rlp to the low-pass output.
    g[:, minus0, minus0] = rin + rhp + rlp
    g[:, minus0, hp] = -rhp
    g[:, minus0, lp] = -rlp
    b[:, minus0, 0] = rin
    # The damping divider: Rbp to the band-pass output, Rg to ground.
    g[:, plus0, plus0] = rbp + rg
    g[:, plus0, bp] = -rbp
    # The integrators: R1 and C1 meet at minus1, R2 and C2 at minus2.
    g[:, minus1, minus1] = r1
    g[:, minus1, hp] = -r1
    c[:, minus1, minus1] = value["C1"]
    c[:, minus1, bp] = -value["C1"]
    g[:, minus2, minus2] = r2
    g[:, minus2, bp] = -r2
    c[:, minus2, minus2] = value["C2"]
    c[:, minus2, lp] = -value["C2"]
    # The op-amps; the plus inputs of A1 and A2 are grounded.
    for role, minus, out in (("A0", minus0, hp), ("A1", minus1, bp), ("A2", minus2, lp)):
        c[:, out, out] = 1.0 / (2.0 * np.pi * value[role])
        g[:, out, minus] = 1.0
    g[:, hp, plus0] = -1.0
    return g, c, b


def lowpass(value: Mapping[str, Real], freq_hz: Real) -> Complex:
    """Solve every board at every frequency; return V(lowpass)/V(in), of shape (N, F)."""
    g, c, b = matrices(value)
    s = 2j * np.pi * freq_hz[:, None, None]
    found = np.empty((len(g), len(freq_hz)), complex)
    step = max(1, CHUNK // len(freq_hz))
    for i in range(0, len(g), step):
        part = slice(i, i + step)
        systems = g[part, None] + s * c[part, None]
        found[part] = np.linalg.solve(systems, b[part, None].astype(complex))[..., -1, 0]
    return found


def gain_db(value: Mapping[str, Real], freq_hz: Real) -> Real:
    """Return the gain at the low-pass output, of shape (N, F)."""
    return np.asarray(20.0 * np.log10(np.abs(lowpass(value, freq_hz))))


def check() -> None:
    """Hold the baseline against values worked by hand."""
    fast = nominal(5.0) | dict.fromkeys(AMPLIFIERS, 1e13)
    section = {role: np.array([value]) for role, value in fast.items()}
    response = lowpass(section, np.array([0.0, 1e3, 2e3]))[0]
    # 1 kHz is -1/(j/Q) = j Q; 2 kHz is -1/(1 - 4 + 2j/Q) = 1/(3 - 0.4j). Tolerances: 15.9155 nF
    # is rounded by 3e-6, which the phase sees 2 Q times.
    assert abs(response[0] + 1.0) < 1e-9, response
    assert abs(response[1] - 5j) < 5 * 5e-5, response
    assert abs(response[2] - 1.0 / (3.0 - 0.4j)) < 1e-4, response


if __name__ == "__main__":
    check()
    print("the baseline gives -1 at 0 Hz, j Q at 1 kHz and 1/(3 - 0.4j) at 2 kHz for Q = 5")
