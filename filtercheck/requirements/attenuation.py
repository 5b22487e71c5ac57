"""Attenuate a band by at least so much, measured from the filter's own gain
elsewhere.

    requirements:
      VIB-2:
        kind: attenuation
        output: lowpass
        band: [4 kHz, up]
        min: 40 dB
        reference: 100 Hz
        verify: worst-case

The attenuation is the gain at the reference less the gain in the band, both of
the same board. In the place of `reference`, a pass band may be stated: its
largest gain counts.

        passband: [10 Hz, 800 Hz]

`min` may be given at several frequencies, and is straight between them in dB
over the logarithm of frequency: `min: {4 kHz: 24 dB, 16 kHz: 60 dB}`.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from filtercheck.model.requirement import Band, Mask, Requirement
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.quantities import rounded
from filtercheck.requirements import levels
from filtercheck.requirements.kind import Kind
from filtercheck.tolerance.limit import Claim, Limit, Pull, shifted


@dataclass(frozen=True)
class Attenuation:
    """So many dB below a reference, over a band."""

    band_hz: Band
    min_db: Mask
    reference: levels.Reference

    def findings(self, curve: Curve) -> Iterator[Finding]:
        """Yield where the attenuation is nearest to its limit."""
        top = self.reference.of(curve)
        ceiling = tuple((freq, top.gain_db - level) for freq, level in self.min_db)
        near = levels.nearest(curve, self.band_hz, ceiling, "at most")
        place = rounded(top.freq_hz, "frequency")
        yield Finding(
            subject="attenuation",
            sense="at least",
            limit=top.gain_db - near.limit_db,
            value=top.gain_db - near.gain_db,
            quantity="level",
            certain=near.margin_db,
            reached=near.margin_db,
            margin_quantity="level",
            freq_hz=near.freq_hz,
            reference_hz=top.freq_hz,
            note=f"below the gain at {place}, {rounded(top.gain_db, 'level')}",
        )

    def claims(self, index: int, margin: float) -> Iterator[Claim]:
        """Yield the gain's limit below the reference, so much tighter."""
        levels_db = tuple((freq, -level) for freq, level in self.min_db)
        yield Limit("at most", shifted(levels_db, -margin), self.band_hz, self.reference.any_of())

    def pull(self, finding: Finding) -> Pull | None:
        """Return the gain at the closest approach, less that at the reference."""
        return levels.pull(raised_hz=finding.freq_hz, lowered_hz=finding.reference_hz)


def read(requirement: Requirement) -> Attenuation:
    """Return what is asked for.

    Raises
    ------
    InputError
        If the limit is negative or does not span the band, or there is not just one reference.
    """
    band_hz = levels.band(requirement)
    limit = levels.mask(requirement, "min", band_hz) or ()
    if any(level_db < 0.0 for _, level_db in limit):
        raise requirement.error("min", "an attenuation cannot be negative", "0 dB or more")
    return Attenuation(band_hz, limit, levels.reference(requirement))


KIND = Kind("attenuation", __doc__, read)
