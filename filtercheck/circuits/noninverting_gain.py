"""Non-inverting gain stage, gain 1 + Rf/Rg.

    in ---------------(+)
                         A >--+--- out
    ground -- Rg --+--(-)     |
                   |          |
                   +--- Rf ---+

    circuit: noninverting-gain
    fit: {Rf: , Rg: , A: }

Outputs: out.

With an ideal op-amp:

    out = 1 + Rf/Rg

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Resistor

CIRCUIT = Circuit(
    "noninverting-gain",
    __doc__,
    (
        Resistor("Rf", "out", "minus"),
        Resistor("Rg", "minus", GROUND),
        Amplifier("A", INPUT, "minus", "out"),
    ),
    {"out": "out"},
)
