"""Points of a computed response."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Sample:
    """One output at one frequency."""

    output: str
    freq_hz: float
    gain_db: float
    phase_deg: float
    group_delay_s: float
