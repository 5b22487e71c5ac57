"""Inputs at the edge of what can be written: judged or refused, never a traceback or a hang."""

from __future__ import annotations

import resource
import subprocess
import sys
from pathlib import Path

import pytest

from filtercheck import cli, pipeline
from filtercheck.errors import InputErrors, UsageError
from filtercheck.model.verdict import Outcome

SOUND = (Path(__file__).parent / "sound" / "sections.filter.yaml").read_text("utf-8")
CONNECT = (Path(__file__).parent / "sound" / "connect.filter.yaml").read_text("utf-8")
BOARD = "format: filtercheck-board/1\nboard: b\n"


@pytest.fixture(autouse=True)
def in_a_folder_of_its_own(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)


def limited() -> None:
    resource.setrlimit(resource.RLIMIT_AS, (4 << 30, 4 << 30))


def check(*arguments: str) -> tuple[int, str]:
    ended = subprocess.run(
        [sys.executable, "-W", "error", "-m", "filtercheck", "check", *arguments],
        capture_output=True,
        text=True,
        check=False,
        timeout=20,
        preexec_fn=limited,
    )
    return ended.returncode, ended.stderr


@pytest.mark.parametrize("value", ["1e-30", "1e-200", "1e-308", "5e-324", "1e30", "1e200", "1e308"])
@pytest.mark.parametrize("part", ["R2: {resistance: 10k}", "C2: {capacitance: 10 nF}"])
def test_a_value_far_out_is_judged_or_refused(part: str, value: str) -> None:
    number = part.split(": ")[2].rstrip("}")
    Path("x.filter.yaml").write_text(SOUND.replace(part, part.replace(number, value)), "utf-8")
    status, said = check("x.filter.yaml")
    assert "Traceback" not in said
    assert "Warning" not in said
    assert status in (0, 1, 2)


@pytest.mark.parametrize(
    "edit",
    [
        ("500 Hz]", "1e300 Hz]"),
        ("reference: 1,", "reference: 1e300,"),
        ("gain_bandwidth: 10 MHz", "gain_bandwidth: 1e308"),
    ],
)
def test_a_frequency_far_out_is_judged_or_refused(edit: tuple[str, str]) -> None:
    Path("x.filter.yaml").write_text(SOUND.replace(*edit), "utf-8")
    assert "Warning" not in check("x.filter.yaml")[1]


@pytest.mark.parametrize("value", ["0", "-0", "-5"])
def test_an_ideal_value_that_is_not_positive_is_refused_at_its_place(value: str) -> None:
    text = SOUND.replace("R2: {resistance: 10k}", f"R2: {{ideal: {value}, series: E96}}")
    Path("x.filter.yaml").write_text(text, "utf-8")
    (fault,) = pipeline.judged(["x.filter.yaml"]).faults
    assert str(fault.at) == "x.filter.yaml:13:15"


@pytest.mark.parametrize("pattern", [".", "**b", "a/**b", "./"])
def test_a_pattern_that_is_none_is_an_error_at_its_place(pattern: str) -> None:
    Path("x.filter.yaml").write_text(SOUND, "utf-8")
    Path("filtercheck.yaml").write_text(f"{BOARD}filters: ['{pattern}']\n", "utf-8")
    with pytest.raises(InputErrors) as raised:
        pipeline.judged([])
    assert str(raised.value.errors[0].at) == "filtercheck.yaml:3:11"


def test_a_pattern_of_many_stars_ends() -> None:
    Path("b/" + "/".join("abcdefghij")).mkdir(parents=True)
    Path("b/x.filter.yaml").write_text(SOUND, "utf-8")
    Path("b/filtercheck.yaml").write_text(
        f"{BOARD}filters: ['{'**/' * 20}x.filter.yaml']\n", "utf-8"
    )
    assert check("b")[0] in (0, 2)


def test_a_link_to_itself_is_a_fault_and_hides_no_other_file() -> None:
    Path("x.filter.yaml").symlink_to("x.filter.yaml")
    Path("y.filter.yaml").write_text(SOUND, "utf-8")
    run = pipeline.judged([])
    assert [fault.at.file for fault in run.faults] == ["x.filter.yaml"]
    assert len(run.filters) == 1


