"""The parts of a filter, as fitted."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from filtercheck.position import Position


@dataclass(frozen=True)
class Spread:
    """How far a value may lie from nominal, as fractions of it: -0.2 and 0.8 for -20 %, +80 %."""

    below: float
    above: float


@dataclass(frozen=True)
class Passive:
    """A resistor, capacitor or inductor."""

    designator: str
    quantity: str  # "resistance" [ohm], "capacitance" [F] or "inductance" [H]
    value: float  # as fitted, or as set for a question
    ideal: float | None  # the value that was wanted, where a preferred one is fitted for it
    series: str | None  # the series it was checked against
    tolerance: Spread | None
    network: str | None  # the matched network it is a member of
    track: float | None  # how far it may lie from what the network has in common, as a fraction
    distribution: str  # "uniform", "normal" or "two-sided", for a yield
    changed: bool  # set on the command line, not what the file says
    at: Position


@dataclass(frozen=True)
class Figure:
    """A value: what is typical and between what limits it lies."""

    typical: float
    min: float
    max: float


@dataclass(frozen=True)
class OpAmp:
    """An op-amp; a figure that is None is ideal (infinite)."""

    designator: str
    gain_bandwidth: Figure | None  # [Hz]
    open_loop_gain: Figure | None  # [V/V]
    distribution: str
    changed: bool
    at: Position

    @property
    def figures(self) -> dict[str, Figure | None]:
        """Its figures by name."""
        return {"gain_bandwidth": self.gain_bandwidth, "open_loop_gain": self.open_loop_gain}


Part = Passive | OpAmp
Parts = Mapping[str, Part]
