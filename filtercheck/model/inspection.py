"""What there is to know of a filter besides its verdicts."""

from __future__ import annotations

from dataclasses import dataclass

Range = tuple[float, float]


@dataclass(frozen=True)
class Root:
    """A pole or a zero, or a pair of them: s^2 + s w0/Q + w0^2."""

    freq_hz: float  # |s|/(2 pi)
    q: float | None  # negative in the right half-plane; None for a real root
    freq_range_hz: Range  # over all boards, as far as a search finds
    q_range: Range | None
    sensitivities: tuple[tuple[str, float, float], ...]  # part, d ln f0/d ln part, d ln Q/d ln part


@dataclass(frozen=True)
class Budget:
    """What takes up the margin of one limit, from the board as fitted to the worst one."""

    requirement: str
    limit: str
    nominal: float
    worst: float
    quantity: str  # of the margins: "level" or "percentage"
    shares: tuple[tuple[str, float], ...]  # part, how much its tolerance takes; the largest first


@dataclass(frozen=True)
class Inspection:
    """One filter."""

    name: str
    title: str
    poles: tuple[Root, ...]
    zeros: tuple[tuple[str, tuple[Root, ...]], ...]  # by output; those at 0 are left out
    budgets: tuple[Budget, ...]
