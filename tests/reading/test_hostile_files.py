"""Files of strangers: an error at its place, never a traceback, a hang or a look outside."""

from __future__ import annotations

import os
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from filtercheck import pipeline
from filtercheck.errors import InputErrors, UsageError
from filtercheck.model.verdict import Run
from filtercheck.reading.filter_file import subject

SOUND = (Path(__file__).parent / "sound" / "sections.filter.yaml").read_text("utf-8")


@pytest.fixture(autouse=True)
def in_a_folder_of_its_own(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "board").mkdir()
    monkeypatch.chdir(tmp_path / "board")


def judged(content: str | bytes) -> Run:
    data = content.encode() if isinstance(content, str) else content
    Path("x.filter.yaml").write_bytes(data)
    return pipeline.judged([])


@pytest.mark.parametrize(
    ("content", "place", "problem"),
    [
        (SOUND + "# " + "x" * 1_000_000, "1:1", "the file is too large"),
        (SOUND.replace("sound", "x" * 900_000), "2:9", "filter is not acceptable"),
        ("a: " + "[" * 200, "1:68", "nested too deeply is not allowed"),
        (SOUND.replace("sound", "a\0b"), "2:10", "a character is not allowed in YAML"),
        (SOUND.replace("sound", "a\x1b[2Jb"), "2:10", "a character is not allowed in YAML"),
        (SOUND.replace("sound", "ä\xff").encode("latin-1"), "2:9", "the file is not UTF-8"),
        ("a: &a [*a, *a]", "1:4", "an anchor is not allowed"),
    ],
    ids=["large", "long word", "deep", "NUL", "escape", "latin-1", "alias"],
)
def test_refused_at_its_place(content: str | bytes, place: str, problem: str) -> None:
    fault = judged(content).faults[0]

    assert f"{fault.at.line}:{fault.at.column}" == place
    assert fault.problem == problem
    assert len(str(fault)) < 5000


def test_brackets_without_end_are_refused() -> None:
    assert judged("a: " + "[" * 500_000).faults


@pytest.mark.parametrize(
    "junk",
    [
        "".join(f"  X{i}: {{resistance: 1k}}\n" for i in range(30_000)),
        "".join(f"  X{i}: {{resistence: 1k}}\n" for i in range(30_000)),
        "".join(f"key{i}: x\n" for i in range(60_000)),
    ],
    ids=["unused parts", "misspelt parts", "unknown keys"],
)
def test_no_more_errors_than_anyone_reads(junk: str) -> None:
    run = judged(SOUND.replace("outputs:", f"{junk}outputs:", 1))

    assert len(run.faults) == 201
    assert run.faults[-1].problem == "more errors than 200 are not shown"
    assert max(len(str(fault)) for fault in run.faults) < 3000


def test_ten_thousand_unknown_names_are_no_hang() -> None:
    nodes = "".join(f"  Y{i}: [in, out]\n" for i in range(10_000))
    parts = "".join(f"  X{i}: {{resistance: 1k}}\n" for i in range(10_000))
    run = judged(
        f"format: filtercheck-filter/1\nfilter: f\nconnect:\n{nodes}parts:\n{parts}"
        "outputs: {out: out}\nrequirements:\n"
        "  A: {kind: gain, output: out, band: [0, 1], max: 0 dB, verify: nominal}\n"
    )

    assert len(run.faults) == 201
    assert run.faults[0].problem == "there is no part 'Y0'"


def test_names_that_steer_a_terminal_are_shown_as_codes() -> None:
    run = judged(SOUND.replace("sound", "'a\u202eb\u2028c'"))
    shown = str(run.faults[0])

    assert "\u202e" not in shown
    assert "\u2028" not in shown
    assert "\\u202e" in shown


@pytest.mark.parametrize("ending", ["\n", "\r\n"])
@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
def test_line_ends_and_byte_order_marks_are_accepted(ending: str, mark: bytes) -> None:
    run = judged(mark + SOUND.replace("\n", ending).encode())

    assert run.faults == ()
    assert len(run.filters) == 1


def test_a_link_that_leads_out_is_refused_unread(tmp_path: Path) -> None:
    secret = tmp_path / "secret.filter.yaml"
    secret.write_text("filter: the secret\n", "utf-8")
    Path("x.filter.yaml").symlink_to(secret)
    for paths in ([], ["x.filter.yaml"]):
        (fault,) = pipeline.judged(paths).faults
        assert fault.problem == "the file leads outside the folder under check"
        assert "secret" not in str(fault)


def test_a_linked_folder_is_not_entered(tmp_path: Path) -> None:
    (tmp_path / "other").mkdir()
    (tmp_path / "other" / "y.filter.yaml").write_text(SOUND, "utf-8")
    Path("sub").symlink_to(tmp_path / "other")

    with pytest.raises(UsageError, match=r"no \*\.filter\.yaml file"):
        pipeline.judged([])
    Path("filtercheck.yaml").write_text(
        "format: filtercheck-board/1\nboard: b\nfilters: [sub/*.filter.yaml]\n", "utf-8"
    )
    (fault,) = pipeline.judged([]).faults
    assert fault.problem == "the file leads outside the folder under check"


@pytest.mark.parametrize("pattern", ["../*.filter.yaml", "/etc/*", "a/../../*.yaml"])
def test_a_pattern_that_climbs_out_is_refused(pattern: str) -> None:
    Path("filtercheck.yaml").write_text(
        f"format: filtercheck-board/1\nboard: b\nfilters: ['{pattern}']\n", "utf-8"
    )
    with pytest.raises(InputErrors) as raised:
        pipeline.judged([])

    (fault,) = raised.value.errors
    assert str(fault.at) == "filtercheck.yaml:3:11"
    assert fault.problem == "the pattern leads outside the board's folder"


def test_a_pipe_does_not_hang() -> None:
    os.mkfifo("x.filter.yaml")
    (fault,) = pipeline.judged([]).faults

    assert fault.problem == "the file is no ordinary file"


def test_one_bad_file_does_not_hide_the_others() -> None:
    Path("a.filter.yaml").write_text(SOUND, "utf-8")
    Path("b.filter.yaml").write_text("format: [", "utf-8")
    run = pipeline.judged([])

    assert [one.name for one in run.filters] == ["sound"]
    assert [fault.at.file for fault in run.faults] == ["b.filter.yaml"]


def accepted_or_refused(text: str) -> bool:
    try:
        subject(text, "x.filter.yaml")
    except InputErrors as refused:
        return bool(str(refused))
    return True


@settings(max_examples=300, deadline=None)
@given(st.text(max_size=200))
def test_any_text_is_accepted_or_refused(text: str) -> None:
    assert accepted_or_refused(text)


@settings(
    max_examples=400, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
@given(
    st.integers(0, len(SOUND) - 1),
    st.integers(0, 40),
    st.one_of(
        st.text(max_size=8),
        st.sampled_from(["{", "}", "[", "]", ":", ",", "- ", "'", "\n", "\n  ", "*", "&", "!"]),
    ),
)
def test_any_mutation_of_a_sound_file_is_judged_or_refused(at: int, cut: int, put: str) -> None:
    text = SOUND[:at] + put + SOUND[at + cut :]
    run = judged(text.encode("utf-8", "surrogatepass"))

    assert run.filters or run.faults
    assert all(str(fault) for fault in run.faults)
