"""One-pole low-pass section, non-inverting, gain +1.

    in -- R --+--------(+)
              |           A >--+-- lowpass
              C      +-(-)     |
              |      |         |
            ground   +---------+

    circuit: one-pole-lowpass
    fit: {R: , C: , A: }

Outputs: lowpass.

With an ideal op-amp:

    lowpass = 1 / (1 + s R C)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "one-pole-lowpass",
    __doc__,
    (
        Resistor("R", INPUT, "plus"),
        Capacitor("C", "plus", GROUND),
        Amplifier("A", "plus", "lowpass", "lowpass"),
    ),
    {"lowpass": "lowpass"},
)
