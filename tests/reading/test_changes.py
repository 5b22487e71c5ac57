"""`--set`: another value is fitted, or it is said why not."""

from __future__ import annotations

from pathlib import Path

import pytest

from filtercheck import pipeline
from filtercheck.errors import UsageError
from filtercheck.model.part import OpAmp, Passive

SOUND = (Path(__file__).parent / "sound" / "sections.filter.yaml").read_text("utf-8")


@pytest.fixture(autouse=True)
def files(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    Path("a.filter.yaml").write_text(SOUND, "utf-8")
    other = SOUND.replace("filter: sound", "filter: other").replace("R8", "R88")
    Path("b.filter.yaml").write_text(other, "utf-8")


def part(setting: str, filter_name: str, designator: str) -> Passive | OpAmp:
    run = pipeline.judged([], [setting])
    (judged,) = (one for one in run.filters if one.name == filter_name)
    (found,) = (one for one in judged.parts if one.designator == designator)
    return found


@pytest.mark.parametrize(
    ("setting", "filter_name", "value"),
    [("R88=11k5", "other", 11500.0), ("sound:R1 = 4.7 kΩ", "sound", 4700.0)],
)
def test_a_value_is_set(setting: str, filter_name: str, value: float) -> None:
    designator = setting.partition("=")[0].strip().rpartition(":")[2]
    found = part(setting, filter_name, designator)

    assert isinstance(found, Passive)
    assert (found.value, found.changed, found.series) == (value, True, None)


def test_figures_of_an_amplifier_are_set() -> None:
    found = part("sound:U2.gain_bandwidth=5MHz", "sound", "U2")
    ideal = part("sound:U2.open_loop_gain=ideal", "sound", "U2")

    assert isinstance(found, OpAmp)
    assert found.gain_bandwidth is not None
    assert found.gain_bandwidth.typical == 5e6
    assert found.open_loop_gain is not None
    assert isinstance(ideal, OpAmp)
    assert ideal.open_loop_gain is None
    assert ideal.gain_bandwidth is not None


@pytest.mark.parametrize(
    ("setting", "said"),
    [
        ("R1=11k5", "R1 is a part of sound and other; write FILTER:R1="),
        ("R89=11k5", "there is no part R89; is R8 meant?"),
        ("sound:R88=1k", "there is no part R88 in sound"),
        ("R88", "write --set R4=11k5"),
        ("R88=", "write --set R4=11k5"),
        ("R88=10 nF", "the unit F does not fit a resistance"),
        ("R88=0", "the value is not positive"),
        ("R88=-1k", "the value is not positive"),
        ("R88.gain_bandwidth=1k", "R88 has one value and no figures"),
        ("sound:U2=1 MHz", "write U2.gain_bandwidth=… or U2.open_loop_gain=…"),
        ("sound:U2.noise=1", "U2 is an amplifier"),
    ],
)
def test_what_cannot_be_set(setting: str, said: str) -> None:
    with pytest.raises(UsageError) as raised:
        pipeline.judged([], [setting])

    assert said in str(raised.value)
    assert setting in str(raised.value)


def test_check_and_response_see_the_same_change() -> None:
    before = pipeline.curves("a.filter.yaml", "low", [1000.0]).samples[0].gain_db
    after = pipeline.curves("a.filter.yaml", "low", [1000.0], ["R1=20k"]).samples[0].gain_db
    # By hand: the one-pole section has R C = 0.1 ms, doubled by the change.
    x = (2 * 3.141592653589793 * 1000.0 * 1e-4) ** 2
    from math import log10

    assert after - before == pytest.approx(10 * log10((1 + x) / (1 + 4 * x)), abs=1e-9)
