"""Keep the gain of a band within so much from its lowest to its highest value.

    requirements:
      VIB-3:
        kind: ripple
        output: lowpass
        band: [10 Hz, 700 Hz]
        max: 0.5 dB
        verify: worst-case

The ripple is peak to peak: the largest gain in the band less the smallest, its
ends included, both of the same board.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from filtercheck.model.requirement import Band, Requirement
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.quantities import rounded
from filtercheck.requirements import levels
from filtercheck.requirements.kind import Kind
from filtercheck.tolerance.limit import Claim, Limit, Pull, Reference


@dataclass(frozen=True)
class Ripple:
    """So many dB from the lowest to the highest gain of a band."""

    band_hz: Band
    max_db: float

    def findings(self, curve: Curve) -> Iterator[Finding]:
        """Yield the ripple, at the frequency of the smallest gain."""
        low, high = curve.lowest(self.band_hz), curve.highest(self.band_hz)
        ripple_db = float(np.subtract(high.gain_db, low.gain_db))
        yield Finding(
            subject="ripple",
            sense="at most",
            limit=self.max_db,
            value=ripple_db,
            quantity="level",
            certain=self.max_db - ripple_db,
            reached=self.max_db - ripple_db,
            margin_quantity="level",
            freq_hz=low.freq_hz,
            reference_hz=high.freq_hz,
            note=f"lowest there, highest at {rounded(high.freq_hz, 'frequency')}",
        )

    def claims(self, index: int, margin: float) -> Iterator[Claim]:
        """Yield that no gain of the band lies higher above another than so much less."""
        every = Reference(self.band_hz, every=True)
        yield Limit("at most", ((0.0, self.max_db - margin),), self.band_hz, every)

    def pull(self, finding: Finding) -> Pull | None:
        """Return the highest gain less the lowest."""
        return levels.pull(raised_hz=finding.reference_hz, lowered_hz=finding.freq_hz)


def read(requirement: Requirement) -> Ripple:
    """Return what is asked for.

    Raises
    ------
    InputError
        If the limit is negative.
    """
    max_db = requirement.number("max") or 0.0
    if max_db < 0.0:
        raise requirement.error("max", "a ripple cannot be negative", "0 dB or more")
    return Ripple(levels.band(requirement), max_db)


KIND = Kind("ripple", __doc__, read)
