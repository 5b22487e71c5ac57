"""A twin-T at its null: what holds with 0.02 dB to spare is proved, what misses by as much is not.

    in -- R1 -- m -- R2 -- out         in -- C1 -- n -- C2 -- out
                C3 from m to ground                R3 from n to ground

With R1 = R2 = R, R3 = R/2, C1 = C2 = C, C3 = 2 C nothing passes at 1/(2 pi R C), 1 kHz here.
The reference solves the nodal equations, and searches from many starts.
"""

from __future__ import annotations

from functools import cache
from itertools import product
from math import log10, pi
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import minimize

from filtercheck import pipeline
from filtercheck.model.verdict import Outcome, Verdict

Real = NDArray[np.float64]

NOMINAL = np.array([10e3, 10e3, 5e3, 15.915494309e-9, 15.915494309e-9, 31.830988618e-9])
TOLERANCE = np.array([0.01, 0.01, 0.01, 0.02, 0.02, 0.02])
TEXT = """\
format: filtercheck-filter/1
filter: notch
connect:
  R1: [in, m]
  R2: [m, out]
  C3: [m, ground]
  C1: [in, n]
  C2: [n, out]
  R3: [n, ground]
parts:
  R1: {resistance: 10k, tolerance: 1 %}
  R2: {resistance: 10k, tolerance: 1 %}
  R3: {resistance: 5k, tolerance: 1 %}
  C1: {capacitance: 15.915494309 nF, tolerance: 2 %}
  C2: {capacitance: 15.915494309 nF, tolerance: 2 %}
  C3: {capacitance: 31.830988618 nF, tolerance: 2 %}
outputs: {out: out}
requirements:
"""
# One frequency is written as a band that is narrower than any change of the gain.
ONE, NARROW = (1000.0, 1000.000001), (995.0, 1004.0)


def gain_db(values: Real, freq_hz: float) -> float:
    """Return the gain from the currents that leave m, n and out."""
    g1, g2, g3 = 1 / values[:3]
    y1, y2, y3 = 2j * pi * freq_hz * values[3:]
    equations = np.array(
        [[g1 + g2 + y3, 0, -g2], [0, y1 + y2 + g3, -y2], [-g2, -y2, g2 + y2]], complex
    )
    driven: NDArray[Any] = np.linalg.solve(equations, np.array([g1, y1, 0]))
    return 20 * log10(abs(driven[2]) + 1e-30)


def climbed(start: Real, band: tuple[float, float]) -> float:
    def loss(at: Real) -> float:
        return -gain_db(NOMINAL * (1 + TOLERANCE * at[:6]), float(at[6]) * 1000.0)

    bounds = [(-1.0, 1.0)] * 6 + [(band[0] / 1000.0, band[1] / 1000.0)]
    return -float(minimize(loss, start, bounds=bounds, method="L-BFGS-B").fun)


@cache
def worst_db(band: tuple[float, float]) -> float:
    """Return the largest gain that corners, and ascents from random boards, reach."""
    corners = [
        gain_db(NOMINAL * (1 + TOLERANCE * np.array(corner)), freq)
        for corner in product((-1, 1), repeat=6)
        for freq in np.linspace(*band, 5)
    ]
    random = np.random.default_rng(7)
    starts = [
        np.append(random.uniform(-1, 1, 6), random.uniform(*band) / 1000.0) for _ in range(25)
    ]
    return max(*corners, *(climbed(start, band) for start in starts))


def verdict(folder: Path, band: tuple[float, float], ceiling_db: float) -> Verdict:
    file = folder / "notch.filter.yaml"
    wanted = f"kind: gain, output: out, band: [{band[0]}, {band[1]}], max: {ceiling_db:.6f} dB"
    file.write_text(f"{TEXT}  NULL: {{{wanted}}}\n", "utf-8")
    run = pipeline.judged([str(file)])
    assert not run.faults, run.faults[0]
    return run.verdicts[0]


@pytest.mark.parametrize("band", [ONE, NARROW], ids=["one frequency", "narrow band"])
def test_a_ceiling_with_little_to_spare_is_proved(
    tmp_path: Path, band: tuple[float, float]
) -> None:
    found = verdict(tmp_path, band, worst_db(band) + 0.02)

    assert found.outcome is Outcome.PASS
    assert found.findings[0].reached == pytest.approx(0.02, abs=1e-4)
    assert found.findings[0].certain == pytest.approx(0.02, abs=0.01)


@pytest.mark.parametrize("band", [ONE, NARROW], ids=["one frequency", "narrow band"])
def test_a_ceiling_that_is_missed_by_little_is_refuted(
    tmp_path: Path, band: tuple[float, float]
) -> None:
    found = verdict(tmp_path, band, worst_db(band) - 0.02)

    assert found.outcome is Outcome.FAIL
    assert found.findings[0].reached == pytest.approx(-0.02, abs=1e-4)


@pytest.mark.parametrize("band", [ONE, NARROW], ids=["one frequency", "narrow band"])
def test_the_board_shown_has_the_gain_shown(tmp_path: Path, band: tuple[float, float]) -> None:
    finding = verdict(tmp_path, band, worst_db(band) - 0.02).findings[0]
    value = {part.designator: getattr(part, "value", 0.0) for part in finding.worst}
    values = np.array([value[name] for name in ("R1", "R2", "R3", "C1", "C2", "C3")])

    assert (np.abs(values / NOMINAL - 1) <= TOLERANCE * (1 + 1e-9)).all()
    assert finding.freq_hz is not None
    assert gain_db(values, finding.freq_hz) == pytest.approx(finding.value, abs=1e-6)
