"""Verify for every board: the worst one is searched for, then it is proved that none is worse.

The search alternates between the exact worst frequency of a board, which the requirement
itself measures, and the worst board at that frequency. The proof is tried for a margin hardly
smaller than the worst that was found. A board that the attempt runs into takes the place of
the worst one found, and the proof is tried again.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from functools import cached_property
from hashlib import sha256
from itertools import islice
from math import inf, isnan

import numpy as np

from filtercheck.model.part import Part
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Band, Curve
from filtercheck.network.response import DECIBEL_PER_NEPER
from filtercheck.requirements.kind import Wanted
from filtercheck.tolerance import pole_limits
from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.climb import Aim
from filtercheck.tolerance.limit import Limit, Poles
from filtercheck.tolerance.prover import prove
from filtercheck.verification.sensitivity import sensitivities
from filtercheck.wiring.variation import Variation

# How much smaller than the margin found the margin to prove is; they are to agree within 0.01 dB.
SLACK_DB = 0.004
SLACK_PERCENTAGE = 0.0004
# Numbers computed, or that could be in the time, before an attempt at a proof ends.
BUDGET = 800_000_000
# The same where a reference has to be chosen for each part of the box, which is hardly ever
# proved later if not soon.
BUDGET_OF_CHOICE = 400_000_000
ROUNDS = 12  # of the search from one board, and of proofs that run into a worse board
SEEDS = 9  # frequencies of a band where the search begins, next to those that the nominal board has
CLIMBS = 3  # of those, the worst, where the ascent begins
RANDOM_BOARDS = 2


@dataclass(frozen=True)
class Found:
    """A board and what the requirement measures of it."""

    board: Board
    finding: Finding


def findings(
    wanted: Wanted, variation: Variation, output: str, nominal: Curve, identity: str
) -> Iterator[Finding]:
    """Yield the closest approach to each limit over all boards, with the margin proved.

    Parameters
    ----------
    identity : str
        What seeds the random boards of the search: the same requirement, the same boards.
    """
    chain = variation.chain(output)
    for index in range(len(list(wanted.findings(nominal)))):
        yield _Question(wanted, index, variation, chain, output, nominal, identity).answer()


@dataclass(frozen=True, eq=False)
class _Question:
    """One limit of one requirement."""

    wanted: Wanted
    index: int
    variation: Variation
    chain: Chain
    output: str
    nominal: Curve
    identity: str

    def answer(self) -> Finding:
        worst = self._searched()
        goals = self._goals(worst)
        certain = -inf
        for _ in range(ROUNDS):
            if not goals:
                break
            certain, challenge = self._attempted(goals[0], worst)
            if challenge is not None and self._is_worse(challenge, worst):
                worst = self._refined(challenge)
                goals = self._goals(worst)
            elif challenge is None and (certain >= 0.0 or len(goals) == 1):
                break
            else:
                goals = goals[1:]
        finding = worst.finding
        return replace(
            finding,
            certain=min(certain, finding.reached),
            worst=tuple(self.variation.fitted(worst.board).values()),
            sensitivities=sensitivities(
                self.variation, self.chain, worst.board, finding, self.wanted.pull(finding)
            ),
        )

    def _measured(self, board: Board) -> Found:
        """Measure a board as it will be reported: with values that can be written down."""
        found = []
        for one in self.variation.reconciled(board):
            curve = self._curve(self.variation.fitted(one))
            finding = next(islice(self.wanted.findings(curve), self.index, None))
            found.append(Found(one, finding))
        return min(found, key=_margin)

    def _curve(self, parts: dict[str, Part]) -> Curve:
        return Curve(self.variation.wiring.response(self.output, parts))

    def _searched(self) -> Found:
        starts: list[Found] = []
        for claim in self.wanted.claims(self.index, 0.0):
            if isinstance(claim, Poles):
                starts.append(self._measured(pole_limits.extreme(self.chain, claim)))
            else:
                starts.extend(self._measured(board) for board in self._seeds(claim))
        starts = starts or [self._measured(self.chain.nominal)]
        return min((self._refined(start) for start in starts), key=_margin)

    def _seeds(self, limit: Limit) -> Iterator[Board]:
        """Yield the board that is worst at the worst of some frequencies of the band; random
        boards to begin with may find a worse one than the best corner does."""
        chain = self.chain if limit.reference is None else self.chain.relative
        for aim, _ in self._worst_aims(chain, limit)[:1]:
            boards = [chain.worst(aim), *(chain.climbed(aim, one) for one in self._drawn(chain))]
            yield max(boards, key=lambda board: sum(chain.heights(aim, board)))

    def _worst_aims(self, chain: Chain, limit: Limit) -> list[tuple[Aim, float]]:
        """Return the aims, and the excess of the best corner over what is allowed, the worst
        first; the first few with the excess of the worst board."""

        def excess(aim: Aim, allowed: float, board: Board) -> tuple[Aim, float]:
            return aim, sum(chain.heights(aim, board)) - allowed

        aims = list(self._aims(limit))
        allowed = dict(aims)
        corners = [excess(aim, level, chain.corner(aim)) for aim, level in aims]
        ranked = sorted(corners, key=lambda pair: -pair[1])[:CLIMBS]
        climbed = [excess(aim, allowed[aim], chain.worst(aim)) for aim, _ in ranked]
        return sorted(climbed, key=lambda pair: -pair[1])

    def _drawn(self, chain: Chain) -> Iterator[Board]:
        seed = sha256(f"{self.identity} {self.index}".encode()).digest()
        random = np.random.default_rng(list(seed))
        for _ in range(RANDOM_BOARDS):
            yield tuple(random.uniform(stage.box.low, stage.box.high) for stage in chain.stages)

    def _aims(self, limit: Limit) -> Iterator[tuple[Aim, float]]:
        """Yield where to look, and what the aim may be there."""
        for freq_hz in self._places(limit.band_hz):
            omega = self.chain.omega(freq_hz)
            allowed = limit.excess_allowed_db(freq_hz) / DECIBEL_PER_NEPER
            if limit.reference is None:
                yield Aim(((omega, limit.sign),)), allowed
                continue
            others = self._extremes(limit.reference.band_hz)
            for other_hz in others:
                other = self.chain.omega(other_hz)
                yield Aim(((omega, limit.sign), (other, -limit.sign))), allowed

    def _places(self, band_hz: Band) -> list[float]:
        """Return frequencies of a band: ends, turning points of the nominal response, some more."""
        turns = [float(freq) for freq in self.nominal.candidates_hz(band_hz)]
        low, high = (min(max(end, self._span[0]), self._span[1]) for end in band_hz)
        between = np.geomspace(low, high, SEEDS).tolist() if low < high else []
        return sorted({*turns, *between})

    def _extremes(self, band_hz: Band) -> list[float]:
        curve = self.nominal
        return sorted({curve.highest(band_hz).freq_hz, curve.lowest(band_hz).freq_hz})

    @cached_property
    def _span(self) -> Band:
        """Between what frequencies a response is interesting: a decade about its poles."""
        sizes = np.abs(self.nominal.response.poles) / (2.0 * np.pi)
        return (float(sizes.min()) / 10.0, float(sizes.max()) * 10.0) if len(sizes) else (1.0, 1.0)

    def _refined(self, start: Found | Board) -> Found:
        """Go on from a board as long as the margin shrinks."""
        best = start if isinstance(start, Found) else self._measured(start)
        for _ in range(ROUNDS):
            pull = self.wanted.pull(best.finding)
            if pull is None:
                break
            terms = tuple((self.chain.omega(freq_hz), sign) for freq_hz, sign in pull.terms)
            next_one = self._measured(self.chain.climbed(Aim(terms), best.board))
            if not next_one.finding.reached < best.finding.reached - 1e-10:
                break
            best = next_one
        return best

    def _is_worse(self, challenge: Board, worst: Found) -> bool:
        """Whether a board on which the proof broke is worse than the worst one found. It need not
        be: the parts of one network may be torn apart, a reference be another than its own."""
        return self._refined(challenge).finding.reached < worst.finding.reached

    def _goals(self, worst: Found) -> list[float]:
        """Return the margins to prove, one after the other until one is: one hardly smaller than
        that of the worst board, then that there is any."""
        reached = worst.finding.reached
        if isnan(reached) or reached == -inf:
            return []
        if reached == inf:
            return [0.0]
        slack = SLACK_DB if worst.finding.margin_quantity == "level" else SLACK_PERCENTAGE
        if reached < 0.0:
            return [reached - slack]
        return [reached - slack, 0.0] if reached > slack else [0.0]

    def _attempted(self, goal: float, worst: Found) -> tuple[float, Board | None]:
        """Return the margin that is proved, or a board on which the proof broke."""
        level, certain = worst.finding.margin_quantity == "level", goal
        for claim in self.wanted.claims(self.index, goal):
            if isinstance(claim, Poles):
                if not pole_limits.proved(self.chain, claim, BUDGET):
                    return -inf, None
                continue
            chooses = claim.reference is not None and claim.reference.is_choice
            budget = BUDGET_OF_CHOICE if chooses else BUDGET
            proof = prove(self.chain, claim, self._choices_hz(claim, worst), budget)
            if proof.challenge is not None:
                return -inf, proof.challenge
            if proof.gap_db > 0.0:
                certain = min(certain, goal - proof.gap_db if level else -inf)
        return certain, None

    def _choices_hz(self, limit: Limit, worst: Found) -> tuple[float, ...]:
        """Return where the largest gain may be measured: where it is on this board and on that."""
        if limit.reference is None or limit.reference.every:
            return ()
        curves = (self.nominal, self._curve(self.variation.fitted(worst.board)))
        return tuple(sorted({c.highest(limit.reference.band_hz).freq_hz for c in curves}))


def _margin(found: Found) -> float:
    """Return the margin, to find the smallest; one that is no number is smaller than all."""
    return -inf if isnan(found.finding.reached) else found.finding.reached
