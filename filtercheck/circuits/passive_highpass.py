"""One-pole high-pass without an amplifier; what it drives loads it.

    in --- C ---+--- highpass
                |
                R
                |
             ground

    circuit: passive-highpass
    fit: {C: , R: }

Outputs: highpass.

Where nothing loads it:

    highpass = s R C / (1 + s R C)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Capacitor, Resistor

CIRCUIT = Circuit(
    "passive-highpass",
    __doc__,
    (
        Capacitor("C", INPUT, "highpass"),
        Resistor("R", "highpass", GROUND),
    ),
    {"highpass": "highpass"},
)
