"""Inverting gain stage, gain -Rf/Rin.

                   +--- Rf ---+
                   |          |
    in --- Rin ----+--(-)     |
                         A >--+--- out
    ground --- Rb ----(+)

    circuit: inverting-gain
    fit: {Rin: , Rf: , A: }

Rb only balances the bias current; where it is left out, that input is
grounded.

Outputs: out.

With an ideal op-amp:

    out = -Rf/Rin

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Resistor

CIRCUIT = Circuit(
    "inverting-gain",
    __doc__,
    (
        Resistor("Rin", INPUT, "minus"),
        Resistor("Rf", "minus", "out"),
        Resistor("Rb", GROUND, "plus"),
        Amplifier("A", "plus", "minus", "out"),
    ),
    {"out": "out"},
    {"Rb": "wire"},
)