def test_the_place_of_a_bad_byte_behind_a_byte_order_mark() -> None:
    Path("x.filter.yaml").write_bytes(b"\xef\xbb\xbfab\xff")
    (fault,) = pipeline.judged(["x.filter.yaml"]).faults
    assert (str(fault.at), fault.found) == ("x.filter.yaml:1:3", "byte 0xff")


def test_the_place_of_a_bad_byte_behind_carriage_returns() -> None:
    Path("x.filter.yaml").write_bytes(b"format: x\rfilter: \xff\r")
    (fault,) = pipeline.judged(["x.filter.yaml"]).faults
    assert str(fault.at) == "x.filter.yaml:2:9"


def test_a_path_through_dots_leads_to_the_same_file() -> None:
    Path("t/a").mkdir(parents=True)
    Path("t/x.filter.yaml").write_text(SOUND, "utf-8")
    assert pipeline.judged(["t", "t/a/.."]).faults == ()


@pytest.mark.parametrize("option", ["--junit", "--evidence"])
def test_an_empty_name_of_a_report_is_refused(option: str) -> None:
    Path("x.filter.yaml").write_text(SOUND, "utf-8")
    assert cli.main(["check", option, ""]) == 2


@pytest.mark.parametrize(
    "amplifier",
    ["ideal", "{gain_bandwidth: ideal, open_loop_gain: 110 dB}"],
)
def test_an_amplifier_with_its_inputs_exchanged_does_not_pass(amplifier: str) -> None:
    text = CONNECT.replace("{plus: a, minus: out, out: out}", "{plus: out, minus: a, out: out}")
    Path("x.filter.yaml").write_text(text.replace("amplifier: ideal", f"amplifier: {amplifier}"))
    run = pipeline.judged(["x.filter.yaml"])
    assert run.faults or [one.outcome for one in run.verdicts] != [Outcome.PASS]


@pytest.mark.parametrize("key", ["series: E96", "tolerance: 5 %"])
def test_an_amplifier_has_neither_series_nor_tolerance(key: str) -> None:
    text = SOUND.replace("U1: {amplifier: ideal}", f"U1: {{amplifier: ideal, {key}}}")
    Path("x.filter.yaml").write_text(text, "utf-8")
    assert pipeline.judged(["x.filter.yaml"]).faults


def test_an_attenuation_is_not_negative() -> None:
    """The schema says of `min`: a positive level. Ripple refuses it already."""
    text = SOUND.replace(
        "kind: gain, output: low, band: [0 Hz, 500 Hz], min: -1 dB, max: 1 dB",
        "kind: attenuation, output: low, band: [5k, up], min: -20 dB, reference: 1",
    )
    Path("x.filter.yaml").write_text(text, "utf-8")
    assert pipeline.judged(["x.filter.yaml"]).faults


def test_a_dot_without_a_figure_is_refused() -> None:
    Path("x.filter.yaml").write_text(SOUND, "utf-8")
    with pytest.raises(UsageError):
        pipeline.judged(["x.filter.yaml"], ["R5.=1k"])


def test_an_empty_key_is_said_to_be_nothing() -> None:
    Path("x.filter.yaml").write_text(SOUND.replace("R5: {resistance", "R5: {''"), "utf-8")
    assert all(fault.found for fault in pipeline.judged(["x.filter.yaml"]).faults)


def test_a_folder_that_cannot_be_listed_is_not_passed_over(monkeypatch: pytest.MonkeyPatch) -> None:
    """os.walk drops errors unless told otherwise; scandir stands for a folder without leave."""
    import os

    Path("a.filter.yaml").write_text(SOUND, "utf-8")
    Path("locked").mkdir()
    listed = os.scandir

    def scandir(path: str) -> object:
        if Path(path).name == "locked":
            raise PermissionError(13, "Permission denied", str(path))
        return listed(path)

    monkeypatch.setattr(os, "scandir", scandir)
    assert cli.main(["check"]) == 2


def test_a_frequency_of_a_response_far_out_is_refused(capsys: pytest.CaptureFixture[str]) -> None:
    Path("x.filter.yaml").write_text(SOUND, "utf-8")

    assert cli.main(["response", "x.filter.yaml", "--at", "1e300"]) == 2
    assert "a size from 1e-18 to 1e18" in capsys.readouterr().err
