"""Limits of f0 and Q of the sharpest pole, for every board.

Proof. Take a stable box of which the nominal board keeps the limit. The sharpest pole of all
boards has a Q

    of at most q     if no board has a pole on the ray of Q = q: poles cannot cross it;
    of at least q    likewise, as many poles as the nominal board has stay beyond the ray.

And with a ray of some Q that no board has a pole on, beyond which the nominal board's sharpest
pole lies, the poles beyond it have sizes

    above (below) w  if no board has a pole on the arc |s| = w between ray and imaginary axis.
"""

from __future__ import annotations

from math import acos, pi

import numpy as np

from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.exclusion import arc, doubt, doubt_on_ray
from filtercheck.tolerance.limit import Poles
from filtercheck.tolerance.poles import extreme_board, poles, qualities, sharpest_of

# A ray that tells the sharpest poles from others, as a part of the lowest Q that they have.
APART = 0.9


def extreme(chain: Chain, claim: Poles) -> Board:
    """Return the board where the claim is nearest to failing, or fails most, as far as the
    ascent finds it. The sharpest pole is looked for in the stage where the nominal board has it."""
    sharp = _sharp_stage(chain)
    board = list(chain.nominal)
    stage = chain.stages[sharp]

    def height(found: Complex) -> Real:
        size, q = sharpest_of(found)
        return claim.sign * (q if claim.quantity == "Q" else size)

    board[sharp] = extreme_board(stage, height, stage.box.nominal[None, :])
    return tuple(board)


def _sharp_stage(chain: Chain) -> int:
    best = [
        float(qualities(poles(stage, stage.box.nominal[None, :])).max(initial=0.0))
        for stage in chain.stages
    ]
    return int(np.argmax(best))


def proved(chain: Chain, claim: Poles, budget: int) -> bool:
    """Whether the claim is proved for every board of a chain that is stable."""
    if claim.quantity == "Q":
        if claim.value <= 0.5:
            return False  # real poles have none lower, and are no resonance
        return _clear_ray(chain, _angle(claim.value), budget)
    least = Poles("Q", "at least", 0.0)
    board = extreme(chain, least)
    pairs = zip(chain.stages, board, strict=True)
    lowest = max(float(qualities(poles(s, p[None, :])).max(initial=0.0)) for s, p in pairs)
    apart = APART * lowest
    if apart <= 0.5 or not _same_side(chain, claim, apart):
        return False
    angle = _angle(apart)
    path = arc(chain.omega(claim.value), pi / 2.0, angle)
    return _clear_ray(chain, angle, budget) and all(
        doubt(stage, path, budget) is None for stage in chain.stages
    )


def _angle(q: float) -> float:
    return acos(-1.0 / (2.0 * q))


def _clear_ray(chain: Chain, angle: float, budget: int) -> bool:
    return all(doubt_on_ray(stage, angle, budget) is None for stage in chain.stages)


def _same_side(chain: Chain, claim: Poles, apart: float) -> bool:
    """Whether all poles of the nominal board beyond the ray keep the limit of the centre."""
    for stage in chain.stages:
        found = poles(stage, stage.box.nominal[None, :])[0]
        sizes = np.abs(found[qualities(found) > apart])
        if (claim.sign * (sizes - chain.omega(claim.value)) > 0.0).any():
            return False
    return True
