"""Multiple-feedback high-pass section, second order, inverting.

                +------- Cf -------+
                |                  |
                |        +--- R2 --+
                |        |         |
    in -- Cin --+-- C2 --+-(-)     |
                |             A >--+-- highpass
                R1       +-(+)
                |        |
              ground     Rb
                         |
                       ground

    circuit: multiple-feedback-highpass
    fit: {Cin: , Cf: , C2: , R1: , R2: , A: }

Rb only balances the bias current; where it is left out, that input is
grounded.

Outputs: highpass.

With an ideal op-amp:

    highpass = -s^2 R1 R2 Cin C2
               / (1 + s R1 (Cin + Cf + C2) + s^2 R1 R2 Cf C2)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "multiple-feedback-highpass",
    __doc__,
    (
        Capacitor("Cin", INPUT, "between"),
        Capacitor("Cf", "between", "highpass"),
        Capacitor("C2", "between", "minus"),
        Resistor("R1", "between", GROUND),
        Resistor("R2", "minus", "highpass"),
        Resistor("Rb", GROUND, "plus"),
        Amplifier("A", "plus", "minus", "highpass"),
    ),
    {"highpass": "highpass"},
    {"Rb": "wire"},
)
