"""Yields: intervals, shares that are known in closed form, and boards judged one by one."""

from __future__ import annotations

from math import log10, sqrt

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from sampling import FEEDBACK, RLC, Real, finding, sampled, values
from scipy.stats import binomtest

from filtercheck.model.verdict import Outcome, decide
from filtercheck.verification.sampled import Sampled, interval


@given(st.integers(1, 100_000), st.floats(0, 1), st.sampled_from([0.5, 0.9, 0.95, 0.99, 0.999]))
def test_the_interval_is_that_of_clopper_and_pearson(n: int, share: float, sure: float) -> None:
    good = round(n * share)
    exact = binomtest(good, n).proportion_ci(confidence_level=sure, method="exact")

    low, high = interval(good, n, sure)

    assert low == pytest.approx(exact.low, rel=1e-7, abs=1e-12)
    assert high == pytest.approx(exact.high, rel=1e-7, abs=1e-12)


def one_pole(share: str, boards: int, gain_db: float, name: str = "A") -> str:
    """Return an RC low-pass of 1 kHz whose R alone varies, by 10 % to either side."""
    verify = f"{{yield: {share}, confidence: 95 %, boards: {boards}}}"
    return f"""\
connect: {{R1: [in, out], C1: [out, ground]}}
outputs: {{out: out}}
parts:
  R1: {{resistance: 10k, tolerance: 10 %}}
  C1: {{capacitance: 15.915494309 nF}}
requirements:
  {name}: {{kind: gain, output: out, band: [0, 1 kHz], min: {gain_db:.9f} dB, verify: {verify}}}
"""


# The gain at 1 kHz is -10 log10(1 + r^2) with r = R/10 kΩ: at least that of r = 1.04 for the share
# (1.04 - 0.9)/(1.1 - 0.9) = 70 % of all boards.
FLOOR_DB = -10 * log10(1 + 1.04**2)


@pytest.mark.parametrize(
    ("share", "outcome"),
    [("68 %", Outcome.PASS), ("72 %", Outcome.FAIL), ("70 %", Outcome.UNDECIDED)],
)
def test_a_share_that_is_known_by_hand(share: str, outcome: Outcome) -> None:
    found = finding(one_pole(share, 20_000, FLOOR_DB))

    assert abs(found.value - 0.7) < 4 * sqrt(0.7 * 0.3 / 20_000)
    assert found.interval == pytest.approx(
        tuple(binomtest(round(found.value * 20_000), 20_000).proportion_ci(0.95, "exact"))
    )
    assert decide([found]) is outcome


def test_every_board_is_judged_as_its_resistance_says() -> None:
    one = sampled(one_pole("50 %", 2000, FLOOR_DB))
    resistance = values(one.variation, one._drawn)["R1"]

    assert (one._meets(one._drawn) == (resistance <= 10.4e3)).all()


def resonant(q: float, tolerance: str, boards: int) -> Sampled:
    """Return series L and R with C to ground: 159 Hz, Q = sqrt(L/C)/R; the limit is the peak."""
    peak_db = 20 * log10(q / sqrt(1 - 1 / (4 * q**2)))
    verify = f"{{yield: 50 %, confidence: 95 %, boards: {boards}}}"
    return sampled(f"""{RLC}\
parts:
  L1: {{inductance: 1 H, tolerance: {tolerance}}}
  C1: {{capacitance: 1 uF, tolerance: {tolerance}}}
  R1: {{resistance: {1000 / q}, tolerance: 1 %}}
requirements:
  A: {{kind: gain, output: out, band: [50, 500], max: {peak_db:.9f} dB, verify: {verify}}}
""")


def keeps_the_peak(one: Sampled, q: float) -> Real:
    """Return by how much the peak Q/sqrt(1 - 1/(4 Q^2)) of each board is below the limit."""
    value = values(one.variation, one._drawn)
    sharp = np.sqrt(value["L1"] / value["C1"]) / value["R1"]
    return q / sqrt(1 - 1 / (4 * q**2)) - sharp / np.sqrt(1 - 1 / (4 * sharp**2))


# A fault that these tests found: where peaks are narrower than they are apart on the boards that
# place the grid, those of other boards fall between its points, and such boards count as good.
@pytest.mark.parametrize("tolerance", ["1 %", "5 %", "20 %"])
def test_boards_are_judged_by_their_peaks(tolerance: str) -> None:
    one = resonant(20.0, tolerance, 2000)

    assert (one._meets(one._drawn) == (keeps_the_peak(one, 20.0) >= 0)).all()


def test_the_grid_judges_as_the_exact_extremes_do() -> None:
    one = resonant(20.0, "5 %", 2000)
    near = np.argsort(np.abs(keeps_the_peak(one, 20.0)))[:60]  # those that are nearest to the limit
    some = tuple(points[np.append(near, np.arange(0, 2000, 40))] for points in one._drawn)

    exact = [one._measures(tuple(points[k] for points in some)) for k in range(len(some[0]))]

    assert one._meets(some).tolist() == exact


@pytest.mark.parametrize("q", [100.0, 200.0, 1000.0])
def test_narrow_peaks_are_not_missed(q: float) -> None:
    one = resonant(q, "5 %", 1000)

    assert (one._meets(one._drawn) == (keeps_the_peak(one, q) >= 0)).all()


def test_the_same_requirement_draws_the_same_boards() -> None:
    text = one_pole("50 %", 200, FLOOR_DB)
    first, again, other = (sampled(text, name) for name in ("f A", "f A", "f B"))

    assert all((a == b).all() for a, b in zip(first._drawn, again._drawn, strict=True))
    assert not any((a == b).all() for a, b in zip(first._drawn, other._drawn, strict=True))


def test_a_share_that_oscillates_is_bad() -> None:
    # By hand: V_out s tau = V+ - V-, V+ = (V_in R2 + V_out R1)/(R1 + R2), V- = V_out/2. The pole is
    # in the right half-plane where R1 > R2: 9.8 kΩ +- 4 % is from 9408 to 10192, of which
    # 192/784 lie above 10000. No gain comes near to 300 dB.
    found = finding(
        FEEDBACK.replace("RESISTANCE", "9k8, tolerance: 4 %")
        + """\
requirements:
  A: {kind: gain, output: out, band: [0, 1], max: 300 dB,
      verify: {yield: 70 %, confidence: 95 %, boards: 20000}}
""",
        stable=False,
    )

    assert abs(found.value - 592 / 784) < 4 * sqrt(592 * 192 / 784**2 / 20_000)
