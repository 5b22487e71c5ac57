"""State-variable section of three op-amps, input at the non-inverting summing
node.

                +----------------------- Rlp ----------------------+
                |                                                  |
                +--- Rhp --+        +--- C1 ---+        +--- C2 ---+
                |          |        |          |        |          |
                +-(-)      |        |          |        |          |
                     A0 >--+-- R1 --+-(-)      |        |          |
    in -- Rin --+-(+)      |             A1 >--+-- R2 --+-(-)      |
                |       highpass    +-(+)      |             A2 >--+-- lowpass
                |                   |          |        +-(+)
                |                  Rb1         |        |
                |                   |          |       Rb2
                |                 ground       |        |
                |                              |      ground
                +------------- Rbp ------------+-- bandpass
                |
                Rg
                |
              ground

    circuit: state-variable-noninverting
    fit: {Rin: , Rbp: , Rhp: , Rlp: ,
          R1: , C1: , R2: , C2: , A0: , A1: , A2: }

Rbp is the damping resistor, from the band-pass output. Rg may be left out. Rb1
and Rb2 only balance the bias currents of the integrators; where they are left
out, those inputs are grounded.

Outputs: highpass, bandpass, lowpass.

With ideal op-amps, w1 = 1/(R1 C1), w2 = 1/(R2 C2), K = 1 + Rhp/Rlp and, of the
conductances at the non-inverting node, a = (1/Rin) / (1/Rin + 1/Rbp + 1/Rg)
and b likewise for Rbp:

    D        = s^2 + s w1 K b + w1 w2 Rhp/Rlp
    highpass = +K a s^2 / D
    bandpass = -K a s w1 / D
    lowpass  = +K a w1 w2 / D

Source: Kerwin, Huelsman and Newcomb, "State-variable synthesis for insensitive
integrated circuit transfer functions", IEEE J. Solid-State Circuits, vol.
SC-2, no. 3, pp. 87-92, 1967 (from memory); the functions follow from the
drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.circuits.state_variable import INTEGRATORS, OUTPUTS
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Resistor

CIRCUIT = Circuit(
    "state-variable-noninverting",
    __doc__,
    (
        Resistor("Rin", INPUT, "plus0"),
        Resistor("Rbp", "bandpass", "plus0"),
        Resistor("Rg", "plus0", GROUND),
        Resistor("Rhp", "highpass", "minus0"),
        Resistor("Rlp", "lowpass", "minus0"),
        Amplifier("A0", "plus0", "minus0", "highpass"),
        *INTEGRATORS,
    ),
    OUTPUTS,
    {"Rg": "open", "Rb1": "wire", "Rb2": "wire"},
)
