"""One-pole low-pass section, inverting, gain -Rf/Rin.

                    +--- C ----+
                    |          |
                    +--- Rf ---+
                    |          |
    in --- Rin -----+--(-)     |
                          A >--+--- lowpass
    ground --- Rb -----(+)

    circuit: one-pole-lowpass-inverting
    fit: {Rin: , Rf: , C: , A: }

Rb only balances the bias current; where it is left out, that input is
grounded.

Outputs: lowpass.

With an ideal op-amp:

    lowpass = -(Rf/Rin) / (1 + s Rf C)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "one-pole-lowpass-inverting",
    __doc__,
    (
        Resistor("Rin", INPUT, "minus"),
        Resistor("Rf", "minus", "lowpass"),
        Capacitor("C", "minus", "lowpass"),
        Resistor("Rb", GROUND, "plus"),
        Amplifier("A", "plus", "minus", "lowpass"),
    ),
    {"lowpass": "lowpass"},
    {"Rb": "wire"},
)
