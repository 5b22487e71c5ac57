"""Keep the gain between two limits over a band of frequencies.

    requirements:
      VIB-1:
        kind: gain
        output: lowpass
        band: [10 Hz, 800 Hz]
        min: -0.5 dB
        max: 0.3 dB
        verify: worst-case

Either limit may be left out. A limit that changes over the band is given at
several frequencies, and is straight between them in dB over the logarithm of
frequency:

        band: [2 kHz, 50 kHz]
        max: {2 kHz: -12 dB, 10 kHz: -60 dB, 50 kHz: -60 dB}

The limits hold at every frequency of the band, its ends included. A band may
start at 0 Hz, and `[2 kHz, up]` has no upper end.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from filtercheck.model.requirement import Band, Mask, Requirement
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.requirements import levels
from filtercheck.requirements.kind import Kind
from filtercheck.tolerance.limit import Claim, Limit, Pull, shifted


@dataclass(frozen=True)
class Gain:
    """A floor and a ceiling over a band."""

    band_hz: Band
    limits: tuple[tuple[str, Mask], ...]  # sense and level

    def findings(self, curve: Curve) -> Iterator[Finding]:
        """Yield the closest approach to each limit."""
        for sense, limit_db in self.limits:
            near = levels.nearest(curve, self.band_hz, limit_db, sense)
            yield Finding(
                subject="gain",
                sense=sense,
                limit=near.limit_db,
                value=near.gain_db,
                quantity="level",
                certain=near.margin_db,
                reached=near.margin_db,
                margin_quantity="level",
                freq_hz=near.freq_hz,
            )

    def claims(self, index: int, margin: float) -> Iterator[Claim]:
        """Yield the limit, so much tighter."""
        sense, limit_db = self.limits[index]
        inward = margin if sense == "at least" else -margin
        yield Limit(sense, shifted(limit_db, inward), self.band_hz)

    def pull(self, finding: Finding) -> Pull | None:
        """Return the gain at the closest approach."""
        if finding.freq_hz is None:
            return None
        return Pull(((finding.freq_hz, 1 if finding.sense == "at most" else -1),))


def read(requirement: Requirement) -> Gain:
    """Return what is asked for.

    Raises
    ------
    InputError
        If no limit is given, a limit does not span the band, or the floor lies above the
        ceiling somewhere.
    """
    band_hz = levels.band(requirement)
    floor = levels.mask(requirement, "min", band_hz)
    ceiling = levels.mask(requirement, "max", band_hz)
    if floor is None and ceiling is None:
        raise requirement.error("min", "has no limit", "`min`, `max` or both", "add `max: 0 dB`")
    if floor and ceiling and levels.crossed(floor, ceiling, band_hz):
        raise requirement.error("min", "the floor lies above the ceiling", "a `min` below `max`")
    limits = (("at least", floor), ("at most", ceiling))
    return Gain(band_hz, tuple((sense, limit) for sense, limit in limits if limit))


KIND = Kind("gain", __doc__, read)
