"""Follower, gain +1.

    in -------(+)
                 A >---+--- out
           +--(-)      |
           |           |
           +-----------+

    circuit: unity-gain
    fit: {A: }

Outputs: out.

With an ideal op-amp:

    out = 1

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import INPUT, Amplifier

CIRCUIT = Circuit(
    "unity-gain",
    __doc__,
    (Amplifier("A", INPUT, "out", "out"),),
    {"out": "out"},
)
