"""How the margin changes with each part: by so much for each per cent of its value."""

from __future__ import annotations

from math import isfinite

import numpy as np

from filtercheck.model.verdict import Finding
from filtercheck.network.ratio import Real
from filtercheck.network.response import DECIBEL_PER_NEPER
from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.climb import Aim, heights
from filtercheck.tolerance.limit import Pull
from filtercheck.tolerance.poles import sharpest
from filtercheck.wiring.variation import Variation

STEP = 1e-4  # of a value or a frequency, to either side

Sensitivities = tuple[tuple[str, float], ...]


def sensitivities(
    variation: Variation, chain: Chain, board: Board, finding: Finding, pull: Pull | None
) -> Sensitivities:
    """Return what 1 % more of each value adds to the margin of a board, the largest first.

    Returns
    -------
    tuple of (str, float)
        A part, or an amplifier's figure such as `U1.gain_bandwidth`, and the change in the
        unit of the margin.
    """
    if pull is not None:
        terms = tuple((chain.omega(freq_hz), sign) for freq_hz, sign in pull.terms)
        slopes = [-s * _worth(chain, board, finding, terms) for s in _slopes(chain, board, terms)]
    else:
        slopes = _pole_slopes(chain, board, finding)
    found: dict[str, float] = {}
    for index, of_stage in enumerate(slopes):
        for name, symbol, power in variation.varying(index):
            change = 0.01 * power * float(of_stage[symbol])
            if isfinite(change) and change:
                found[name] = change
    return tuple(sorted(found.items(), key=lambda pair: (-abs(pair[1]), pair[0])))


def _slopes(chain: Chain, board: Board, terms: tuple[tuple[float, int], ...]) -> list[Real]:
    """Return the derivative of the pull, in dB, by the logarithm of each own value."""
    found = []
    for stage, point in zip(chain.stages, board, strict=True):
        steps = heights(stage, Aim(terms), _steps(point))
        found.append(DECIBEL_PER_NEPER * (steps[: len(point)] - steps[len(point) :]) / (2.0 * STEP))
    return found


def _steps(point: Real) -> Real:
    """Return the point with each coordinate a step up, then with each a step down."""
    up, down = np.diag(point * STEP), np.diag(-point * STEP)
    return np.concatenate([point + up, point + down])


def _worth(
    chain: Chain, board: Board, finding: Finding, terms: tuple[tuple[float, int], ...]
) -> float:
    """Return what a dB is of the margin: itself, or where a frequency is limited, the part of it
    by which the frequency moves when the gain there moves by a dB."""
    if finding.margin_quantity == "level" or finding.freq_hz is None:
        return 1.0
    omega = chain.omega(finding.freq_hz)
    ends = [sum(chain.heights(Aim(((omega * f, 1),)), board)) for f in (1.0 + STEP, 1.0 - STEP)]
    slope = abs(DECIBEL_PER_NEPER * (ends[0] - ends[1]) / (2.0 * STEP))
    return finding.value / finding.limit / slope if slope else 0.0


def _pole_slopes(chain: Chain, board: Board, finding: Finding) -> list[Real]:
    """Return the derivative of the margin, where it is one of the sharpest pole."""
    sign = 1.0 if finding.sense == "at least" else -1.0
    found = []
    for stage, point in zip(chain.stages, board, strict=True):
        centre, q = sharpest(stage, _steps(point))
        value = chain.freq_hz(1.0) * centre if finding.quantity == "frequency" else q
        change = (value[: len(point)] - value[len(point) :]) / (2.0 * STEP)
        here, _ = sharpest(stage, point[None, :])
        is_sharpest = np.isclose(chain.freq_hz(float(here[0])), finding.freq_hz or 0.0, rtol=1e-6)
        found.append(sign * change / finding.limit * float(is_sharpest))
    return found
