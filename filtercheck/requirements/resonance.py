"""Keep the centre frequency and the Q of a band-pass between limits.

    requirements:
      VIB-5:
        kind: resonance
        output: bandpass
        centre: [4.9 kHz, 5.1 kHz]
        q: [9.5, 10.5]
        verify: nominal

Both are those of the response, as measured on a bench: f1 and f2 are where the
power has fallen to half on either side of the largest gain; the centre
frequency is the geometric mean of f1 and f2, and Q is the centre frequency
over f2 - f1. For a section of second order these are f0 and Q of its pole
pair. Either `centre` or `q` may be left out.

Source: common practice, no source. For a second-order band-pass |H| is
symmetric in the logarithm of frequency about f0, and f2 - f1 = f0/Q.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from math import isfinite, log10, sqrt

from filtercheck.model.requirement import Band, Requirement
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.requirements.kind import Kind
from filtercheck.requirements.numbers import within

HALF_POWER_DB = 10.0 * log10(2.0)


@dataclass(frozen=True)
class Resonance:
    """Limits on centre frequency and Q."""

    centre_hz: Band | None
    q: Band | None

    def findings(self, curve: Curve) -> Iterator[Finding]:
        """Yield centre frequency and Q, each against both limits."""
        edges = _edges_hz(curve)
        centre_hz = sqrt(edges[0] * edges[1]) if edges else None
        q = centre_hz / (edges[1] - edges[0]) if edges and centre_hz else None
        note = "" if edges else "the power does not fall to half on both sides of a peak"
        if self.centre_hz:
            yield from within(
                self.centre_hz,
                centre_hz,
                subject="centre frequency",
                quantity="frequency",
                freq_hz=centre_hz,
                note=note,
            )
        if self.q:
            yield from within(
                self.q, q, subject="Q", quantity="number", freq_hz=centre_hz, note=note
            )


def _edges_hz(curve: Curve) -> Band | None:
    """Return where the power is half of the largest, on both sides; None where it is not."""
    peak = curve.highest()
    if not (isfinite(peak.gain_db) and peak.freq_hz > 0.0 and isfinite(peak.freq_hz)):
        return None
    level_db = peak.gain_db - HALF_POWER_DB
    below = curve.fall_hz(peak.freq_hz, level_db, upward=False)
    above = curve.fall_hz(peak.freq_hz, level_db, upward=True)
    return (below, above) if below is not None and above is not None else None


def read(requirement: Requirement) -> Resonance:
    """Return what is asked for.

    Raises
    ------
    InputError
        If neither limit is given.
    """
    wanted = Resonance(requirement.interval("centre"), requirement.interval("q"))
    if wanted.centre_hz is None and wanted.q is None:
        raise requirement.error("centre", "has no limit", "`centre`, `q` or both", "add `q: [ , ]`")
    return wanted


KIND = Kind("resonance", __doc__, read)
