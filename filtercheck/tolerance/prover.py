"""Branch and bound over box and band: a limit is proved piece by piece.

A piece is a part of every stage's box and a segment of the band. A piece that does not prove
(`trial`) is halved: along the box where even a single frequency of it cannot be proved, else in
frequency. A board beyond the limit ends the attempt: it is a challenge to whoever set it.

The order of the pieces and the budget depend on nothing but the limit and the box: the same
input gives the same outcome.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise
from math import inf

from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.limit import Limit
from filtercheck.tolerance.segment import Segment
from filtercheck.tolerance.trial import Attempt, Trial

# More than this of a gap does not come from what was taken as exact.
LIGHTNESS_DB = 0.02


@dataclass(frozen=True)
class Proof:
    """What came out of an attempt."""

    gap_db: float  # what is not proved: every board keeps to the limit but for so much
    challenge: Board | None  # a board that is beyond the limit


@dataclass(frozen=True, eq=False)
class Piece:
    """A part of the boxes and of the band, and of the band of a reference that every gain of
    counts; where one of them is enough, it is chosen for each part of the boxes."""

    chain: Chain
    segment: Segment
    reference: Segment | None = None
    gap_db: float = inf  # what was left to prove of the piece that this is a half of


def prove(chain: Chain, limit: Limit, choices_hz: tuple[float, ...], budget: int) -> Proof:
    """Try until all is proved, a board is beyond the limit, or the work exceeds the budget.

    Parameters
    ----------
    choices_hz : tuple of float
        Frequencies to measure from, for a limit that need hold from one reference only; besides
        them the one where the board in the middle of a part has its largest gain. [Hz]
    budget : int
        How many numbers may be computed before the attempt ends.
    """
    if limit.reference is None:
        return _proof(chain, limit, choices_hz, budget)
    light = _proof(chain.relative.lightened, limit, choices_hz, budget)
    by_lightness = 0.0 < light.gap_db <= LIGHTNESS_DB and chain.relative.is_lighter
    if light.challenge is not None or not by_lightness:
        return light
    return _proof(chain.relative, limit, choices_hz, budget)


def _proof(chain: Chain, limit: Limit, choices_hz: tuple[float, ...], budget: int) -> Proof:
    left, work = _pieces(chain, limit), 0
    while left and work <= budget:
        piece = left.pop()
        attempt = _attempt(piece, limit, choices_hz)
        work += 2 * attempt.work  # where it fails, the middle frequency is tried as well
        if attempt.challenge is not None:
            return Proof(attempt.gap_db, attempt.challenge)
        if attempt.gap_db > 0.0:
            gap_db = min(piece.gap_db, attempt.gap_db)
            halves = _halves(piece, attempt, limit, choices_hz)
            left.extend(replace(half, gap_db=gap_db) for half in reversed(halves))
            if not halves:
                return Proof(gap_db, None)
    return Proof(max((piece.gap_db for piece in left), default=0.0), None)


def _pieces(chain: Chain, limit: Limit) -> list[Piece]:
    """Return the pieces to begin with: the band, cut where the limit has a corner."""

    def segment(low_hz: float, high_hz: float) -> Segment:
        return Segment(chain.omega(low_hz), chain.omega(high_hz))

    low, high = limit.band_hz
    cuts = [low, *(f for f, _ in limit.level_db if low < f < high), high]
    segments = [segment(*pair) for pair in (pairwise(cuts) if low < high else [(low, high)])]
    over = limit.reference
    reference = segment(*over.band_hz) if over and not over.is_choice else None
    return [Piece(chain, one, reference) for one in reversed(segments)]


def _attempt(piece: Piece, limit: Limit, choices_hz: tuple[float, ...]) -> Attempt:
    """Try one piece, from each reference that it may be proved from."""
    if limit.reference is None or not limit.reference.is_choice:
        if _aside(piece, limit):
            return Attempt(0.0)
        return Trial(piece.chain, piece.segment, piece.reference, limit).attempt()
    best = Attempt(inf)
    for freq_hz in (piece.chain.peak_hz(limit.reference.band_hz), *choices_hz):
        omega = piece.chain.omega(freq_hz)
        one = Trial(piece.chain, piece.segment, Segment(omega, omega), limit).attempt()
        # A board beyond the limit from one reference may keep to it from another.
        best = Attempt(
            min(best.gap_db, one.gap_db),
            None,
            best.work + one.work,
            max(best.slack_db, one.slack_db),
        )
        if best.gap_db <= 0.0:
            break
    return best


def _aside(piece: Piece, limit: Limit) -> bool:
    """Whether a limit says nothing here: it holds on one side of its reference only."""
    if piece.reference is None or limit.reference is None:
        return False
    if limit.reference.side == "above":
        return piece.segment.high <= piece.reference.low
    return limit.reference.side == "below" and piece.segment.low >= piece.reference.high


def _halves(
    piece: Piece, attempt: Attempt, limit: Limit, choices: tuple[float, ...]
) -> list[Piece]:
    """Halve a piece where more of its gap comes from: the box, or the band.

    No gap is less than minus the slack of the worst boards. What the middle frequency alone is
    above that comes from the box, what the whole piece is above the middle from the band.
    """
    middle = _point(piece.segment)
    reference = _point(piece.reference) if piece.reference else None
    if middle == piece.segment and reference == piece.reference:
        return _box_halves(piece)
    single = _attempt(Piece(piece.chain, middle, reference), limit, choices)
    from_box, from_band = single.gap_db + single.slack_db, attempt.gap_db - single.gap_db
    if limit.reference is not None and limit.reference.is_choice and single.gap_db > 0.0:
        from_band = -inf  # the slack is that from a reference that may be a bad choice
    if single.challenge is None and from_band < from_box:
        return _box_halves(piece) or _band_halves(piece)
    return _band_halves(piece) or _box_halves(piece)


def _box_halves(piece: Piece) -> list[Piece]:
    omega = _point(piece.segment).low
    return [replace(piece, chain=chain) for chain in piece.chain.halves(omega)]


def _band_halves(piece: Piece) -> list[Piece]:
    """Halve the band, or that of the reference where responses change more on it; return nothing
    where numbers do not lie close enough to halve any."""
    segment, reference = piece.segment, piece.reference
    if reference is not None:
        changes = [piece.chain.change(one.low, one.high) for one in (segment, reference)]
        if changes[1] > changes[0] and reference.is_divisible:
            return [replace(piece, reference=half) for half in reference.halves()]
    if not segment.is_divisible:
        return []
    return [replace(piece, segment=half) for half in segment.halves()]


def _point(segment: Segment) -> Segment:
    return segment if segment.is_point else Segment(segment.middle, segment.middle)
