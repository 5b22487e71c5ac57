"""What the reports hold, and that nothing from a file can be taken for anything else."""

from __future__ import annotations

import csv
import hashlib
import json
from collections.abc import Iterator
from dataclasses import replace
from io import StringIO
from math import inf, nan
from pathlib import Path
from typing import Any
from xml.etree import ElementTree as ET

import pytest
import xmlschema
from jsonschema import Draft7Validator

from filtercheck import demo, pipeline
from filtercheck.errors import InputError
from filtercheck.model.verdict import Finding, Judged, Outcome, Run, Verdict, decide
from filtercheck.position import Position
from filtercheck.report import console, curve, evidence, junit

ROOT = Path(__file__).parent.parent.parent
XSD = xmlschema.XMLSchema(str(ROOT / "tests" / "reference" / "junit-10.xsd"))
SCHEMA = json.loads((ROOT / "schemas" / "evidence.schema.json").read_text("utf-8"))
HOSTILE = ["<script>", "]]>&amp;", "::error::x", "a\nb", "a\x1b[2Jb", "a\u202eb", "a|`b`", "\ud800"]


@pytest.fixture(scope="module")
def run(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Run]:
    """The example board, one filter spoiled, one file broken, one circuit without loss."""
    with pytest.MonkeyPatch.context() as patch:
        patch.chdir(tmp_path_factory.mktemp("board"))
        yield judged_board()


def judged_board() -> Run:
    demo.write(Path())
    spoiled = Path(demo.SPOILED)
    spoiled.write_text(spoiled.read_text("utf-8").replace(demo.GOOD, demo.BAD), "utf-8")
    Path("filters/broken.filter.yaml").write_text("filter: x\n", "utf-8")
    case = ROOT / "tests" / "cases" / "gain" / "undecided" / "no-loss.filter.yaml"
    Path("filters/no-loss.filter.yaml").write_text(case.read_text("utf-8"), "utf-8")
    return pipeline.judged([])


def finding(margin: float) -> Finding:
    return Finding("gain", "at most", 1.0, 1.0 - margin, "level", margin, margin, "level", 1e3)


def hostile(text: str) -> Run:
    at = Position(f"{text}.yaml", 3, 1, 4, text)
    findings = (replace(finding(-1.0), note=text),)
    verdict = Verdict("f", "R-1", "gain", "out", "nominal", Outcome.FAIL, findings, text, (), at)
    fault = InputError(text, at, found=text, allowed=text, fix=text)
    return Run("", (Judged("f", text, text, (), (verdict,)),), (fault,), {text: "0" * 64})


@pytest.mark.parametrize(
    ("certain", "reached", "outcome"),
    [
        (0.0, 0.1, Outcome.PASS),  # on the limit is inside it
        (-0.1, -0.1, Outcome.FAIL),
        (-0.1, 0.1, Outcome.UNDECIDED),  # the bound is loose, nothing crosses
        (nan, nan, Outcome.UNDECIDED),
        (inf, inf, Outcome.PASS),
        (-inf, -inf, Outcome.FAIL),
    ],
)
def test_decide(certain: float, reached: float, outcome: Outcome) -> None:
    one = replace(finding(0.0), certain=certain, reached=reached)

    assert decide([one]) is outcome
    assert decide([finding(1.0), one]) is outcome


def test_no_findings_are_no_pass() -> None:
    assert decide([]) is Outcome.UNDECIDED


def test_junit_is_valid_and_has_a_case_for_each_requirement(run: Run) -> None:
    text = junit.render(run)
    XSD.validate(text)
    root = ET.fromstring(text)  # noqa: S314  (our own output)
    cases = root.findall("testsuite/testcase")
    keys = [(case.get("classname"), case.get("name")) for case in cases]

    assert len(set(keys)) == len(keys) == len(run.verdicts) + 1
    assert root.get("tests") == str(len(keys))
    assert root.get("failures") == str(len(root.findall("testsuite/testcase/failure"))) == "2"
    assert root.get("errors") == str(len(root.findall("testsuite/testcase/error"))) == "2"
    for case in cases:
        for fault in case:
            assert fault.get("message")
            assert fault.text
            if fault.tag == "failure":
                assert fault.get("message", "") in fault.text
                assert "margin" in fault.text
                assert "vibration-antialias.filter.yaml:" in fault.text


def test_evidence_is_valid_and_traces_its_inputs(run: Run) -> None:
    found: dict[str, Any] = json.loads(evidence.render(run))
    Draft7Validator(SCHEMA).validate(found)

    assert found["board"] == "bridge-logger"
    assert found["complete"] is False
    assert [fault["file"] for fault in found["faults"]][:1] == ["filters/broken.filter.yaml"]
    assert len(found["filters"]) == 6
    files = sorted(path.as_posix() for path in Path().rglob("*.yaml"))
    assert sorted(found["inputs"]) == files
    for name, digest in found["inputs"].items():
        assert digest == hashlib.sha256(Path(name).read_bytes()).hexdigest()
    assert {one["file"] for one in found["filters"]} < set(files)
    by_name = {one["filter"]: one for one in found["filters"]}
    spoiled = by_name["vibration-antialias"]
    assert spoiled["parts"]["R312"]["resistance"] == 48700.0
    assert spoiled["requirements"]["VIB-1"]["verdict"] == "fail"
    assert spoiled["requirements"]["VIB-1"]["findings"][0]["margin"] < 0
    split = by_name["band-splitter"]["parts"]
    assert split["R106"] == {
        "resistance": 10700.0,
        "unit": "ohm",
        "ideal": 10610.0,
        "series": "E96",
        "tolerance": [-0.01, 0.01],
        "network": None,
        "track": None,
        "distribution": "uniform",
        "changed": False,
    }
    assert split["U101A"]["amplifier"]["gain_bandwidth"]["min"] == 8e6


