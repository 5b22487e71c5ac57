"""Requirements as filter files state them, judging many files at once, and the boards that
verdicts name."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from math import inf
from pathlib import Path

import numpy as np
from board_search import Limit
from nodal import GAIN, GBW, Drawing, Real

from filtercheck import pipeline
from filtercheck.model.part import Figure, Part, Passive
from filtercheck.model.verdict import Finding, Verdict

Verdicts = Mapping[tuple[str, str], Verdict]  # by filter and requirement


def line(name: str, limits: tuple[Limit, ...], verify: str) -> str:
    """Return a requirement, as a line of a filter file."""
    first = limits[0]
    low, high = first.band_hz
    top = "up" if high == inf else repr(high)
    keys = [f"kind: {first.kind}, output: out, band: [{low!r}, {top}]"]
    for limit in limits:
        key = "max" if limit.sense == "at most" else "min"
        ends = zip(limit.searched_hz, limit.levels, strict=False)
        sloped = ", ".join(f"{f!r}: {level!r} dB" for f, level in ends)
        one = f"{limit.levels[0]!r} dB"
        keys.append(f"{key}: {one if len(limit.levels) == 1 else f'{{{sloped}}}'}")
    if first.kind == "attenuation":
        keys.append(f"reference: {first.reference_hz!r}")
    # The worst case is what is meant where nothing is said.
    if verify:
        keys.append(f"verify: {verify}")
    return f"{name}: {{{', '.join(keys)}}}"


def judged(folder: Path, files: Iterable[tuple[str, str]]) -> Verdicts:
    """Write filters, each a name and a text, and judge them."""
    for name, text in files:
        (folder / f"{name}.filter.yaml").write_text(text, "utf-8")
    run = pipeline.judged([str(folder)])
    assert not run.faults, run.faults[0]
    return {(verdict.filter, verdict.requirement): verdict for verdict in run.verdicts}


def board(drawing: Drawing, worst: Iterable[Part]) -> Real:
    """Return the values of a board that a finding names, in the drawing's order."""
    values: dict[str, float] = {}
    for part in worst:
        if isinstance(part, Passive):
            values[part.designator] = part.value
            continue
        for name, figure in ((GBW, part.gain_bandwidth), (GAIN, part.open_loop_gain)):
            if figure is not None:
                values[f"{part.designator}.{name}"] = _single(figure)
    assert set(values) == set(drawing.ranges)
    return np.array([values[name] for name in drawing.ranges])


def _single(figure: Figure) -> float:
    assert figure.min == figure.typical == figure.max
    return figure.typical


def is_allowed(drawing: Drawing, values: Real) -> bool:
    """Whether each value lies in its range, but for rounding."""
    low, high = drawing.low * (1 - 1e-12), drawing.high * (1 + 1e-12)
    return bool(((low <= values) & (values <= high)).all())


def by_sense(verdict: Verdict) -> dict[str, Finding]:
    return {finding.sense: finding for finding in verdict.findings}
