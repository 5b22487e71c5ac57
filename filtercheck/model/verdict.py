"""Findings, verdicts, and the only place that decides.

Every requirement gets one of three verdicts:

    pass        it holds
    fail        it does not; the report names frequency, value, limit, margin
    undecided   neither could be shown; this fails the build just as a fail does

A requirement that is verified for the worst case passes only when it is proved
for every combination of part values within tolerance and every frequency of
its band; it fails only with a board that breaks it, which the report names. A
yield passes when the lower end of the interval of the share of good boards
reaches the share required, and fails when the upper end misses it.

A margin is the distance of the closest approach to a limit, negative beyond
it: in dB for a level, in per cent of the limit for a frequency or a Q. Exactly
on the limit is inside it. A circuit with a pole in the right half-plane
oscillates and fails every requirement; one with a pole on the imaginary axis,
or too near to tell, is undecided.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from enum import Enum
from math import inf, log10

from filtercheck.errors import InputError
from filtercheck.model.part import Part
from filtercheck.position import Position


class Outcome(Enum):
    """Three outcomes, and doubt is never success."""

    PASS = "pass"  # noqa: S105  (a verdict, not a password)
    FAIL = "fail"
    UNDECIDED = "undecided"


@dataclass(frozen=True)
class Finding:
    """The closest approach to one limit; a negative margin is beyond it."""

    subject: str  # "gain", "centre frequency", ...
    sense: str  # "at least" or "at most"
    limit: float  # in the quantity's unit, at the place of the closest approach
    value: float
    quantity: str  # of limit and value, a key of QUANTITIES
    certain: float  # margin that every combination keeps
    reached: float  # margin of the worst combination found
    margin_quantity: str  # "level" [dB] or "percentage" (of the limit)
    freq_hz: float | None  # where; None where there is no such place
    reference_hz: float | None = None  # where the gain is that the value is measured from
    note: str = ""  # what the value is measured from, or why there is none
    interval: tuple[float, float] | None = None  # of a share, with the confidence asked for
    worst: tuple[Part, ...] = ()  # the parts of the worst combination; none for `nominal`
    sensitivities: tuple[tuple[str, float], ...] = ()  # part, change of the margin per 1 %

    @property
    def tightness_db(self) -> float:
        """The margin as a ratio in dB, so that margins of all kinds can be put in order."""
        if self.margin_quantity == "level":
            return self.reached
        return 20.0 * log10(1.0 + self.reached) if self.reached > -1.0 else -inf


@dataclass(frozen=True)
class Verdict:
    """The judgement of one requirement on one filter."""

    filter: str
    requirement: str
    kind: str
    output: str
    verify: str
    outcome: Outcome
    findings: tuple[Finding, ...]  # the tightest first
    reason: str  # why it fails or is undecided whatever the findings; else empty
    unstable: tuple[Part, ...]  # the parts of a board that oscillates, if that is the reason
    at: Position


@dataclass(frozen=True)
class Judged:
    """One filter with all its verdicts and the part values they hold for."""

    name: str
    title: str
    file: str
    parts: tuple[Part, ...]
    verdicts: tuple[Verdict, ...]


@dataclass(frozen=True)
class Run:
    """All that one invocation found, in file order."""

    board: str  # the board's name, empty where there is no board file
    filters: tuple[Judged, ...]
    faults: tuple[InputError, ...]  # what could not be judged
    hashes: Mapping[str, str]  # input file -> SHA-256 of its bytes

    @property
    def verdicts(self) -> tuple[Verdict, ...]:
        return tuple(verdict for judged in self.filters for verdict in judged.verdicts)


def decide(findings: Sequence[Finding]) -> Outcome:
    """Pass needs proof, fail needs a counterexample; anything else is undecided.

    NaN compares false both ways, so a NaN margin is undecided, never a pass.
    """
    if any(finding.reached < 0 for finding in findings):
        return Outcome.FAIL
    if findings and all(finding.certain >= 0 for finding in findings):
        return Outcome.PASS
    return Outcome.UNDECIDED
