"""Limits far from every response: hopeless or met by far, but judged."""

from __future__ import annotations

from pathlib import Path

import pytest

from filtercheck import pipeline
from filtercheck.model.verdict import Outcome

TWO = """\
format: filtercheck-filter/1
filter: two
sections:
  - {circuit: passive-lowpass, name: a, fit: {R: R1, C: C1}}
  - {circuit: unity-gain, name: u, fit: {A: U1}}
  - {circuit: passive-lowpass, name: b, fit: {R: R2, C: C2}}
parts:
  R1: {resistance: 10k, tolerance: 1 %}
  R2: {resistance: 10k, tolerance: 1 %}
  C1: {capacitance: 15.915494309 nF}
  C2: {capacitance: 15.915494309 nF}
  U1: {amplifier: ideal}
outputs: {out: b.lowpass}
requirements:
"""


# A fault that these tests found: a hundred thousand decibels are e^11513.
@pytest.mark.parametrize(
    ("wanted", "outcome"),
    [
        ("band: [0, 1 kHz], max: 100000 dB", Outcome.PASS),
        ("band: [0, 1 kHz], min: -100000 dB", Outcome.PASS),
        ("band: [0, 1 kHz], max: -100000 dB", Outcome.FAIL),
        ("band: [0, 1 kHz], min: 100000 dB", Outcome.FAIL),
        ("band: [10 Hz, 1 kHz], max: {10 Hz: 1 dB, 1 kHz: 100000 dB}", Outcome.PASS),
    ],
)
def test_limits_far_from_every_response(tmp_path: Path, wanted: str, outcome: Outcome) -> None:
    file = tmp_path / "two.filter.yaml"
    file.write_text(f"{TWO}  A: {{kind: gain, output: out, {wanted}}}\n", "utf-8")

    run = pipeline.judged([str(file)])

    assert run.faults == ()
    assert run.verdicts[0].outcome is outcome
