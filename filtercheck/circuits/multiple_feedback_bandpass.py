"""Multiple-feedback band-pass section, second order, inverting.

                +------- C1 -------+
                |                  |
                |        +--- R2 --+
                |        |         |
    in -- Rin --+-- C2 --+-(-)     |
                |             A >--+-- bandpass
                Rg       +-(+)
                |        |
              ground     Rb
                         |
                       ground

    circuit: multiple-feedback-bandpass
    fit: {Rin: , C1: , C2: , R2: , A: }

Rg divides the input; it may be left out. Rb only balances the bias current;
where it is left out, that input is grounded.

Outputs: bandpass.

With an ideal op-amp and Rp for Rin in parallel with Rg:

    bandpass = -s Rp R2 C2/Rin
               / (1 + s Rp (C1 + C2) + s^2 Rp R2 C1 C2)

Source: common practice, no source; the function follows from the drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Resistor

CIRCUIT = Circuit(
    "multiple-feedback-bandpass",
    __doc__,
    (
        Resistor("Rin", INPUT, "between"),
        Resistor("Rg", "between", GROUND),
        Capacitor("C1", "between", "bandpass"),
        Capacitor("C2", "between", "minus"),
        Resistor("R2", "minus", "bandpass"),
        Resistor("Rb", GROUND, "plus"),
        Amplifier("A", "plus", "minus", "bandpass"),
    ),
    {"bandpass": "bandpass"},
    {"Rg": "open", "Rb": "wire"},
)
