"""CPU time of proving a two-pole section for every board, over that of sampling 20 000 boards.

    python tests/benchmarks/proof_against_sampling.py

The section is a state-variable low-pass at 1 kHz with resistors of 1 %, capacitors of 5 % and
gain-bandwidths of 1 MHz within 30 %. Its verdict takes in the least and the largest gain of the
pass band and the largest of the stop band, from the file on, without start-up: a filter of another
shape is judged before, and the caches are emptied. The sample is solved board by board by
`nodal_baseline` at 100 frequencies of each band. The aims are at most 0.3 s and a ratio of at
most 1/30.
"""

from __future__ import annotations

import statistics
import tempfile
import time
from pathlib import Path

import nodal_baseline
import numpy as np
from filter_files import cascade, cpu_seconds, warmed_up, written
from nodal_baseline import Real

from filtercheck.model.verdict import Run

BOARDS = 20_000
PAIRS = 3
PASS_HZ = np.concatenate([[0.0], np.geomspace(10.0, 1e3, 99)])
STOP_HZ = np.geomspace(5e3, 50e3, 100)
# Quality factor -> least and largest gain of the pass band, largest of the stop band. The proof
# looks for the worst board whatever the limits are; these hold.
LIMITS_DB = {0.707: (-4.5, 0.5, -26.0), 5.0: (-0.5, 16.0, -26.0)}


def text(q: float) -> str:
    low, high, stop = LIMITS_DB[q]
    passband = f"band: [0 Hz, 1 kHz], min: {low} dB, max: {high} dB"
    stopband = f"band: [5 kHz, 50 kHz], max: {stop} dB"
    return cascade(
        "two-pole",
        [q],
        [
            f"PASS: {{kind: gain, output: out, {passband}, verify: worst-case}}",
            f"STOP: {{kind: gain, output: out, {stopband}, verify: worst-case}}",
        ],
    )


def sampled(q: float) -> tuple[float, Real]:
    """Return the CPU time of the sample, and its worst gains in the order of the limits."""
    begin = time.process_time()
    boards = nodal_baseline.boards(q, BOARDS)
    gain_db = nodal_baseline.gain_db(boards, np.concatenate([PASS_HZ, STOP_HZ]))
    passed, stopped = np.split(gain_db, [len(PASS_HZ)], axis=1)
    worst = np.array([passed.min(), passed.max(), stopped.max()])
    return time.process_time() - begin, worst


def proved(run: Run) -> tuple[Real, Real]:
    """Return the worst gains that a board was found for, and those that none exceeds."""
    passband, stopband = run.verdicts
    found = {finding.sense: finding for finding in passband.findings}
    ordered = [found["at least"], found["at most"], stopband.findings[0]]
    sign = np.array([1.0, -1.0, -1.0])
    limits = np.array([finding.limit for finding in ordered])
    reached = limits + sign * [finding.reached for finding in ordered]
    return reached, limits + sign * [finding.certain for finding in ordered]


def compare(q: float, folder: Path) -> None:
    path = written(folder, f"q-{q}", text(q))
    pairs = [(cpu_seconds(path), sampled(q)) for _ in range(PAIRS)]
    seconds = statistics.median(verdict[0] for verdict, _ in pairs)
    ratio = statistics.median(verdict[0] / sample[0] for verdict, sample in pairs)
    (_, run), (_, sampled_db) = pairs[0]
    reached_db, proved_db = proved(run)
    outcomes = ", ".join(f"{one.requirement} {one.outcome.value}" for one in run.verdicts)
    print(f"Q = {q}: verdict {seconds:.3f} s CPU, 1/{1 / ratio:.0f} of the sample ({outcomes})")
    for i, name in enumerate(("pass band, least", "pass band, most", "stop band, most")):
        short = abs(proved_db[i] - sampled_db[i])
        print(
            f"  {name:17s} sampled {sampled_db[i]:8.3f} dB, found {reached_db[i]:8.3f} dB, "
            f"proved {proved_db[i]:8.3f} dB: the sample falls short by {short:.3f} dB"
        )


def main() -> None:
    print(f"worst-case verdict / {BOARDS} boards at 200 frequencies, medians of {PAIRS} pairs")
    with tempfile.TemporaryDirectory() as name:
        warmed_up(Path(name), "worst-case")
        for q in LIMITS_DB:
            compare(q, Path(name))


main()
