"""Sallen-Key low-pass section, second order, with gain.

               +----------- C1 ----------+
               |                         |
    in -- R1 --+-- R2 --+--------(+)     |
                        |           A >--+-- lowpass
                        |      +-(-)     |
                        C2     |         |
                        |      +--- Rf --+
                      ground   |
                               Rg
                               |
                             ground

    circuit: sallen-key-lowpass
    fit: {R1: , R2: , C1: , C2: , A: }

Rf and Rg set the gain K = 1 + Rf/Rg; where both are left out, K = 1.

Outputs: lowpass.

With an ideal op-amp:

    lowpass = K / (1 + s (C2 (R1 + R2) + R1 C1 (1 - K)) + s^2 R1 R2 C1 C2)

Source: Sallen and Key, "A practical method of designing RC active filters",
IRE Trans. Circuit Theory, vol. CT-2, no. 1, pp. 74-85, 1955 (from memory); the
function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "sallen-key-lowpass",
    __doc__,
    (
        Resistor("R1", INPUT, "between"),
        Resistor("R2", "between", "plus"),
        Capacitor("C1", "between", "lowpass"),
        Capacitor("C2", "plus", GROUND),
        Resistor("Rf", "lowpass", "minus"),
        Resistor("Rg", "minus", GROUND),
        Amplifier("A", "plus", "minus", "lowpass"),
    ),
    {"lowpass": "lowpass"},
    {"Rf": "wire", "Rg": "open"},
)
