"""A response of two peaks: the corner moves to the other one where that is the higher one.

    in -- L1 -- C1 -- R1 --+-- Rf --+
    in -- L2 -- C2 -- R2 --+-(-)    |
                             U1 >---+-- out

The gain is Rf/R1 at 1/(2 pi sqrt(L1 C1)), 1 kHz, and Rf/R2 at 1/(2 pi sqrt(L2 C2)), 100 kHz, but
for the little that each branch gives at the other's peak. A fall of 3 dB is some half of a
bandwidth, 500 ohm/(2 pi 1 H)/2 = 40 Hz or 4 kHz, above the higher one.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from filtercheck import pipeline
from filtercheck.model.verdict import Outcome

VERIFY = ["worst-case", "{yield: 99 %, confidence: 95 %, boards: 500}"]


def outcome(folder: Path, r1: str, r2: str, verify: str) -> Outcome:
    file = folder / "two.filter.yaml"
    file.write_text(
        f"""\
format: filtercheck-filter/1
filter: two
connect:
  L1: [in, a]
  C1: [a, b]
  R1: [b, sum]
  L2: [in, c]
  C2: [c, d]
  R2: [d, sum]
  Rf: [sum, out]
  U1: {{plus: ground, minus: sum, out: out}}
parts:
  L1: {{inductance: 1 H}}
  C1: {{capacitance: 25.33 nF}}
  R1: {{resistance: {r1}}}
  L2: {{inductance: 10 mH}}
  C2: {{capacitance: 253.3 pF}}
  R2: {{resistance: {r2}}}
  Rf: {{resistance: 500}}
  U1: {{amplifier: ideal}}
outputs: {{out: out}}
requirements:
  C: {{kind: corner, output: out, fall: 3 dB, side: above, passband: [995 Hz, 1 MHz],
      within: [990 Hz, 1100 Hz], verify: {verify}}}
""",
        "utf-8",
    )
    run = pipeline.judged([str(file)])
    assert not run.faults, run.faults[0]
    return run.verdicts[0].outcome


def peak(r1: float, r2: float, around_hz: float) -> float:
    """Return the largest |H| near a frequency, from the two branches' currents."""
    s = 2j * np.pi * around_hz * np.linspace(0.98, 1.02, 4001)
    branches = (s * 1.0 + 1 / (s * 25.33e-9) + r1, s * 10e-3 + 1 / (s * 253.3e-12) + r2)
    return float(np.abs(500 / branches[0] + 500 / branches[1]).max())


def test_the_upper_peak_is_the_higher_one_on_some_boards_only() -> None:
    assert peak(500.0, 500.3, 1e3) > peak(500.0, 500.3, 1e5)
    assert peak(500.5, 499.8, 1e3) < peak(500.5, 499.8, 1e5)


@pytest.mark.parametrize("verify", VERIFY)
def test_the_lower_peak_alone_passes(tmp_path: Path, verify: str) -> None:
    assert (
        outcome(tmp_path, "500, tolerance: 0.1 %", "520, tolerance: 0.1 %", verify) is Outcome.PASS
    )


# Faults that these tests found: that the gain has fallen at the upper limit says nothing of the
# corner of a board whose largest gain is above that limit.


@pytest.mark.parametrize("tolerance", ["0.1 %", "5 %"])
def test_no_proof_where_the_upper_peak_may_be_the_higher_one(
    tmp_path: Path, tolerance: str
) -> None:
    # R1 = 500.5, R2 = 499.8 is within 0.1 %; R1 = 525, R2 = 494 is within 5 %.
    r2 = {"0.1 %": "500.3", "5 %": "520"}[tolerance]
    found = outcome(
        tmp_path, f"500, tolerance: {tolerance}", f"{r2}, tolerance: {tolerance}", "worst-case"
    )

    assert found is not Outcome.PASS


def test_a_yield_counts_the_boards_on_which_it_is(tmp_path: Path) -> None:
    # R1 from 475 to 525, R2 from 494 to 546, all alike: R2 < R1 for (525 - 494)^2/2/(50 * 52) of
    # all boards, 18.5 %, so that 99 % are out of reach.
    assert (
        outcome(tmp_path, "500, tolerance: 5 %", "520, tolerance: 5 %", VERIFY[1]) is Outcome.FAIL
    )


@pytest.mark.parametrize("verify", ["nominal", *VERIFY])
def test_the_upper_peak_fails(tmp_path: Path, verify: str) -> None:
    found = outcome(tmp_path, "525, tolerance: 0.1 %", "494, tolerance: 0.1 %", verify)

    assert found is Outcome.FAIL
