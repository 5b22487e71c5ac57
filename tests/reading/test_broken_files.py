"""Broken files: each gives just the errors that its author needs, at line and column.

A case is an edit of a sound file, in `broken.yaml`.
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
import yaml

from filtercheck import pipeline

HERE = Path(__file__).parent
SOUND = {
    name: (HERE / "sound" / f"{name}.filter.yaml").read_text("utf-8")
    for name in ("sections", "connect")
}
BROKEN: dict[str, dict[str, Any]] = yaml.safe_load((HERE / "broken.yaml").read_text("utf-8"))


def broken(name: str, text: str = SOUND["sections"]) -> str:
    edit = BROKEN["sections"][name]
    return text.replace(edit["from"], edit["to"], 1)


def errors(text: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> list[str]:
    monkeypatch.chdir(tmp_path)
    Path("x.filter.yaml").write_text(text, "utf-8")
    run = pipeline.judged(["x.filter.yaml"])
    for fault in run.faults:
        lines = [*text.splitlines(), ""]
        assert fault.at.text == lines[fault.at.line - 1]
        assert fault.at.file == "x.filter.yaml"
        assert fault.found
        assert fault.allowed
        assert fault.fix
        shown = str(fault).splitlines()
        assert (
            shown[0] == f"x.filter.yaml:{fault.at.line}:{fault.at.column}: error: {fault.problem}"
        )
    return [f"{fault.at.line}:{fault.at.column} {fault.problem}" for fault in run.faults]


@pytest.mark.parametrize("text", SOUND.values(), ids=SOUND)
def test_the_sound_file_is_sound(
    text: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    assert errors(text, tmp_path, monkeypatch) == []


CASES = [
    pytest.param(SOUND[base], edit, id=name)
    for base, edits in BROKEN.items()
    for name, edit in edits.items()
]


@pytest.mark.parametrize(("sound", "edit"), CASES)
def test_broken(
    sound: str, edit: dict[str, Any], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    assert edit["from"] in sound
    assert edit["gives"]

    text = sound.replace(edit["from"], edit["to"], 1)
    assert errors(text, tmp_path, monkeypatch) == edit["gives"]


def test_all_errors_of_a_file_are_given_at_once(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    text = SOUND["sections"]
    for name in ("not a number", "negative figure", "unknown kind", "dB left out", "format"):
        assert broken(name, text) != text
        text = broken(name, text)

    found = errors(text, tmp_path, monkeypatch)
    assert len(found) == 5
    assert found == sorted(found, key=lambda error: [int(n) for n in error.split()[0].split(":")])


@pytest.mark.parametrize(
    ("broken", "text"),
    [
        ("", "the file is empty"),
        ("# only a comment\n", "the file is empty"),
        ("a: [b\n", "the file is not well-formed YAML"),
        ("a: 'b\n", "the file is not well-formed YAML"),
        ("a:\n\t- b\n", "the file is not well-formed YAML"),
        ("? [a]\n: b\n", "a key that is no word is not allowed"),
        ("just words\n", "the file has the wrong form"),
    ],
)
def test_files_that_are_no_mapping(
    broken: str, text: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    found = errors(broken, tmp_path, monkeypatch)

    assert found
    assert found[0].partition(" ")[2] == text


def test_the_message_shows_the_line_a_mark_and_a_way_out(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    Path("x.filter.yaml").write_text(broken("outside its series"), "utf-8")
    (fault,) = pipeline.judged(["x.filter.yaml"]).faults

    assert (
        str(fault)
        == """\
x.filter.yaml:12:20: error: R1 is not an E96 value
 12 |   R1: {resistance: 10k6, series: E96, tolerance: 1 %}
    |                    ^^^^
  found    10.6 kΩ
  allowed  E96 values (IEC 60063); the nearest are 10.5 kΩ and 10.7 kΩ
  fix      write 10.5 kΩ or 10.7 kΩ, or mend `series`"""
    )


def test_the_mark_stands_under_its_place_after_wide_signs_and_tabs(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    text = SOUND["sections"].replace("R5: {resistance: 20k}", "R5: {ideal: 4.7 kΩ,\tseries: E95}")
    Path("x.filter.yaml").write_text(text, "utf-8")
    (fault,) = pipeline.judged(["x.filter.yaml"]).faults
    _, line, mark, *_ = str(fault).splitlines()

    assert line.index("E95") == mark.index("^")
    assert line[: line.index("E95")].count("\t") == mark.count("\t") == 1


def test_the_same_filter_twice_names_both_places(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    for name in ("a", "b"):
        Path(f"{name}.filter.yaml").write_text(SOUND["sections"], "utf-8")
    run = pipeline.judged([])

    assert [judged.name for judged in run.filters] == ["sound"]
    (fault,) = run.faults
    assert str(fault.at) == "b.filter.yaml:2:9"
    assert fault.found == "first at a.filter.yaml:2:9"
