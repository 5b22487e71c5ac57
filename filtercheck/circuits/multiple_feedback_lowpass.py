"""Multiple-feedback low-pass section, second order, inverting.

                +------- Rf -------+
                |                  |
                |        +--- C2 --+
                |        |         |
    in -- Rin --+-- R2 --+-(-)     |
                |             A >--+-- lowpass
                C1       +-(+)
                |        |
              ground     Rb
                         |
                       ground

    circuit: multiple-feedback-lowpass
    fit: {Rin: , Rf: , R2: , C1: , C2: , A: }

Rb only balances the bias current; where it is left out, that input is
grounded.

Outputs: lowpass.

With an ideal op-amp:

    lowpass = -(Rf/Rin)
              / (1 + s C2 (R2 + Rf + R2 Rf/Rin) + s^2 R2 Rf C1 C2)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "multiple-feedback-lowpass",
    __doc__,
    (
        Resistor("Rin", INPUT, "between"),
        Resistor("Rf", "between", "lowpass"),
        Resistor("R2", "between", "minus"),
        Capacitor("C1", "between", GROUND),
        Capacitor("C2", "minus", "lowpass"),
        Resistor("Rb", GROUND, "plus"),
        Amplifier("A", "plus", "minus", "lowpass"),
    ),
    {"lowpass": "lowpass"},
    {"Rb": "wire"},
)
