"""The range of numbers that are computed with."""

from __future__ import annotations

# From an attofarad to an exahertz and beyond any part there is; products of a dozen such numbers
# stay within floating point.
SMALLEST, LARGEST = 1e-18, 1e18
WORDS = "0, or a size from 1e-18 to 1e18 in the unit itself"


def within_reach(value: float) -> bool:
    """Whether a number is 0 or of a size that can be computed with."""
    return value == 0.0 or SMALLEST <= abs(value) <= LARGEST
