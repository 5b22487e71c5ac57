"""The same input gives the same bytes: again, in several processes, in any order of files."""

from __future__ import annotations

from pathlib import Path

import pytest

from filtercheck import pipeline
from filtercheck.report import REPORTERS, console

CASES = Path(__file__).parent / "cases"
FILES = [
    "gain/pass/tolerances.filter.yaml",
    "gain/fail/tolerances.filter.yaml",
    "ripple/fail/tolerances.filter.yaml",
    "corner/pass/yield.filter.yaml",
    "gain/undecided/yield.filter.yaml",
]


@pytest.fixture
def files(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> list[str]:
    for number, inside in enumerate(FILES):
        text = (CASES / inside).read_text("utf-8")
        (tmp_path / f"{number}.filter.yaml").write_text(text, "utf-8")
    monkeypatch.chdir(tmp_path)
    return [f"{number}.filter.yaml" for number in range(len(FILES))]


def texts(paths: list[str], jobs: int) -> list[str]:
    run = pipeline.judged(paths, jobs=jobs)
    assert len(run.filters) == len(FILES)
    return [console.render(run), *(render(run) for render in REPORTERS.values())]


def test_any_number_of_processes_and_any_order_give_the_same_bytes(files: list[str]) -> None:
    once = texts(files, 1)

    assert texts(files, 1) == once
    assert texts(files, 3) == once
    assert texts(files[::-1], 2) == once


def test_faults_come_back_from_other_processes(files: list[str]) -> None:
    Path("shorted.filter.yaml").write_text(SHORTED, "utf-8")
    one, two = (pipeline.judged([*files, "shorted.filter.yaml"], jobs=n) for n in (1, 2))

    assert [str(fault) for fault in one.faults] == [str(fault) for fault in two.faults] != []


SHORTED = """\
format: filtercheck-filter/1
filter: shorted
connect:
  R1: [in, a]
  U1: {plus: a, minus: a2, out: in}
  R2: [a, a2]
parts:
  R1: {resistance: 1k}
  R2: {resistance: 1k}
  U1: {amplifier: ideal}
outputs: {out: a}
requirements:
  G: {kind: gain, output: out, band: [0, 1 kHz], max: 0 dB}
"""
