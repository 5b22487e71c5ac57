"""Limits laid a hair inside and outside of what the worst board does."""

from __future__ import annotations

from dataclasses import replace
from functools import lru_cache
from pathlib import Path

import numpy as np
import pytest
from board_search import Limit, margin_of, worst
from judging import Verdicts, board, by_sense, judged, line
from nodal import Drawing, elements, exact, filter_text, within
from random_circuits import Circuit, circuit

from filtercheck.model.verdict import Finding, Outcome

HAIR_DB = 1e-6
SPARE_DB = 0.02
SEEDS = range(0, 50, 5)
SHIFTS = {"tight": HAIR_DB, "loose": -HAIR_DB, "missed": SPARE_DB, "spared": -SPARE_DB}


@lru_cache(maxsize=1)
def circuits() -> dict[str, tuple[Circuit, tuple[Limit, Limit]]]:
    """Return circuits, each with a level and a mask, on the same side of the gain."""
    found = {}
    for seed in SEEDS:
        one = circuit(seed)
        limit = one.requirements[0][seed % len(one.requirements[0])]
        low, high = limit.searched_hz
        level = replace(limit, levels=limit.levels[:1], band_hz=(low, high))
        mask = replace(level, levels=(level.levels[0], level.levels[0] - 2.0))
        found[one.name] = one, (level, mask)
    return found


def moved(limit: Limit, finding: Finding, by_db: float) -> Limit:
    """Return the limit at what the worst board does, made tighter by so much."""
    return limit.tightened(finding.reached + by_db)


@pytest.fixture(scope="module")
def reported(tmp_path_factory: pytest.TempPathFactory) -> Verdicts:
    texts = [
        (
            name,
            filter_text(
                name,
                one.drawing,
                [line(f"Q{i}", (limit,), "worst-case") for i, limit in enumerate(limits, start=1)],
                one.sections,
            ),
        )
        for name, (one, limits) in circuits().items()
    ]
    return judged(tmp_path_factory.mktemp("reported"), texts)


@pytest.fixture(scope="module")
def planted(reported: Verdicts, tmp_path_factory: pytest.TempPathFactory) -> Verdicts:
    texts = []
    for name, (one, limits) in circuits().items():
        lines = []
        for i, limit in enumerate(limits, start=1):
            finding = by_sense(reported[name, f"Q{i}"])[limit.sense]
            lines += [
                line(f"Q{i}-{word}", (moved(limit, finding, by_db),), "worst-case")
                for word, by_db in SHIFTS.items()
            ]
        texts.append((name, filter_text(name, one.drawing, lines, one.sections)))
    return judged(tmp_path_factory.mktemp("planted"), texts)


@pytest.mark.parametrize("name", circuits())
@pytest.mark.parametrize("number", [1, 2], ids=["level", "mask"])
def test_a_hair_decides(name: str, number: int, planted: Verdicts) -> None:
    assert planted[name, f"Q{number}-tight"].outcome is Outcome.FAIL
    assert planted[name, f"Q{number}-loose"].outcome is not Outcome.FAIL
    assert planted[name, f"Q{number}-missed"].outcome is Outcome.FAIL
    assert planted[name, f"Q{number}-spared"].outcome is Outcome.PASS


@pytest.mark.parametrize("name", circuits())
def test_the_worst_reported_is_the_worst_there_is(name: str, reported: Verdicts) -> None:
    one, limits = circuits()[name]
    for i, limit in enumerate(limits, start=1):
        finding = by_sense(reported[name, f"Q{i}"])[limit.sense]
        values = board(one.drawing, finding.worst)
        (searched,) = worst(one.drawing, (limit,), seed=0)

        assert finding.freq_hz is not None
        at_db = margin_of(one.drawing, limit, values, finding.freq_hz)
        assert at_db == pytest.approx(finding.reached, abs=HAIR_DB / 10)
        assert finding.reached == pytest.approx(searched.margin_db, abs=HAIR_DB / 10)


# A Sallen-Key low-pass of gain K = 1 + Rf/Rg oscillates where Rf/Rg > (C2/C1) (1 + R2/R1), which
# are 1.8 and 2 as fitted. With 1 %, 1.8 x 1.01/0.99 = 1.836 stays below 0.99/1.01 + (0.99/1.01)^2 =
# 1.941; with 5 %, 1.8 x 1.05/0.95 = 1.989 comes above 0.95/1.05 + (0.95/1.05)^2 = 1.723.
@pytest.mark.parametrize(("percent", "unstable"), [(1, False), (5, True)])
def test_boards_that_oscillate_fail_whatever_the_limit(
    percent: float, unstable: bool, tmp_path: Path
) -> None:
    values = {"R1": 1e4, "R2": 1e4, "C1": 1e-8, "C2": 1e-8, "Rf": 1.8e4, "Rg": 1e4}
    drawing = Drawing(
        elements("R R1 in x | R R2 x p | C C1 x o | C C2 p 0 | U A p m o | R Rf o m | R Rg m 0"),
        {name: within(value, percent, percent) for name, value in values.items()}
        | {"A.gain_bandwidth": exact(1e7), "A.open_loop_gain": exact(1e5)},
        "o",
    )
    limit = Limit("gain", "at most", (0.0, 100.0), (40.0,))
    text = filter_text("near", drawing, [line("Q", (limit,), "worst-case")])
    ((_, verdict),) = judged(tmp_path, [("near", text)]).items()
    high = [name in ("R1", "C1", "Rf") for name in drawing.ranges]
    poles = drawing.nodal.poles(np.where(high, drawing.high, drawing.low))

    assert bool(poles.real.max() > 0) is unstable
    assert verdict.outcome is (Outcome.FAIL if unstable else Outcome.PASS)
    assert verdict.reason.startswith("unstable" if unstable else "")
