"""Verdicts on whole boxes of boards against a search for the worst board that shares nothing with
the program: a search cannot prove, but no board that it finds may lie beyond a proof."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from functools import lru_cache

import numpy as np
import pytest
from board_search import Limit, margin_of, worst
from judging import Verdicts, board, by_sense, is_allowed, judged
from random_circuits import Circuit, circuit

from filtercheck.model.verdict import Finding, Outcome, Verdict

COUNT, CHUNK = 200, 10
# What rounding may do to a gain of these circuits, and how near a reported value must be [dB].
NOISE_DB, NEAR_DB = 1e-7, 1e-6
# How much worse a board the search may find than the program does.
AS_GOOD_DB = 0.01
UNDECIDED_AT_MOST = 0.05


@lru_cache(maxsize=1)
def circuits() -> tuple[Circuit, ...]:
    return tuple(circuit(seed) for seed in range(COUNT))


@pytest.fixture(scope="module")
def verdicts(tmp_path_factory: pytest.TempPathFactory) -> Verdicts:
    """Judge all circuits, some written as sections and some with their nodes, some with the words
    `worst-case` and some with nothing said, which means the same."""
    texts = [
        (one.name, one.text("worst-case" if seed % 2 else "", connected=seed % 3 == 0))
        for seed, one in enumerate(circuits())
    ]
    return judged(tmp_path_factory.mktemp("boards"), texts)


def complaints(one: Circuit, seed: int, verdicts: Verdicts) -> Iterator[str]:
    for i, limits in enumerate(one.requirements, start=1):
        verdict = verdicts[one.name, f"Q{i}"]
        if verdict.reason:
            yield f"Q{i}: {verdict.reason}, of boards that are all far from oscillation"
            continue
        found = by_sense(verdict)
        broken = False
        for limit, reached in zip(limits, worst(one.drawing, limits, seed), strict=True):
            finding = found[limit.sense]
            for problem in beyond(finding, verdict, reached.margin_db):
                yield f"Q{i}, {limit.sense}: {problem}"
            for problem in misstated(one, limit, finding):
                yield f"Q{i}, {limit.sense}: {problem}"
            broken = broken or finding.reached < 0.0
        if (verdict.outcome is Outcome.FAIL) != broken:
            yield f"Q{i}: {verdict.outcome}, and the worst boards do not show it"


def beyond(finding: Finding, verdict: Verdict, searched_db: float) -> Iterator[str]:
    """Yield what the margin of the worst board of the search contradicts."""
    if not searched_db >= finding.certain - NOISE_DB:
        yield f"a board with {searched_db} dB, where {finding.certain} dB are certain"
    if verdict.outcome is Outcome.PASS and not searched_db >= -NOISE_DB:
        yield f"passes, and a board has {searched_db} dB"
    decided = verdict.outcome is not Outcome.UNDECIDED
    if decided and not finding.reached <= searched_db + AS_GOOD_DB:
        yield f"{finding.reached} dB called the worst, and a board has {searched_db} dB"
    if not finding.certain <= finding.reached:
        yield f"{finding.certain} dB certain, and {finding.reached} dB reached"


def misstated(one: Circuit, limit: Limit, finding: Finding) -> Iterator[str]:
    """Yield what is wrong with the worst board that a finding names."""
    values = board(one.drawing, finding.worst)
    if not is_allowed(one.drawing, values):
        yield f"values out of their tolerance: {values}"
    assert finding.freq_hz is not None
    margin_db = margin_of(one.drawing, limit, values, finding.freq_hz)
    if not abs(margin_db - finding.reached) < NEAR_DB:
        yield f"the worst board has {margin_db} dB at {finding.freq_hz} Hz, not {finding.reached}"
    stated_db = limit.tighter * (finding.value - finding.limit)
    if not abs(stated_db - finding.reached) < NEAR_DB:
        yield f"{finding.value} dB at a limit of {finding.limit} dB is not {finding.reached} dB"


@pytest.mark.parametrize("first", range(0, COUNT, CHUNK))
def test_no_board_of_a_search_contradicts_a_verdict(first: int, verdicts: Verdicts) -> None:
    said = [
        f"{problem}\n{one.text()}"
        for seed, one in enumerate(circuits()[first : first + CHUNK], start=first)
        for problem in complaints(one, seed, verdicts)
    ]

    assert not said, "\n".join(said)


def test_few_verdicts_are_undecided(verdicts: Verdicts) -> None:
    count = Counter(verdict.outcome for verdict in verdicts.values())

    assert count[Outcome.UNDECIDED] <= UNDECIDED_AT_MOST * len(verdicts), count
    # The limits are laid so that the others are a good part of each.
    assert min(count[Outcome.PASS], count[Outcome.FAIL]) > len(verdicts) / 5


def test_circuits_are_many_and_of_many_shapes() -> None:
    shapes = {one.name.rsplit("-", 1)[0] for one in circuits()}
    free = [int((one.drawing.low < one.drawing.high).sum()) for one in circuits()]
    kinds = Counter(limits[0].kind for one in circuits() for limits in one.requirements)

    assert len(circuits()) >= 200
    assert len(shapes) >= 20
    assert (min(free), max(free)) == (3, 12)
    assert set(kinds) == {"gain", "attenuation", "ripple"}


def test_sections_and_nodes_say_the_same(tmp_path_factory: pytest.TempPathFactory) -> None:
    some = [one for one in circuits()[:12] if one.sections]
    both = [
        judged(
            tmp_path_factory.mktemp("boards"),
            [(one.name, one.text(connected=connected)) for one in some],
        )
        for connected in (False, True)
    ]

    assert both[0].keys() == both[1].keys()
    for key, verdict in both[0].items():
        other = both[1][key]
        # The one may prove what the other cannot, but they can never contradict each other.
        assert {verdict.outcome, other.outcome} != {Outcome.PASS, Outcome.FAIL}
        for sense, finding in by_sense(verdict).items():
            margins = (finding.reached, by_sense(other)[sense].reached)
            np.testing.assert_allclose(*margins, atol=AS_GOOD_DB)
