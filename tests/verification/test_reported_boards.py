"""What is reported of a worst board can be computed again, and is what the report says."""

from __future__ import annotations

import csv
import shlex
from io import StringIO
from itertools import pairwise
from pathlib import Path

import pytest

from filtercheck import cli, demo, pipeline
from filtercheck.model.part import Passive
from filtercheck.model.verdict import Outcome, Run
from filtercheck.report import sentences

LEVELS = ("gain", "attenuation", "ripple")
FAILS = [
    Path(__file__).parent.parent / "cases" / kind / "fail" / "tolerances.filter.yaml"
    for kind in LEVELS
]


def commands(run: Run) -> list[tuple[str, float, float | None]]:
    """Return for each level that fails the command, the value and the level referred to."""
    found = []
    for judged in run.filters:
        for verdict in judged.verdicts:
            finding = verdict.findings[0]
            if verdict.outcome is Outcome.FAIL and finding.quantity == "level":
                said = sentences.recomputed(verdict, finding, judged)
                found.append((said, finding.value, finding.reference_hz))
    return found


@pytest.mark.parametrize("file", FAILS, ids=lambda file: file.parent.parent.name)
def test_the_command_that_is_shown_gives_the_figure_that_is_shown(
    file: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    for command, value, reference_hz in commands(pipeline.judged([str(file)])):
        program, *arguments = shlex.split(command)
        assert (program, cli.main(arguments)) == ("filtercheck", 0)
        rows = list(csv.DictReader(StringIO(capsys.readouterr().out)))
        levels = [float(row["gain_db"]) for row in rows]
        figure = levels[0] if reference_hz is None else abs(levels[0] - levels[1])
        assert figure == pytest.approx(value, abs=1e-7)


def test_random_boards_miss_what_the_proof_finds(tmp_path: Path) -> None:
    demo.write(tmp_path)
    file = tmp_path / "filters" / "mains-notch.filter.yaml"
    sampled = {one.requirement: one for one in pipeline.judged([str(file)]).verdicts}["HUM-1"]
    text = file.read_text("utf-8")
    (line,) = [line for line in text.splitlines(keepends=True) if "verify:" in line]
    file.write_text(text.replace(line, ""), "utf-8")
    proved = {one.requirement: one for one in pipeline.judged([str(file)]).verdicts}["HUM-1"]

    assert (sampled.verify, sampled.outcome) == ("yield", Outcome.PASS)
    assert sampled.findings[0].value == 1.0
    assert (proved.verify, proved.outcome) == ("worst-case", Outcome.FAIL)
    assert proved.findings[0].reached < -0.1


def test_a_ladder_of_18_free_parts_is_judged(tmp_path: Path) -> None:
    nodes = ["in", *(f"n{i}" for i in range(1, 9)), "out"]
    connect, parts = [], []
    for i, (one, other) in enumerate(pairwise(nodes), 1):
        connect += [f"  R{i}: [{one}, {other}]", f"  C{i}: [{other}, ground]"]
        parts += [
            f"  R{i}: {{resistance: 1k, tolerance: 1 %}}",
            f"  C{i}: {{capacitance: 10 nF, tolerance: 5 %}}",
        ]
    # By hand: every part delays, so that the gain is lowest with all parts at their upper ends,
    # in the pass band as in the stop band: it is highest with all at their lower ends.
    text = ["format: filtercheck-filter/1", "filter: ladder", "connect:", *connect, "parts:"]
    text += [*parts, "outputs: {out: out}", "requirements:"]
    text += ["  P: {kind: gain, output: out, band: [0, 200 Hz], min: -2 dB}"]
    text += ["  S: {kind: gain, output: out, band: [20 kHz, up], max: -40 dB}"]
    (tmp_path / "ladder.filter.yaml").write_text("\n".join(text), "utf-8")
    low, high = pipeline.judged([str(tmp_path / "ladder.filter.yaml")]).verdicts

    for verdict, resistance, capacitance in ((low, 1010.0, 10.5e-9), (high, 990.0, 9.5e-9)):
        assert verdict.outcome is Outcome.PASS
        (finding,) = verdict.findings
        assert 0.0 <= finding.reached - finding.certain <= 0.01
        values = {one.designator: one.value for one in finding.worst if isinstance(one, Passive)}
        expected = {name: resistance if name[0] == "R" else capacitance for name in values}
        assert values == pytest.approx(expected)
