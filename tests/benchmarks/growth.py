"""How the CPU time of a worst-case verdict grows with free parts and with sections.

    python tests/benchmarks/growth.py

Free parts are parts with a tolerance, in one coupled network: integrators with losses in a row,
of three parts each, and an exact resistor that feeds the last output back to the first of them.
In one series the network has 18 parts and more and more of them are free; in the other it has as
many parts as are free. Sections are two-pole state-variable low-passes in a row; the aim is that
three of them, a sixth order, take at most four times as long as one.

Each verdict starts from the file with the caches emptied, without start-up. The first of each
series is the baseline, run in turn with the others.
"""

from __future__ import annotations

import statistics
import tempfile
from collections.abc import Mapping
from math import cos, pi
from pathlib import Path

from filter_files import cascade, cpu_seconds, part, warmed_up, whole, written

FREE_PARTS = (6, 9, 12, 15, 18, 21, 24)
SECTIONS = (1, 2, 3, 4, 5, 6)
PAIRS = 3
# A verdict that takes longer is measured once, and nothing larger is tried after it.
MOST_SECONDS = 20.0


def requirements(least: float, most: float, stop: float) -> list[str]:
    """Return a pass band up to half the corner of 1 kHz, and a stop band from 10 kHz."""
    passband = f"band: [0 Hz, 500 Hz], min: {least} dB, max: {most} dB"
    return [
        f"PASS: {{kind: gain, output: out, {passband}, verify: worst-case}}",
        f"STOP: {{kind: gain, output: out, band: [10 kHz, 50 kHz], max: {stop} dB}}",
    ]


def loop(count: int, free: int) -> str:
    """Return a network of `count` parts in a loop; `free` of them, spread evenly, are free.

    Each integrator has its pole at 1 kHz: 10 kohm 15.9155 nF = 1/(2 pi 1 kHz). The gain of the
    loop is a tenth, so that it is stable whatever its sign.
    """
    amplifiers = range(1, count // 3 + 1)
    nodes: dict[str, str] = {}
    for k in amplifiers:
        nodes[f"R{k}"] = f"[{f'o{k - 1}' if k > 1 else 'in'}, m{k}]"
        nodes[f"R{k}f"] = nodes[f"C{k}"] = f"[o{k}, m{k}]"
    chosen = {j * free // count: name for j, name in enumerate(nodes)}.values()
    parts = [
        part(name, 10e3 if name[0] == "R" else 15.9155e-9, 0.02 if name in chosen else 0.0)
        for name in nodes
    ]
    last = f"o{count // 3}"
    connect = [f"{name}: {ends}" for name, ends in nodes.items()]
    connect.append(f"R0: [{last}, m1]")
    connect.extend(f"A{k}: {{plus: ground, minus: m{k}, out: o{k}}}" for k in amplifiers)
    parts.append(part("R0", 100e3, 0.0))
    parts.extend(f"A{k}: {{amplifier: ideal}}" for k in amplifiers)
    limits = requirements(-15.0, 6.0, -20.0)
    return whole(f"loop-{count}-{free}", last, {"connect": connect}, parts, limits)


def sections(count: int) -> str:
    """Return a Butterworth filter: Q = 1/(2 cos a), the angles of the poles spread evenly."""
    angles = [(2 * k + 1) * pi / (4 * count) for k in range(count)]
    qualities = [1.0 / (2.0 * cos(angle)) for angle in angles]
    return cascade(f"order-{2 * count}", qualities, requirements(-9.0, 9.0, 0.0))


def series(title: str, texts: Mapping[int, str], folder: Path) -> None:
    """Print the CPU time of each file, and its ratio to that of the first."""
    print(f"{title}: CPU time, over that of the first, medians of up to {PAIRS} pairs")
    first, *_ = paths = [written(folder, f"{title}-{n}", text) for n, text in texts.items()]
    for size, path in zip(texts, paths, strict=True):
        spent: list[float] = []
        ratios: list[float] = []
        while len(spent) < PAIRS and max(spent, default=0.0) < MOST_SECONDS:
            beside, _ = cpu_seconds(first)
            seconds, run = cpu_seconds(path)
            spent.append(seconds)
            ratios.append(seconds / beside)
        outcomes = ", ".join(verdict.outcome.value for verdict in run.verdicts)
        ratio, middle = statistics.median(ratios), statistics.median(spent)
        print(f"  {size:2d}  {middle:8.3f} s  {ratio:7.2f}  {outcomes}", flush=True)
        if max(spent) >= MOST_SECONDS and path != paths[-1]:
            print(f"      longer than {MOST_SECONDS:g} s: no larger one is tried")
            break


def main() -> None:
    with tempfile.TemporaryDirectory() as name:
        warmed_up(Path(name), "worst-case")
        series("sections", {n: sections(n) for n in SECTIONS}, Path(name))
        series("parts, all free", {n: loop(n, n) for n in FREE_PARTS}, Path(name))
        series("free parts of 18", {n: loop(18, n) for n in FREE_PARTS if n <= 18}, Path(name))


main()
