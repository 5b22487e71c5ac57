"""Sections in a row: loaded where nothing drives, a product where an amplifier does."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from filtercheck import pipeline
from filtercheck.network.ratio import Real

FREQ_HZ = np.geomspace(1.0, 1e6, 61)
X = 1j * FREQ_HZ / 1e3  # s R C of each section

PARTS = """\
parts:
  R1: {resistance: 10k}
  R2: {resistance: 10k}
  R3: {resistance: 10k}
  C1: {capacitance: 15.915494309 nF}
  C2: {capacitance: 15.915494309 nF}
  C3: {capacitance: 15.915494309 nF}
"""
TAIL = """\
requirements:
  A: {kind: gain, output: last, band: [0, 1k], max: 1 dB, verify: nominal}
"""


def gain_db(sections: list[str], outputs: str, parts: str = PARTS) -> dict[str, Real]:
    rows = "".join(f"  - {{{section}}}\n" for section in sections)
    text = f"format: filtercheck-filter/1\nfilter: f\nsections:\n{rows}{parts}outputs: {outputs}\n"
    Path("f.filter.yaml").write_text(text + TAIL, "utf-8")
    found: dict[str, list[float]] = {}
    for sample in pipeline.curves("f.filter.yaml", None, list(FREQ_HZ)).samples:
        found.setdefault(sample.output, []).append(sample.gain_db)
    return {name: np.array(values) for name, values in found.items()}


def db(response: object) -> Real:
    return np.asarray(20 * np.log10(np.abs(np.asarray(response))))


@pytest.fixture(autouse=True)
def in_a_folder_of_its_own(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)


def test_passive_sections_load_each_other() -> None:
    # By hand, for three equal R-C sections in a row, x = s R C: the ladder's polynomials.
    found = gain_db(
        [
            "circuit: passive-lowpass, name: a, fit: {R: R1, C: C1}",
            "circuit: passive-lowpass, name: b, fit: {R: R2, C: C2}",
            "circuit: passive-lowpass, name: c, fit: {R: R3, C: C3}",
        ],
        "{first: a.lowpass, second: b.lowpass, last: c.lowpass}",
    )
    whole = 1 + 6 * X + 5 * X**2 + X**3

    np.testing.assert_allclose(found["last"], db(1 / whole), atol=1e-9)
    np.testing.assert_allclose(found["second"], db((1 + X) / whole), atol=1e-9)
    np.testing.assert_allclose(found["first"], db((1 + 3 * X + X**2) / whole), atol=1e-9)


def test_a_follower_takes_the_load_away() -> None:
    parts = PARTS.replace("  R3: {resistance: 10k}\n", "").replace(
        "  C3: {capacitance: 15.915494309 nF}\n", "  U1: {amplifier: ideal}\n"
    )
    found = gain_db(
        [
            "circuit: passive-lowpass, name: a, fit: {R: R1, C: C1}",
            "circuit: unity-gain, name: u, fit: {A: U1}",
            "circuit: passive-lowpass, name: b, fit: {R: R2, C: C2}",
        ],
        "{first: a.lowpass, middle: u.out, last: b.lowpass}",
        parts,
    )

    for name, wanted in {"first": 1, "middle": 1, "last": 2}.items():
        np.testing.assert_allclose(found[name], db(1 / (1 + X) ** wanted), atol=1e-9)


def test_a_passive_section_is_loaded_by_an_inverting_one() -> None:
    # By hand: the inverting stage loads the R-C section with its input resistor at virtual
    # ground, so that its gain is -1/(2 + x) with all resistors equal.
    parts = PARTS.replace("  C3: {capacitance: 15.915494309 nF}\n", "").replace(
        "  C2: {capacitance: 15.915494309 nF}\n", "  U1: {amplifier: ideal}\n"
    )
    found = gain_db(
        [
            "circuit: passive-lowpass, name: a, fit: {R: R1, C: C1}",
            "circuit: inverting-gain, name: g, fit: {Rin: R2, Rf: R3, A: U1}",
        ],
        "{first: a.lowpass, last: g.out}",
        parts,
    )

    np.testing.assert_allclose(found["last"], db(1 / (2 + X)), atol=1e-9)
    np.testing.assert_allclose(found["first"], db(1 / (2 + X)), atol=1e-9)


def test_an_output_inside_the_cascade_does_not_see_what_follows() -> None:
    parts = PARTS.replace("  R3: {resistance: 10k}\n", "  U1: {amplifier: ideal}\n").replace(
        "  C3: {capacitance: 15.915494309 nF}\n", "  U2: {amplifier: ideal}\n"
    )
    found = gain_db(
        [
            "circuit: one-pole-lowpass, name: a, fit: {R: R1, C: C1, A: U1}",
            "circuit: one-pole-highpass, name: b, fit: {R: R2, C: C2, A: U2}",
        ],
        "{first: a.lowpass, last: b.highpass}",
        parts,
    )

    np.testing.assert_allclose(found["first"], db(1 / (1 + X)), atol=1e-9)
    np.testing.assert_allclose(found["last"], db(X / (1 + X) ** 2), atol=1e-9)
