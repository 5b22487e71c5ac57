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
        verify: worst-case

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

from filtercheck.model.requirement import Band, Mask, Requirement
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.quantities import rounded
from filtercheck.requirements import levels
from filtercheck.requirements.kind import Kind
from filtercheck.requirements.numbers import within
from filtercheck.tolerance.limit import Claim, Limit, Pull


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
            reference_hz=top.freq_hz,
            note=note,
        )

    def claims(self, index: int, margin: float) -> Iterator[Claim]:
        """Yield that the gain has fallen at the far limit, or has not before the near one."""
        low, high = self.within_hz
        edge = low * (1.0 + margin) if index == 0 else high * (1.0 - margin)
        fallen = ((0.0, -self.fall_db),)
        if self.upward == (index == 1):
            yield from self._fallen(fallen, edge)
            return
        start_hz, end_hz = self.reference.span_hz
        side = "above" if self.upward else "below"
        stretch = (start_hz, edge) if self.upward else (edge, end_hz)
        if stretch[0] < stretch[1]:
            yield Limit("at least", fallen, stretch, self.reference.every_of(side))

    def _fallen(self, fallen: Mask, edge_hz: float) -> Iterator[Claim]:
        """Yield that the gain has fallen at an edge, seen from the largest gain; and where the
        pass band goes on beyond the edge, that its largest gain does not lie there."""
        near, beyond = self.reference.divided(edge_hz, below=self.upward)
        yield Limit("at most", fallen, (edge_hz, edge_hz), near)
        if beyond is not None:
            yield Limit("at most", ((0.0, 0.0),), beyond, near)

    def pull(self, finding: Finding) -> Pull | None:
        """Return the gain at the corner less that at the reference, or the reverse."""
        if self.upward == (finding.sense == "at most"):
            return levels.pull(raised_hz=finding.freq_hz, lowered_hz=finding.reference_hz)
        return levels.pull(raised_hz=finding.reference_hz, lowered_hz=finding.freq_hz)


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
