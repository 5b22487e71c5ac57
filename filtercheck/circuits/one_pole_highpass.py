"""One-pole high-pass section, non-inverting, gain +1.

    in -- C --+--------(+)
              |           A >--+-- highpass
              R      +-(-)     |
              |      |         |
            ground   +---------+

    circuit: one-pole-highpass
    fit: {C: , R: , A: }

Outputs: highpass.

With an ideal op-amp:

    highpass = s R C / (1 + s R C)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "one-pole-highpass",
    __doc__,
    (
        Capacitor("C", INPUT, "plus"),
        Resistor("R", "plus", GROUND),
        Amplifier("A", "plus", "highpass", "highpass"),
    ),
    {"highpass": "highpass"},
)
