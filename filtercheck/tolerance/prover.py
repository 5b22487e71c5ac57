"""Branch and bound over box and band: a limit is proved piece by piece.

A piece is a part of every stage's box and a segment of the band. A piece that does not prove
(`trial`) is halved: along the box where even a single frequency of it cannot be proved, else in
frequency. A board beyond the limit ends the attempt: it is a challenge to whoever set it.

The order of the pieces and the budget depend on nothing but the limit and the box: the same
input gives the same outcome.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from math import inf, isinf, log

from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.limit import Limit
from filtercheck.tolerance.segment import Segment
from filtercheck.tolerance.trial import Attempt, Trial


@dataclass(frozen=True)
class Proof:
    """What came out of an attempt."""

    gap_db: float  # what is not proved: every board keeps to the limit but for so much
    challenge: Board | None  # a board that is beyond the limit


@dataclass(frozen=True, eq=False)
class Piece:
    """A part of the boxes and of the band, and of the band of the reference."""

    chain: Chain
    segment: Segment
    references: tuple[Segment | None, ...]  # to be proved with one of them; None is no reference


def prove(chain: Chain, limit: Limit, choices_hz: tuple[float, ...], budget: int) -> Proof:
    """Try until all is proved, a board is beyond the limit, or the work exceeds the budget.

    Parameters
    ----------
    choices_hz : tuple of float
        Frequencies to measure from, for a limit that need hold from one reference only. [Hz]
    budget : int
        How many numbers may be computed before the attempt ends.
    """
    if limit.reference is None:
        return _proof(_pieces(chain, limit, choices_hz), limit, budget)
    light = _proof(_pieces(chain.relative.lightened, limit, choices_hz), limit, budget)
    if light.challenge is not None or light.gap_db <= 0.0:
        return light
    return _proof(_pieces(chain.relative, limit, choices_hz), limit, budget)


def _proof(left: list[Piece], limit: Limit, budget: int) -> Proof:
    work = 0
    while left and work <= budget:
        piece = left.pop()
        attempt = _attempt(piece, limit)
        work += attempt.work
        if attempt.challenge is not None:
            return Proof(attempt.gap_db, attempt.challenge)
        if attempt.gap_db > 0.0:
            left.extend(reversed(_halves(piece, limit)))
    gaps = [_attempt(piece, limit).gap_db for piece in left]
    return Proof(max(gaps, default=0.0), None)


def _pieces(chain: Chain, limit: Limit, choices_hz: tuple[float, ...]) -> list[Piece]:
    """Return the pieces to begin with: the band, cut where the limit has a corner."""

    def segment(low_hz: float, high_hz: float) -> Segment:
        return Segment(chain.omega(low_hz), chain.omega(high_hz))

    low, high = limit.band_hz
    cuts = [low, *(f for f, _ in limit.level_db if low < f < high), high]
    segments = [segment(*pair) for pair in (pairwise(cuts) if low < high else [(low, high)])]
    references: tuple[Segment | None, ...] = (None,)
    if limit.reference is not None:
        references = (segment(*limit.reference.band_hz),)
        if not limit.reference.every and not (references[0] and references[0].is_point):
            references = tuple(segment(freq, freq) for freq in choices_hz)
    return [Piece(chain, one, references) for one in reversed(segments)]


def _attempt(piece: Piece, limit: Limit) -> Attempt:
    """Try one piece, from each reference that it may be proved with."""
    best = Attempt(inf)
    for reference in piece.references:
        if _aside(piece.segment, reference, limit):
            return Attempt(0.0)
        one = Trial(piece.chain, piece.segment, reference, limit).attempt()
        if one.gap_db <= 0.0:
            return one
        best = min(best, one, key=lambda attempt: attempt.gap_db)
    if len(piece.references) > 1:
        # A board beyond the limit from one reference may keep to it from another.
        return Attempt(best.gap_db, None, best.work)
    return best


def _aside(segment: Segment, reference: Segment | None, limit: Limit) -> bool:
    """Whether a limit says nothing here: it holds on one side of its reference only."""
    if reference is None or limit.reference is None:
        return False
    if limit.reference.side == "above":
        return segment.high <= reference.low
    return limit.reference.side == "below" and segment.low >= reference.high


def _halves(piece: Piece, limit: Limit) -> list[Piece]:
    """Halve a piece: the box where a single frequency cannot be proved, else the band."""
    middle = _point(piece.segment)
    references = tuple(_point(one) if one else None for one in piece.references)
    if middle == piece.segment and references == piece.references:
        return _box_halves(piece)
    single = _attempt(Piece(piece.chain, middle, references), limit)
    if single.challenge is None and single.gap_db > 0.0:
        return _box_halves(piece)
    return _band_halves(piece)


def _box_halves(piece: Piece) -> list[Piece]:
    return [
        Piece(chain, piece.segment, piece.references)
        for chain in piece.chain.halves(_point(piece.segment).low)
    ]


def _band_halves(piece: Piece) -> list[Piece]:
    """Halve the band, or that of the reference where it is the wider one in ln w."""
    (reference, *others) = piece.references
    if reference is not None and not others and _width(reference) > _width(piece.segment):
        return [Piece(piece.chain, piece.segment, (half,)) for half in reference.halves()]
    return [Piece(piece.chain, half, piece.references) for half in piece.segment.halves()]


def _point(segment: Segment) -> Segment:
    return segment if segment.is_point else Segment(segment.middle, segment.middle)


def _width(segment: Segment) -> float:
    if segment.is_point:
        return 0.0
    return inf if segment.low == 0.0 or isinf(segment.high) else log(segment.high / segment.low)
