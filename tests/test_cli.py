"""Commands as a user gives them: exit status, files written, messages."""

from __future__ import annotations

import csv
import os
import subprocess
import sys
from io import StringIO
from pathlib import Path

import pytest

from filtercheck import cli, demo, explain, pipeline
from filtercheck.circuits import CIRCUITS
from filtercheck.requirements import KINDS

SOUND = (Path(__file__).parent / "reading" / "sound" / "sections.filter.yaml").read_text("utf-8")


@pytest.fixture(autouse=True)
def in_a_folder_of_its_own(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    Path("a.filter.yaml").write_text(SOUND, "utf-8")


def test_status_0_when_everything_holds(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["check", "a.filter.yaml"]) == 0
    shown = capsys.readouterr()
    assert "2 requirements of 1 filter: 2 pass" in shown.out
    assert shown.err == ""


def test_status_1_when_a_requirement_fails_or_is_undecided() -> None:
    assert cli.main(["check", "--set", "C1=100n"]) == 1
    lossless = Path(__file__).parent / "cases" / "gain" / "undecided" / "no-loss.filter.yaml"
    assert cli.main(["check", str(lossless)]) == 1


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        (["check", "nowhere"], "nowhere does not exist"),
        (["check", "--set", "R99=1k"], "there is no part R99"),
        (["check", "--junit", "a.filter.yaml"], "not written over a file under check"),
        (["check", "--junit", "x", "--evidence", "./x"], "two reports"),
        (["check", "--junit", "a.filter.yaml/x"], "cannot be written"),
        (["response", "a.filter.yaml", "--output", "lo"], "there is no output 'lo'"),
        (["response", "a.filter.yaml", "--at", "1 mhz"], "the prefix is not clear"),
        (["response", "a.filter.yaml", "--at", "-1"], "not negative"),
        (["response", "a.filter.yaml", "--band", "1k", "10"], "two rising frequencies"),
        (["response", "a.filter.yaml", "--points", "1"], "2 points or more"),
        (["explain", "gian"], "is gain meant?"),
    ],
)
def test_status_2_when_the_arguments_are_at_fault(
    arguments: list[str], said: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert cli.main(arguments) == 2
    assert said in capsys.readouterr().err


@pytest.mark.parametrize(
    "arguments", [[], ["chek"], ["check", "--jnit", "x"], ["response"], ["check", "--jun", "x"]]
)
def test_status_2_when_the_usage_is_wrong(arguments: list[str]) -> None:
    with pytest.raises(SystemExit) as ended:
        cli.main(arguments)

    assert ended.value.code == 2


def test_status_2_when_a_file_is_at_fault_and_the_reports_say_so(
    capsys: pytest.CaptureFixture[str],
) -> None:
    Path("b.filter.yaml").write_text("filter: [\n", "utf-8")

    assert cli.main(["check", "--junit", "j.xml", "--evidence", "e.json"]) == 2
    shown = capsys.readouterr()
    assert "1 file could not be judged" in shown.out
    assert "b.filter.yaml:2:1: error: the file is not well-formed YAML" in shown.err
    assert "b.filter.yaml" in Path("j.xml").read_text("utf-8")
    assert '"complete": false' in Path("e.json").read_text("utf-8")


def test_status_2_when_the_program_is_at_fault(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    def broken(*_: object) -> None:
        raise ZeroDivisionError("planted")

    monkeypatch.setattr(pipeline, "judged", broken)

    assert cli.main(["check"]) == 2
    assert "planted" in capsys.readouterr().err


def test_a_report_that_cannot_be_written_leaves_the_old_one_whole(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    Path("j.xml").write_text("old", "utf-8")

    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "replace", full)

    assert cli.main(["check", "--junit", "j.xml"]) == 2
    assert Path("j.xml").read_text("utf-8") == "old"
    assert sorted(path.name for path in Path().iterdir()) == ["a.filter.yaml", "j.xml"]


def test_reports_go_into_folders_that_are_made_for_them() -> None:
    assert cli.main(["check", "--junit", "out/deep/j.xml"]) == 0
    assert Path("out/deep/j.xml").read_text("utf-8").startswith("<?xml")


def test_two_runs_give_equal_bytes() -> None:
    for name in ("one", "two"):
        cli.main(["check", "--junit", f"{name}.xml", "--evidence", f"{name}.json"])

    assert Path("one.xml").read_bytes() == Path("two.xml").read_bytes()
    assert Path("one.json").read_bytes() == Path("two.json").read_bytes()


def rows(capsys: pytest.CaptureFixture[str]) -> list[dict[str, str]]:
    return list(csv.DictReader(StringIO(capsys.readouterr().out)))


def test_response_at_points_and_over_a_band(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["response", "a.filter.yaml", "--output", "low", "--at", "100,1k,10k"]) == 0
    assert [row["frequency_hz"] for row in rows(capsys)] == ["100", "1000", "10000"]

    band = ["--band", "10", "100k", "--points", "5"]
    assert cli.main(["response", "a.filter.yaml", *band]) == 0
    found = rows(capsys)
    assert [float(r["frequency_hz"]) for r in found[:5]] == pytest.approx([10, 1e2, 1e3, 1e4, 1e5])
    assert [row["output"] for row in found] == ["low"] * 5 + ["band"] * 5


def test_response_warns_of_a_circuit_that_oscillates(capsys: pytest.CaptureFixture[str]) -> None:
    case = Path(__file__).parent / "cases" / "gain" / "fail" / "unstable.filter.yaml"

    assert cli.main(["response", str(case), "--at", "1k"]) == 0
    assert "not shown stable" in capsys.readouterr().err


def test_demo_keeps_what_was_edited() -> None:
    demo.write(Path("board"))
    demo.write(Path("board"))
    edited = Path("board") / demo.SPOILED
    text = edited.read_text("utf-8").replace(demo.GOOD, demo.BAD)
    edited.write_text(text, "utf-8")

    assert cli.main(["demo", "board"]) == 2
    assert edited.read_text("utf-8") == text
    assert cli.main(["check", str(edited)]) == 1


@pytest.mark.parametrize(
    "topic", [*KINDS, *CIRCUITS, *explain.FORMATS, *explain.NOTATIONS, ""], ids=str
)
def test_every_topic_is_explained_within_80_columns(
    topic: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert cli.main(["explain", *([topic] if topic else [])]) == 0
    text = capsys.readouterr().out

    assert len(text) > 100
    assert [line for line in text.splitlines() if len(line) > 80] == []
    if topic in {**KINDS, **CIRCUITS}:
        assert f"kind: {topic}\n" in text or f"circuit: {topic}\n" in text


def test_a_closed_pipe_is_no_traceback() -> None:
    code = "import sys; from filtercheck.cli import main; sys.exit(main(['explain', 'filter']))"
    command = f'"{sys.executable}" -c "{code}" | head -c 1; exit ${{PIPESTATUS[0]}}'
    ended = subprocess.run(["bash", "-c", command], capture_output=True, text=True, check=False)

    assert ended.stderr == ""


def test_a_plain_check_imports_nothing_heavy() -> None:
    code = (
        "import sys; from filtercheck.cli import main; main(['check', 'a.filter.yaml']);"
        "heavy = {'scipy', 'matplotlib', 'jinja2', 'rich', 'pytest'} & set(sys.modules);"
        "sys.exit(f'imported {heavy}' if heavy else 0)"
    )
    ended = subprocess.run(
        [sys.executable, "-c", code],
        capture_output=True,
        text=True,
        check=False,
        env={**os.environ, "PYTHONWARNINGS": "error"},
    )

    assert (ended.returncode, ended.stderr) == (0, "")


def test_units_are_printed_whatever_the_locale() -> None:
    ended = subprocess.run(
        [sys.executable, "-m", "filtercheck", "check", "--set", "R2=11k"],
        capture_output=True,
        check=False,
        env={**os.environ, "LC_ALL": "C", "PYTHONIOENCODING": "ascii"},
    )

    assert "R2 11 kΩ" in ended.stdout.decode("utf-8")
