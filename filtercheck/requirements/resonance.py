"""Keep the centre frequency and the Q of a resonance between limits.

    requirements:
      VIB-5:
        kind: resonance
        output: bandpass
        centre: [4.9 kHz, 5.1 kHz]
        q: [9.5, 10.5]
        verify: worst-case

Both are those of the pole pair p with the highest Q among all poles of the
response: the centre frequency is |p|/(2 pi), and Q is |p|/(-2 Re p). For a
band-pass of second order these are the frequency of the largest gain, and that
frequency over the distance of the half-power points; a low-pass or a high-pass
has both as well. A response whose poles are all real has no resonance, and
fails. Either `centre` or `q` may be left out.

Source: common practice, no source. The denominator of second order is
s^2 + s w0/Q + w0^2.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from math import pi

from filtercheck.model.requirement import Band, Requirement
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.requirements.kind import Kind
from filtercheck.requirements.numbers import within
from filtercheck.tolerance.limit import Claim, Poles, Pull
from filtercheck.tolerance.poles import qualities

SUBJECTS = {"centre frequency": ("centre", "frequency"), "Q": ("Q", "number")}


@dataclass(frozen=True)
class Resonance:
    """Limits on centre frequency and Q."""

    centre_hz: Band | None
    q: Band | None

    def findings(self, curve: Curve) -> Iterator[Finding]:
        """Yield centre frequency and Q, each against both limits."""
        pole = _sharpest(curve)
        centre_hz = abs(pole) / (2.0 * pi) if pole else None
        q = abs(pole) / (-2.0 * pole.real) if pole else None
        note = "" if pole else "all poles are real"
        for subject, value, limits in self._numbers(centre_hz, q):
            yield from within(
                limits,
                value,
                subject=subject,
                quantity=SUBJECTS[subject][1],
                freq_hz=centre_hz,
                note=note,
            )

    def _numbers(
        self, centre_hz: float | None, q: float | None
    ) -> Iterator[tuple[str, float | None, Band]]:
        if self.centre_hz:
            yield "centre frequency", centre_hz, self.centre_hz
        if self.q:
            yield "Q", q, self.q

    def claims(self, index: int, margin: float) -> Iterator[Claim]:
        """Yield the limit of the pole, so much tighter."""
        subject, _, limits = list(self._numbers(None, None))[index // 2]
        sense, sign = (("at least", 1.0), ("at most", -1.0))[index % 2]
        yield Poles(SUBJECTS[subject][0], sense, limits[index % 2] * (1.0 + sign * margin))

    def pull(self, finding: Finding) -> Pull | None:
        """Return None: no gain makes a pole what it is."""
        return None


def _sharpest(curve: Curve) -> complex | None:
    """Return the pole with the highest Q, the lowest of equals; None where all are real."""
    poles = curve.response.poles
    pairs = poles[poles.imag > 0.0]
    if not len(pairs):
        return None
    q = qualities(pairs)
    return complex(min(pairs[q >= q.max() * (1.0 - 1e-12)], key=abs))


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
