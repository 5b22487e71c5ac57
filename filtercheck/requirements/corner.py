"""Keep the frequency where the response has fallen by a stated amount between two
limits.

    requirements:
      VIB-4:
        kind: corner
        output: lowpass
        fall: 3 dB
        reference: 100 Hz
        side: above
        within: [950 Hz, 1050 Hz]
        verify: nominal

The corner frequency is the first one, going up from the reference (`side:
above`, for a low-pass) or down from it (`side: below`, for a high-pass), at
which the gain lies by `fall` below the gain at the reference. In the place of
`reference`, a pass band may be stated: the search starts at its largest gain,
and that is what the fall is measured from.

        passband: [10 Hz, 900 Hz]

3 dB are 3.000 dB; half the power is `fall: 3.0103 dB`.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from math import isfinite, nan

from filtercheck.model.requirement import Band, Requirement
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.quantities import rounded
from filtercheck.requirements import levels
from filtercheck.requirements.kind import Kind
from filtercheck.requirements.numbers import within


@dataclass(frozen=True)
class Corner:
    """Where the gain has fallen so far below a reference."""

    fall_db: float
    upward: bool
    within_hz: Band
    reference: levels.Reference

    def findings(self, curve: Curve) -> Iterator[Finding]:
        """Yield the corner frequency against both limits."""
        top = self.reference.of(curve)
        fall, place = rounded(self.fall_db, "level"), rounded(top.freq_hz, "frequency")
        level_db = top.gain_db - self.fall_db
        # Without a signal to measure from there is no corner to speak of: undecided.
        corner_hz: float | None = nan
        note = f"there is no signal at the reference, {place}"
        if isfinite(level_db):
            corner_hz = curve.fall_hz(top.freq_hz, level_db, upward=self.upward)
            note = f"{fall} below the gain at {place}"
            if corner_hz is None:
                way = "above" if self.upward else "below"
                note = f"the gain never falls by {fall} {way} {place}"
        yield from within(
            self.within_hz,
            corner_hz,
            subject="corner frequency",
            quantity="frequency",
            freq_hz=corner_hz,
            note=note,
        )


def read(requirement: Requirement) -> Corner:
    """Return what is asked for.

    Raises
    ------
    InputError
        If the fall is not positive, or there is not just one reference.
    """
    fall_db = requirement.number("fall") or 0.0
    if fall_db <= 0.0:
        raise requirement.error("fall", "the fall is not positive", "more than 0 dB")
    return Corner(
        fall_db,
        requirement.word("side", "above") == "above",
        levels.band(requirement, "within"),
        levels.reference(requirement),
    )


KIND = Kind("corner", __doc__, read)
