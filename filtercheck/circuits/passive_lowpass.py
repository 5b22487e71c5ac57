"""One-pole low-pass without an amplifier; what it drives loads it.

    in --- R ---+--- lowpass
                |
                C
                |
             ground

    circuit: passive-lowpass
    fit: {R: , C: }

Outputs: lowpass.

Where nothing loads it:

    lowpass = 1 / (1 + s R C)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Capacitor, Resistor

CIRCUIT = Circuit(
    "passive-lowpass",
    __doc__,
    (
        Resistor("R", INPUT, "lowpass"),
        Capacitor("C", "lowpass", GROUND),
    ),
    {"lowpass": "lowpass"},
)
