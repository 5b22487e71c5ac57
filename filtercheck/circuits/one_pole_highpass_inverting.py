"""One-pole high-pass section, inverting, gain -Rf/Rin.

                      +--- Rf ---+
                      |          |
    in -- C --- Rin --+--(-)     |
                            A >--+--- highpass
    ground ---- Rb ------(+)

    circuit: one-pole-highpass-inverting
    fit: {C: , Rin: , Rf: , A: }

Rb only balances the bias current; where it is left out, that input is
grounded.

Outputs: highpass.

With an ideal op-amp:

    highpass = -(Rf/Rin) s Rin C / (1 + s Rin C)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "one-pole-highpass-inverting",
    __doc__,
    (
        Capacitor("C", INPUT, "series"),
        Resistor("Rin", "series", "minus"),
        Resistor("Rf", "minus", "highpass"),
        Resistor("Rb", GROUND, "plus"),
        Amplifier("A", "plus", "minus", "highpass"),
    ),
    {"highpass": "highpass"},
    {"Rb": "wire"},
)
