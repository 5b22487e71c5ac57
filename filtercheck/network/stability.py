"""Whether a circuit oscillates: the places of its poles."""

from __future__ import annotations

from dataclasses import dataclass
from math import pi

from filtercheck.network.response import Response

# A pole so near the axis, as a fraction of its size, cannot be told from one on it.
ON_THE_AXIS = 1e-12


@dataclass(frozen=True)
class Instability:
    """A pole that is not in the left half-plane; `certain` when it is clear of the axis."""

    certain: bool
    freq_hz: float  # its distance from 0


def instability(response: Response) -> Instability | None:
    """Return what keeps a response from being stable, the worst first; None if nothing does.

    Poles that zeros of the response hide count as well: the circuit has them all the same.
    """
    doubt = None
    for factor in response.factors:
        if factor.integrations:
            doubt = Instability(certain=False, freq_hz=0.0)
        for pole in factor.poles:
            freq_hz = float(abs(pole) / (2.0 * pi))
            if pole.real > ON_THE_AXIS * abs(pole):
                return Instability(certain=True, freq_hz=freq_hz)
            if pole.real > -ON_THE_AXIS * abs(pole):
                doubt = Instability(certain=False, freq_hz=freq_hz)
    return doubt
