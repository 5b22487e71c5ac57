"""Every case of `cases/<kind>/<outcome>/`: each requirement in it has that outcome, and the figures
that its head states, worked by hand there."""

from __future__ import annotations

from math import inf, isnan
from pathlib import Path

import pytest
import yaml

from filtercheck import pipeline
from filtercheck.model.verdict import Finding, Verdict
from filtercheck.quantities import parse

CASES = Path(__file__).parent / "cases"
FILES = sorted(CASES.rglob("*.filter.yaml"))


def expectations(file: Path) -> dict[str, dict[str, str]]:
    lines = [line[2:] for line in file.read_text("utf-8").splitlines() if line.startswith("#:")]
    return {name: said for line in lines for name, said in yaml.safe_load(line).items()}


def verdicts(file: Path) -> dict[str, Verdict]:
    run = pipeline.judged([str(file)])
    assert not run.faults, run.faults[0]
    return {verdict.requirement: verdict for verdict in run.verdicts}


def number(text: str, quantity: str) -> float:
    return {"infinite": inf, "-infinite": -inf}.get(str(text)) or parse(str(text), quantity)


def check(finding: Finding, said: dict[str, str]) -> None:
    if said.get("value") == "none":
        assert isnan(finding.value)
    elif "value" in said:
        value = number(said["value"], finding.quantity)
        # Levels are stated to 0.01 mdB, other figures to six digits; a share says itself how far
        # chance may take it.
        away = number(said["within"], finding.quantity) if "within" in said else 2e-5
        assert finding.value == pytest.approx(value, rel=2e-6, abs=away)
    if "margin" in said:
        margin = number(said["margin"], finding.margin_quantity)
        assert finding.reached == pytest.approx(margin, rel=2e-4, abs=2e-5)
    if "at" in said:
        at = number(said["at"], "frequency")
        assert finding.freq_hz == pytest.approx(at, rel=2e-6)


@pytest.mark.parametrize("file", FILES, ids=lambda file: str(file.relative_to(CASES)))
def test_case(file: Path) -> None:
    wanted = expectations(file)
    found = verdicts(file)

    assert set(wanted) == set(found)
    for name, said in wanted.items():
        assert said
        verdict = found[name]
        assert verdict.kind == file.parent.parent.name
        assert verdict.outcome.value == file.parent.name
        if "reason" in said:
            assert verdict.reason.startswith(said["reason"])
            assert not verdict.findings
        else:
            check(verdict.findings[0], said)
