"""The gain of a response over frequency: its extremes on a band and where it falls to a level."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from filtercheck.network.extremes import Slope, slope
from filtercheck.network.ratio import Real
from filtercheck.network.response import Response

Band = tuple[float, float]  # [Hz]; the lower end may be 0, the upper end infinite
EVERYWHERE: Band = (0.0, np.inf)
# No crossing is sought beyond; powers of s as high as those of any filter stay finite there.
FARTHEST: Band = (1e-21, 1e21)


@dataclass(frozen=True)
class Point:
    """A point of the curve."""

    freq_hz: float
    gain_db: float


@dataclass(frozen=True, eq=False)
class Curve:
    """The gain of `response`, whose derivative is worked out once for all questions."""

    response: Response

    @cached_property
    def slope(self) -> Slope:
        return slope(self.response)

    def candidates_hz(self, band_hz: Band, line: float = 0.0) -> Real:
        """Return the ends of the band and the points inside where gain - line * ln f turns.

        The largest and the smallest value of that difference on the band are among them, and
        between two neighbours it is monotonic. `line` is in dB per neper of frequency.
        """
        low, high = band_hz
        return np.array([low, *self.slope.turns_hz(low, high, line), high])

    def highest(self, band_hz: Band = EVERYWHERE) -> Point:
        """Return the largest gain on the band, ends included; the lowest frequency of equals."""
        freq_hz = self.candidates_hz(band_hz)
        gain_db = self.response.gain_db(freq_hz)
        best = int(np.argmax(gain_db))
        return Point(float(freq_hz[best]), float(gain_db[best]))

    def lowest(self, band_hz: Band = EVERYWHERE) -> Point:
        """Return the smallest gain on the band, ends included; the lowest frequency of equals."""
        freq_hz = self.candidates_hz(band_hz)
        gain_db = self.response.gain_db(freq_hz)
        best = int(np.argmin(gain_db))
        return Point(float(freq_hz[best]), float(gain_db[best]))

    def gain_db(self, freq_hz: float) -> float:
        """Return the gain at one frequency; 0 Hz and infinity are allowed."""
        return float(self.response.gain_db(np.array([freq_hz]))[0])

    def fall_hz(self, start_hz: float, level_db: float, *, upward: bool) -> float | None:
        """Return the first frequency, going up or down from `start_hz`, where the gain has
        fallen to `level_db`, to about 1e-14 of itself; None where it never does."""
        band = (start_hz, np.inf) if upward else (0.0, start_hz)
        freq_hz = self.candidates_hz(band)[:: 1 if upward else -1]
        fallen = np.flatnonzero(self.response.gain_db(freq_hz) <= level_db)
        if not len(fallen):
            return None
        if fallen[0] == 0:
            return start_hz
        above, below = float(freq_hz[fallen[0] - 1]), float(freq_hz[fallen[0]])
        if above == 0.0 or np.isinf(above):
            above = self._toward(above, below, level_db, fallen=False)
        if below == 0.0 or np.isinf(below):
            below = self._toward(below, above, level_db, fallen=True)
        if not FARTHEST[0] < below < FARTHEST[1]:
            return None  # the level is that of the asymptote itself, which is never reached
        return self._bisected(above, below, level_db)

    def _toward(self, end_hz: float, start_hz: float, level_db: float, *, fallen: bool) -> float:
        """Return a frequency between `start_hz` and an end of the axis, on the end's side of
        the level; start from 1 Hz where both are ends."""
        step = 1e-3 if end_hz == 0.0 else 1e3
        here = start_hz if 0.0 < start_hz < np.inf else 1.0
        while (self.gain_db(here) <= level_db) != fallen and FARTHEST[0] < here < FARTHEST[1]:
            here *= step
        return here

    def _bisected(self, above_hz: float, below_hz: float, level_db: float) -> float:
        """Close in on the crossing of a monotonic stretch, sixteenfold a turn."""
        above, below = np.log([above_hz, below_hz])
        for _ in range(14):
            u = np.linspace(above, below, 17)
            first = int(np.argmax(self.response.gain_db(np.exp(u)) <= level_db)) or 16
            above, below = u[first - 1], u[first]
        return float(np.exp(below))