@pytest.mark.parametrize("value", [inf, -inf, nan])
def test_evidence_states_what_json_cannot(value: float) -> None:
    base = hostile("x")
    verdict = replace(base.verdicts[0], findings=(finding(value),))
    text = evidence.render(replace(base, filters=(replace(base.filters[0], verdicts=(verdict,)),)))
    Draft7Validator(SCHEMA).validate(json.loads(text))

    margin = json.loads(text)["filters"][0]["requirements"]["R-1"]["findings"][0]["margin"]
    assert margin == {inf: "infinity", -inf: "-infinity"}.get(value, "none")


@pytest.mark.parametrize("text", HOSTILE)
def test_hostile_texts_come_out_inert(text: str) -> None:
    bad = hostile(text)
    document = junit.render(bad)
    XSD.validate(document)
    (failure,) = ET.fromstring(document).iter("failure")  # noqa: S314  (our own output)
    Draft7Validator(SCHEMA).validate(json.loads(evidence.render(bad)))
    for shown in (failure.get("message", ""), console.render(bad), document):
        assert "\x1b" not in shown
        assert "\u202e" not in shown
        assert "<script>" not in document
    assert "\n" not in failure.get("message", "")


def test_console_fits_80_columns_and_puts_the_worst_first(run: Run) -> None:
    text = console.render(run)
    rows = text.split("\n\n")[1].splitlines()[1:]

    assert max(map(len, text.splitlines())) <= 80
    order = [row.split()[0] for row in rows]
    assert order == sorted(order, key=["FAIL", "UNDECIDED", "pass"].index)
    assert len(rows) == len(run.verdicts)
    tight = [one.findings[0].tightness_db for one in run.verdicts if one.outcome is Outcome.PASS]
    passes = [row for row in rows if row.startswith("pass")]
    assert len(tight) == len(passes)
    for row in rows:
        if not row.startswith("UNDECIDED"):
            assert "dB" in row or "%" in row
            assert "Hz" in row or " - " in row  # a share has no frequency
    for fault in run.verdicts:
        if fault.outcome is not Outcome.PASS:
            assert f"{fault.filter} {fault.requirement}" in text
            assert f"at {fault.at}" in text


def test_console_says_what_the_figures_rest_on() -> None:
    case = ROOT / "tests" / "reading" / "sound" / "sections.filter.yaml"
    text = console.render(pipeline.judged([str(case)], ["R8=11k"]))
    said = " ".join(text.split())

    assert "not checked against any series: R2, R3, R4, R5, R6, R7, C2, C3" in said
    assert "U1 with ideal gain-bandwidth and open-loop gain" in said
    assert "R8 11 kΩ by --set, not as in the file" in said
    assert "tolerances are not considered" in said
    assert "A computed check is no certificate." in said


def test_console_copes_with_the_longest_names() -> None:
    name = "n" * 60
    at = Position(f"{'d' * 200}.filter.yaml", 1, 1, 1, "")
    verdict = Verdict(
        name, name, "gain", name, "nominal", Outcome.FAIL, (finding(-1e9),), "", (), at
    )
    text = console.render(Run("", (Judged(name, "", "", (), (verdict,)),), (), {}))

    assert max(map(len, text.splitlines())) <= 80


def test_equal_runs_give_equal_bytes(run: Run) -> None:
    again = pipeline.judged([], jobs=2)

    for render in (junit.render, evidence.render, console.render):
        assert render(run) == render(again)


def test_curve_is_csv_with_the_promised_columns() -> None:
    case = ROOT / "tests" / "cases" / "gain" / "pass" / "one-pole.filter.yaml"
    samples = pipeline.curves(str(case), None, [0.0, 1000.0]).samples
    rows = list(csv.DictReader(StringIO(curve.render(samples))))

    assert list(rows[0]) == ["output", "frequency_hz", "gain_db", "phase_deg", "group_delay_s"]
    # By hand: 1/(1 + j) at the corner; the delay at 0 Hz is R C = 159.15494309 us.
    assert float(rows[1]["gain_db"]) == pytest.approx(-3.0102999566, abs=1e-6)
    assert float(rows[1]["phase_deg"]) == pytest.approx(-45.0, abs=1e-6)
    assert float(rows[0]["group_delay_s"]) == pytest.approx(159.15494309e-6, rel=1e-9)
    assert rows[0]["gain_db"] == "0"
