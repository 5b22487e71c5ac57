"""State-variable sections whose op-amps cost them damping: stable boxes are shown stable and
their limits proved; a box with an oscillator in it shows one.

With gain-bandwidth GBW in all op-amps Q is about Q0/(1 - 4 Q0 f0/GBW) (common practice, no
source), so that Q0 = 20 lives through 0.005 but not, with 30 % less speed, through 0.01.
"""

from __future__ import annotations

from pathlib import Path

import pytest
from sampling import FEEDBACK, HEAD
from state_variable import boards, gain_db, numbers, poles, stated, verdicts

from filtercheck import pipeline
from filtercheck.model.verdict import Finding, Outcome

EDGE = "  EDGE: {kind: gain, output: out, band: [999 Hz, 1001 Hz], min: -60 dB}"
CENTRE = "  CENTRE: {kind: gain, output: out, band: [100 Hz, 2 kHz], max: 60 dB}"
STOP = "  STOP: {kind: gain, output: out, band: [3 kHz, up], max: 0 dB}"
CASES = [(q, slowness) for q in (0.707, 5.0, 20.0) for slowness in (0.0, 0.001, 0.005)]
# What sharp peaks cost in time is spent on some of the cases.
CENTRES = [(0.707, 0.005), (5.0, 0.001), (5.0, 0.005), (20.0, 0.0)]


def check(finding: Finding, q: float, slowness: float, freq_hz: tuple[float, ...]) -> None:
    """Assert that proof and counterexample agree, and that no board of ours is beyond."""
    assert finding.certain <= finding.reached <= finding.certain + 0.01
    sign = 1 if finding.sense == "at most" else -1
    margins = [
        sign * (finding.limit - gain_db(board, freq))
        for board in boards(q, slowness, 200)
        for freq in freq_hz
    ]
    assert finding.certain <= min(margins)
    shown = numbers(finding.worst)
    assert finding.freq_hz is not None
    assert gain_db(shown, finding.freq_hz) == pytest.approx(finding.value, abs=1e-6)
    assert within(shown, q, slowness)


def within(value: dict[str, float], q: float, slowness: float) -> bool:
    """Whether all parts are there and within tolerance, but for a rounding in the tenth digit."""
    ranges = stated(q, slowness)
    assert set(value) == set(ranges)
    return all(
        abs(value[name] / nominal - 1) <= tolerance * (1 + 1e-8)
        for name, (nominal, tolerance) in ranges.items()
    )


@pytest.mark.parametrize(("q", "slowness"), CASES)
def test_edge_and_stop_band_are_proved(tmp_path: Path, q: float, slowness: float) -> None:
    found = verdicts(tmp_path, q, slowness, f"{EDGE}\n{STOP}")

    for name, freq_hz in (("EDGE", (999.0, 1000.0, 1001.0)), ("STOP", (3000.0, 3300.0, 1e4))):
        assert found[name].outcome is Outcome.PASS
        assert found[name].reason == ""
        check(found[name].findings[0], q, slowness, freq_hz)
    if slowness:
        assert max(poles(board).real.max() for board in boards(q, slowness, 300)) < 0


@pytest.mark.parametrize(("q", "slowness"), CENTRES)
def test_the_peak_is_proved(tmp_path: Path, q: float, slowness: float) -> None:
    found = verdicts(tmp_path, q, slowness, CENTRE)["CENTRE"]

    assert found.outcome is Outcome.PASS
    check(found.findings[0], q, slowness, (900.0, 960.0, 1000.0, 1040.0, 1100.0))


def test_a_box_with_an_oscillator_in_it_shows_one(tmp_path: Path) -> None:
    q, slowness = 20.0, 0.01
    nominal = {name: value for name, (value, _) in stated(q, slowness).items()}
    assert poles(nominal).real.max() < 0

    found = verdicts(tmp_path, q, slowness, f"{EDGE}\n{STOP}")

    for verdict in found.values():
        assert verdict.outcome is Outcome.FAIL
        assert verdict.reason.startswith("unstable")
        assert verdict.findings == ()
        shown = numbers(verdict.unstable)
        assert poles(shown).real.max() > 0
        assert within(shown, q, slowness)


def test_a_section_that_oscillates_as_fitted_fails(tmp_path: Path) -> None:
    q, slowness = 5.0, 0.05
    nominal = {name: value for name, (value, _) in stated(q, slowness).items()}
    assert poles(nominal).real.max() > 0

    found = verdicts(tmp_path, q, slowness, EDGE)["EDGE"]

    assert found.outcome is Outcome.FAIL
    assert found.reason.startswith("unstable")
    assert found.unstable == ()  # the parts as fitted are the board that oscillates


# A fault that these tests found: the box is halved until a value is exact to the last digit, which
# ends in a ValueError.
def test_a_box_that_touches_instability_at_a_corner_is_undecided(tmp_path: Path) -> None:
    # By hand: V_out s tau = V+ - V-, V+ = V_out R1/(R1 + R2), V- = V_out/2. With R1 from 6 kΩ to
    # 10 kΩ = R2 the pole goes from the left half-plane to 0.
    file = tmp_path / "edge.filter.yaml"
    file.write_text(
        HEAD
        + FEEDBACK.replace("RESISTANCE", "8k, tolerance: 25 %")
        + """\
requirements:
  A: {kind: gain, output: out, band: [0, 1], max: 300 dB}
""",
        "utf-8",
    )

    run = pipeline.judged([str(file)])

    assert run.faults == ()
    assert run.verdicts[0].outcome is Outcome.UNDECIDED
    assert run.verdicts[0].reason.startswith("not shown stable")
