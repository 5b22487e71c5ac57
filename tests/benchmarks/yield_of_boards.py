"""CPU time of solving 100 000 boards at 200 frequencies, over that of `filtercheck` for a yield.

    python tests/benchmarks/yield_of_boards.py

The yield is judged end to end, from the file on, without start-up: a filter of another shape is
judged before, and the caches are emptied. The baseline solves the nodal equations of each board
and frequency; it is run on a tenth of the boards and scaled. The aim is a ratio of at least 100.
"""

from __future__ import annotations

import statistics
import tempfile
import time
from pathlib import Path

import nodal_baseline
import numpy as np
from filter_files import cascade, cpu_seconds, warmed_up, written

BOARDS = 100_000
SCALE = 10
PAIRS = 5
FREQ_HZ = np.concatenate([[0.0], np.geomspace(10.0, 500.0, 199)])
QUALITIES = {0.707: (-0.45, 0.16), 5.0: (-0.15, 3.0)}  # with least and largest gain up to 500 Hz
VERIFY = f"{{yield: 99 %, confidence: 95 %, boards: {BOARDS}}}"


def text(q: float) -> str:
    low, high = QUALITIES[q]
    limits = f"band: [0 Hz, 500 Hz], min: {low} dB, max: {high} dB"
    return cascade(
        "two-pole", [q], [f"YIELD: {{kind: gain, output: out, {limits}, verify: {VERIFY}}}"]
    )


def baseline(q: float) -> tuple[float, float]:
    """Return the CPU time for all boards, as scaled, and the share of good ones."""
    low, high = QUALITIES[q]
    begin = time.process_time()
    gain_db = nodal_baseline.gain_db(nodal_baseline.boards(q, BOARDS // SCALE), FREQ_HZ)
    good = (gain_db.min(axis=1) >= low) & (gain_db.max(axis=1) <= high)
    return SCALE * (time.process_time() - begin), float(good.mean())


def compare(q: float, folder: Path) -> None:
    path = written(folder, f"q-{q}", text(q))
    pairs = [(cpu_seconds(path), baseline(q)) for _ in range(PAIRS)]
    ratios = sorted(solved[0] / counted[0] for counted, solved in pairs)
    (_, run), (_, share) = pairs[0]
    seconds = statistics.median(counted[0] for counted, _ in pairs)
    solving = statistics.median(solved[0] for _, solved in pairs)
    print(f"Q = {q}: median {statistics.median(ratios):.0f} of {PAIRS} pairs")
    print(f"  from {ratios[0]:.0f} to {ratios[-1]:.0f}; {seconds:.3f} s over {solving:.1f} s CPU")
    (verdict,) = run.verdicts
    value = verdict.findings[0].value
    print(f"  {verdict.outcome.value}: {value:.4%} of the boards are good, {share:.4%} there")


def main() -> None:
    print(f"nodal equations / filtercheck, {BOARDS} boards, 200 frequencies")
    print(f"  (the equations for 1/{SCALE} of the boards, times {SCALE})")
    with tempfile.TemporaryDirectory() as name:
        warmed_up(Path(name), VERIFY)
        for q in QUALITIES:
            compare(q, Path(name))


main()
