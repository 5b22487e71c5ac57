"""Poles, zeros, sensitivities and budgets of circuits whose formulas are known."""

from __future__ import annotations

from math import pi, sqrt
from pathlib import Path

import pytest

from filtercheck import cli, pipeline
from filtercheck.report import inspection

# A series circuit: f0 = 1/(2 pi sqrt(L C)), Q = sqrt(L/C)/R; the voltage at R has a zero at 0.
SERIES = """\
format: filtercheck-filter/1
filter: series
connect:
  L1: [in, a]
  C1: [a, out]
  R1: [out, ground]
parts:
  L1: {inductance: 10 mH, tolerance: 4 %}
  C1: {capacitance: 100 nF, tolerance: 1 %}
  R1: {resistance: 31.6, tolerance: 2 %}
outputs: {out: out}
requirements:
  Q: {kind: resonance, output: out, q: [9, 11], verify: nominal}
"""
F0 = 1.0 / (2.0 * pi * sqrt(10e-3 * 100e-9))
Q = sqrt(10e-3 / 100e-9) / 31.6


@pytest.fixture
def file(tmp_path: Path) -> str:
    path = tmp_path / "series.filter.yaml"
    path.write_text(SERIES, "utf-8")
    return str(path)


def test_a_pole_pair_and_how_far_it_strays(file: str) -> None:
    (pole,) = pipeline.inspected(file).poles

    assert pole.freq_hz == pytest.approx(F0, rel=1e-9)
    assert pole.q == pytest.approx(Q, rel=1e-9)
    low, high = (F0 / sqrt(end) for end in (1.04 * 1.01, 0.96 * 0.99))
    assert pole.freq_range_hz == pytest.approx((low, high), rel=1e-9)
    least, most = Q * sqrt(0.96 / 1.01) / 1.02, Q * sqrt(1.04 / 0.99) / 0.98
    assert pole.q_range == pytest.approx((least, most), rel=1e-9)


def test_sensitivities_are_those_of_the_formulas(file: str) -> None:
    (pole,) = pipeline.inspected(file).poles
    found = {name: (size, q) for name, size, q in pole.sensitivities}

    assert found["L1"] == pytest.approx((-0.5, 0.5), abs=1e-6)
    assert found["C1"] == pytest.approx((-0.5, -0.5), abs=1e-6)
    assert found["R1"] == pytest.approx((0.0, -1.0), abs=1e-6)


def test_zeros_at_zero_are_left_out(file: str) -> None:
    assert pipeline.inspected(file).zeros == (("out", ()),)


def test_a_budget_goes_from_the_board_as_fitted_to_the_worst_one(file: str) -> None:
    budgets = {one.limit: one for one in pipeline.inspected(file).budgets}
    least = budgets["Q at least"]

    assert least.nominal == pytest.approx(Q / 9.0 - 1.0, rel=1e-9)
    assert least.worst == pytest.approx(Q * sqrt(0.96 / 1.01) / 1.02 / 9.0 - 1.0, rel=1e-9)
    # To first order R1 takes 2 %, L1 half of 4 %, C1 half of 1 %, all of the Q of the worst board.
    worst = (1.0 + least.worst) * 100.0
    shares = {name: 100.0 * share for name, share in least.shares}
    expected = {"R1": -0.02 * worst, "L1": -0.02 * worst, "C1": -0.005 * worst}
    assert shares == pytest.approx(expected, rel=1e-3)


def test_the_text_keeps_to_80_columns_and_other_values_can_be_asked_for(
    file: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert cli.main(["inspect", file, "--set", "R1=63.2"]) == 0
    text = capsys.readouterr().out

    assert "Q 5" in text
    assert max(map(len, text.splitlines())) <= 80
    assert "A computed check is no certificate." in text
    assert text != inspection.render(pipeline.inspected(file))
