"""What can be proved for every board of a box: a limit on a level, over a band of frequencies."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from filtercheck.network.ratio import Real

Band = tuple[float, float]  # [Hz]
Mask = tuple[tuple[float, float], ...]  # (frequency [Hz], level [dB]), rising in frequency


@dataclass(frozen=True)
class Reference:
    """Frequencies whose gain on the same board a level is measured from."""

    band_hz: Band  # equal ends are one frequency
    every: bool  # whether the limit holds from each of them, or it is enough to hold from one
    side: str = ""  # "above" or "below" where it holds on that side of the reference only

    @property
    def is_choice(self) -> bool:
        """Whether there are several references of which one is enough."""
        return not self.every and self.band_hz[0] < self.band_hz[1]


@dataclass(frozen=True)
class Limit:
    """The gain, or the gain less that at a reference, is at least or at most a level.

    The level is straight in dB over the logarithm of frequency between the points of the mask,
    which span the band; a mask of one point is the same level everywhere.
    """

    sense: str  # "at least" or "at most"
    level_db: Mask
    band_hz: Band
    reference: Reference | None = None

    @property
    def sign(self) -> int:
        """1 where a larger gain is worse, -1 where a smaller one is."""
        return 1 if self.sense == "at most" else -1

    def excess_allowed_db(self, freq_hz: float) -> float:
        """Return what sign * gain may be at most. [dB]"""
        return self.sign * float(levels_at(self.level_db, np.array([freq_hz]))[0])


@dataclass(frozen=True)
class Poles:
    """The pole with the highest Q, of size 2 pi f0 and of Q = |p| / (-2 Re p), keeps to a limit."""

    quantity: str  # "centre" [Hz] or "Q"
    sense: str  # "at least" or "at most"
    value: float

    @property
    def sign(self) -> int:
        """1 where a larger value is worse, -1 where a smaller one is."""
        return 1 if self.sense == "at most" else -1


Claim = Limit | Poles


@dataclass(frozen=True)
class Pull:
    """What makes a margin smaller: gains, in dB, that rise (1) or fall (-1) at frequencies."""

    terms: tuple[tuple[float, int], ...]  # (frequency [Hz], 1 or -1)


def shifted(mask: Mask, by_db: float) -> Mask:
    """Return a mask with all its levels raised."""
    return tuple((freq, level + by_db) for freq, level in mask)


def levels_at(mask: Mask, freq_hz: Real) -> Real:
    """Return the levels of a mask at frequencies of its span, (F,). [dB]"""
    points, levels = np.array(mask).T
    if len(mask) == 1:
        return np.full(len(freq_hz), levels[0])
    return np.asarray(np.interp(np.log(freq_hz), np.log(points), levels), dtype=float)
