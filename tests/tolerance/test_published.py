"""Two published problems of tolerance assignment, whose answers leave nothing to spare."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product
from math import inf, log10, pi
from pathlib import Path

import numpy as np
import pytest
from board_search import Limit, worst
from judging import board, by_sense, judged, line
from nodal import Drawing, Real, elements, exact, filter_text, within

from filtercheck.model.verdict import Outcome, Verdict

# The loss of the two terminations alone, 20 log10 2 [dB].
ALONE_DB = 20 * log10(2)
PASS_HZ, STOP_HZ = 1 / (2 * pi), 2.5 / (2 * pi)


@dataclass(frozen=True)
class Lowpass:
    """Third-order LC low-pass between 1 ohm and 1 ohm, with at most 1.5 dB of insertion loss up to
    1 rad/s and at least 25 dB from 2.5 rad/s on.

    Source: Bandler, Liu and Tromp, "A nonlinear programming approach to optimal design centering,
    tolerancing, and tuning", IEEE Trans. Circuits Syst., vol. CAS-23, 1976 (from memory; the
    losses recomputed from the rounded values, which has 25.0025 dB for 25.003 dB).
    """

    name: str
    inductance: float
    capacitance: float
    percent: tuple[float, float]  # of the inductors and of the capacitor
    pass_loss_db: float
    stop_loss_db: float

    @property
    def drawing(self) -> Drawing:
        coil = within(self.inductance, self.percent[0], self.percent[0])
        return Drawing(
            elements("R Rs in a | L L1 a b | C C b 0 | L L2 b o | R Rl o 0"),
            {
                "Rs": exact(1.0),
                "L1": coil,
                "C": within(self.capacitance, self.percent[1], self.percent[1]),
                "L2": coil,
                "Rl": exact(1.0),
            },
            "o",
        )

    def verdicts(self, folder: Path, pass_db: float, stop_db: float) -> dict[str, Verdict]:
        text = filter_text(
            self.name,
            self.drawing,
            [
                line("PASS", (floor(-ALONE_DB - pass_db),), "worst-case"),
                line("STOP", (ceiling(-ALONE_DB - stop_db),), "worst-case"),
            ],
        )
        found = judged(folder, [(self.name, text)])
        return {requirement: verdict for (_, requirement), verdict in found.items()}


def floor(level_db: float) -> Limit:
    return Limit("gain", "at least", (0.0, PASS_HZ), (level_db,))


def ceiling(level_db: float) -> Limit:
    return Limit("gain", "at most", (STOP_HZ, inf), (level_db,))


LOWPASSES = [
    Lowpass("wide", 1.999, 0.906, (9.9, 7.6), 1.503, 25.0025),
    Lowpass("narrow", 1.628, 1.090, (3.5, 3.2), 0.881, 24.991),
]
each_lowpass = pytest.mark.parametrize("lowpass", LOWPASSES, ids=lambda lowpass: lowpass.name)


def corner_losses(drawing: Drawing, freq_hz: Real) -> Real:
    places = np.array(list(product((0.0, 1.0), repeat=len(drawing.low))))
    boards = drawing.low + (drawing.high - drawing.low) * places
    return -ALONE_DB - drawing.nodal.gain_db(boards, freq_hz)


@each_lowpass
def test_the_figures_hold_at_the_corners_named(lowpass: Lowpass) -> None:
    drawing = lowpass.drawing
    inside_hz = np.linspace(PASS_HZ / 400, PASS_HZ, 400)
    of_high = -ALONE_DB - drawing.nodal.gain_db(drawing.high[None], inside_hz)
    of_low = -ALONE_DB - drawing.nodal.gain_db(drawing.low[None], np.array([STOP_HZ]))

    assert of_high.max() == pytest.approx(lowpass.pass_loss_db, abs=5e-4)
    assert of_low.min() == pytest.approx(lowpass.stop_loss_db, abs=5e-4)
    assert of_high.max() == pytest.approx(corner_losses(drawing, inside_hz).max(), abs=1e-9)
    assert of_low.min() == pytest.approx(
        corner_losses(drawing, np.array([STOP_HZ])).min(), abs=1e-9
    )


@each_lowpass
def test_the_worst_boards_are_those_published(lowpass: Lowpass, tmp_path: Path) -> None:
    found = lowpass.verdicts(tmp_path, pass_db=1.5, stop_db=25.0)
    loss = by_sense(found["PASS"])["at least"]
    stop = by_sense(found["STOP"])["at most"]

    assert -ALONE_DB - loss.value == pytest.approx(lowpass.pass_loss_db, abs=5e-4)
    assert -ALONE_DB - stop.value == pytest.approx(lowpass.stop_loss_db, abs=5e-4)
    assert stop.freq_hz == pytest.approx(STOP_HZ)
    drawing = lowpass.drawing
    assert board(drawing, loss.worst) == pytest.approx(drawing.high, rel=1e-9)
    assert board(drawing, stop.worst) == pytest.approx(drawing.low, rel=1e-9)


@each_lowpass
def test_each_specification_is_missed_by_what_the_figures_say(
    lowpass: Lowpass, tmp_path: Path
) -> None:
    # 1.503 > 1.5 and 25.0025 >= 25; 0.881 <= 1.5 and 24.991 < 25.
    found = lowpass.verdicts(tmp_path, pass_db=1.5, stop_db=25.0)
    wanted = {
        "PASS": Outcome.PASS if lowpass.pass_loss_db <= 1.5 else Outcome.FAIL,
        "STOP": Outcome.PASS if lowpass.stop_loss_db >= 25.0 else Outcome.FAIL,
    }

    assert {name: verdict.outcome for name, verdict in found.items()} == wanted


@each_lowpass
@pytest.mark.parametrize("spare_db", [0.001, -0.001])
def test_a_thousandth_of_a_decibel_decides(
    lowpass: Lowpass, spare_db: float, tmp_path: Path
) -> None:
    pass_db = lowpass.pass_loss_db + spare_db
    stop_db = lowpass.stop_loss_db - spare_db
    wanted = Outcome.PASS if spare_db > 0 else Outcome.FAIL

    for verdict in lowpass.verdicts(tmp_path, pass_db, stop_db).values():
        assert verdict.outcome is wanted


def divider(percent: float) -> Drawing:
    """Return the divider whose ratio R2/(R1 + R2) must stay from 0.46 to 0.53.

    Source: Karafin, "The optimum assignment of component tolerances for electrical networks",
    Bell Syst. Tech. J., vol. 50, 1971 (from memory). By hand, R1 = 2 - R2 = 1.01005 at t = 7.001 %:
    0.98995 (1 - t) / (0.98995 (1 - t) + 1.01005 (1 + t)) = 0.920644/2.001407 = 0.459998 and
    0.98995 (1 + t) / (0.98995 (1 + t) + 1.01005 (1 - t)) = 1.059256/1.998593 = 0.530001,
    so that at 7.00 % there is room on both sides, and at 7.01 % on neither.
    """
    return Drawing(
        elements("R R1 in o | R R2 o 0"),
        {"R1": within(1.01005, percent, percent), "R2": within(0.98995, percent, percent)},
        "o",
    )


RATIOS = (
    Limit("gain", "at least", (0.0, 1000.0), (round(20 * log10(0.46), 9),)),
    Limit("gain", "at most", (0.0, 1000.0), (round(20 * log10(0.53), 9),)),
)


@pytest.mark.parametrize(("percent", "outcome"), [(7.0, Outcome.PASS), (7.01, Outcome.FAIL)])
def test_the_divider_takes_seven_percent(percent: float, outcome: Outcome, tmp_path: Path) -> None:
    text = filter_text("divider", divider(percent), [line("RATIO", RATIOS, "worst-case")])
    ((_, verdict),) = judged(tmp_path, [("divider", text)]).items()
    searched = {w.margin_db >= 0 for w in worst(divider(percent), RATIOS, seed=0)}

    assert searched == {outcome is Outcome.PASS}
    assert verdict.outcome is outcome
    for finding in verdict.findings:
        assert (finding.reached >= 0) is (outcome is Outcome.PASS)
