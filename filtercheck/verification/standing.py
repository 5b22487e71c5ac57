"""Whether a filter is stable: as fitted, and for every board that its tolerances allow.

A response limit means nothing for a circuit that oscillates.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import pi

import numpy as np

from filtercheck.model.part import Figure, OpAmp, Part
from filtercheck.model.subject import Subject
from filtercheck.model.verdict import Outcome
from filtercheck.network.ratio import Real
from filtercheck.network.response import Response
from filtercheck.network.stability import instability
from filtercheck.quantities import rounded
from filtercheck.tolerance.exclusion import doubt_on_ray
from filtercheck.tolerance.poles import extreme_board, lean, poles
from filtercheck.tolerance.stage import Stage
from filtercheck.wiring.variation import Variation
from filtercheck.wiring.wired import responses, wired

FAST = Figure(1e12, 1e12, 1e12)  # a gain-bandwidth far above that of any part [Hz]
BUDGET = 400_000_000  # numbers computed before the attempt at a proof ends


@dataclass(frozen=True)
class Standing:
    """Why a filter is not shown stable, and the board that shows that it is not."""

    outcome: Outcome
    reason: str
    board: tuple[Part, ...] = ()


def with_real_amplifiers(subject: Subject) -> Subject:
    """Return the filter with op-amps that are fast, but not infinitely so.

    The equations of an ideal op-amp cannot tell its inputs apart: exchanged by mistake, they
    give the same response, and only a finite bandwidth shows that the loop runs away.
    """
    real = {
        name: replace(part, gain_bandwidth=FAST)
        if isinstance(part, OpAmp) and part.gain_bandwidth is None
        else part
        for name, part in subject.parts.items()
    }
    return replace(subject, parts=real)


def nominal(subject: Subject, whole: Response) -> Standing | None:
    """Return why a filter is not shown stable as fitted; None when it is."""
    fast = with_real_amplifiers(subject)
    found = _of(whole)
    if found is not None or fast == subject:
        return found
    return _of(responses(fast, wired(fast))[1])


def _of(whole: Response) -> Standing | None:
    found = instability(whole)
    if found is None:
        return None
    pole = f"a pole at {rounded(found.freq_hz, 'frequency')}"
    if found.certain:
        return Standing(Outcome.FAIL, f"unstable: {pole} lies in the right half-plane")
    reason = f"not shown stable: {pole} lies on the imaginary axis, or too near"
    return Standing(Outcome.UNDECIDED, reason)


def every_board(subject: Subject, variation: Variation) -> Standing | None:
    """Return why not every board of a filter is shown stable, given that it is as fitted."""
    fast = with_real_amplifiers(subject)
    if fast != subject:
        variation = Variation(wired(fast), fast.parts)
    whole = variation.whole
    for index, stage in enumerate(whole.stages):
        found = doubt_on_ray(stage, pi / 2.0, BUDGET, _oscillates)
        if found is not None:
            board = list(whole.nominal)
            board[index] = _least_stable(found.stage)
            parts = variation.fitted(tuple(board))
            shown = _of(variation.wiring.whole(parts))
            if shown is not None and shown.outcome is Outcome.FAIL:
                return replace(shown, board=_as_stated(parts, subject))
            place = rounded(whole.freq_hz(abs(found.at)), "frequency")
            reason = f"not shown stable: poles near {place} could not be kept off the axis"
            return Standing(Outcome.UNDECIDED, reason)
    return None


def _as_stated(parts: dict[str, Part], subject: Subject) -> tuple[Part, ...]:
    """Return the parts of a board; amplifiers that the file calls ideal are ideal again."""
    found = []
    for name, part in parts.items():
        stated = subject.parts[name]
        if isinstance(part, OpAmp) and isinstance(stated, OpAmp) and stated.gain_bandwidth is None:
            part = replace(part, gain_bandwidth=None)
        found.append(part)
    return tuple(found)


def _least_stable(stage: Stage) -> Real:
    return extreme_board(stage, lean, np.array([stage.box.nominal, stage.box.centre]))


def _oscillates(stage: Stage) -> bool:
    return bool(lean(poles(stage, _least_stable(stage)[None, :]))[0] > 1e-9)
