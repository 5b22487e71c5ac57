"""Sallen-Key high-pass section, second order, with gain.

               +----------- R1 ----------+
               |                         |
    in -- C1 --+-- C2 --+--------(+)     |
                        |           A >--+-- highpass
                        |      +-(-)     |
                        R2     |         |
                        |      +--- Rf --+
                      ground   |
                               Rg
                               |
                             ground

    circuit: sallen-key-highpass
    fit: {C1: , C2: , R1: , R2: , A: }

Rf and Rg set the gain K = 1 + Rf/Rg; where both are left out, K = 1.

Outputs: highpass.

With an ideal op-amp:

    highpass = K s^2 R1 R2 C1 C2
               / (1 + s (R1 (C1 + C2) + R2 C2 (1 - K)) + s^2 R1 R2 C1 C2)

Source: Sallen and Key, "A practical method of designing RC active filters",
IRE Trans. Circuit Theory, vol. CT-2, no. 1, pp. 74-85, 1955 (from memory); the
function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "sallen-key-highpass",
    __doc__,
    (
        Capacitor("C1", INPUT, "between"),
        Capacitor("C2", "between", "plus"),
        Resistor("R1", "between", "highpass"),
        Resistor("R2", "plus", GROUND),
        Resistor("Rf", "highpass", "minus"),
        Resistor("Rg", "minus", GROUND),
        Amplifier("A", "plus", "minus", "highpass"),
    ),
    {"highpass": "highpass"},
    {"Rf": "wire", "Rg": "open"},
)
