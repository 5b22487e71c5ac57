"""State-variable section of three op-amps, input at the inverting summing node.

                +----------------------- Rlp ----------------------+
                |                                                  |
                +--- Rhp --+        +--- C1 ---+        +--- C2 ---+
                |          |        |          |        |          |
    in -- Rin --+-(-)      |        |          |        |          |
                     A0 >--+-- R1 --+-(-)      |        |          |
                +-(+)      |             A1 >--+-- R2 --+-(-)      |
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

    circuit: state-variable
    fit: {Rin: , Rhp: , Rlp: , Rbp: , Rg: ,
          R1: , C1: , R2: , C2: , A0: , A1: , A2: }

Rbp is the damping resistor, from the band-pass output. Rb1 and Rb2 only
balance the bias currents of the integrators; where they are left out, those
inputs are grounded.

Outputs: highpass, bandpass, lowpass.

With ideal op-amps, w1 = 1/(R1 C1), w2 = 1/(R2 C2) and d = Rg/(Rg + Rbp):

    D        = s^2 + s w1 d (1 + Rhp/Rin + Rhp/Rlp) + w1 w2 Rhp/Rlp
    highpass = -(Rhp/Rin) s^2 / D
    bandpass = +(Rhp/Rin) s w1 / D
    lowpass  = -(Rhp/Rin) w1 w2 / D

With all resistors 1 ohm and capacitors 1 F but Rbp = 3 Q - 1: w0 = 1, the
quality factor is Q, the gain is -1 (low-pass and high-pass) and Q (band-pass,
at the centre).

Source: Kerwin, Huelsman and Newcomb, "State-variable synthesis for insensitive
integrated circuit transfer functions", IEEE J. Solid-State Circuits, vol.
SC-2, no. 3, pp. 87-92, 1967 (from memory); the functions follow from the
drawing.
"""

from __future__ import annotations

from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier, Capacitor, Element, Resistor

# From the high-pass output on, all state-variable sections are alike.
INTEGRATORS: tuple[Element, ...] = (
    Resistor("R1", "highpass", "minus1"),
    Capacitor("C1", "minus1", "bandpass"),
    Resistor("R2", "bandpass", "minus2"),
    Capacitor("C2", "minus2", "lowpass"),
    Resistor("Rb1", GROUND, "plus1"),
    Resistor("Rb2", GROUND, "plus2"),
    Amplifier("A1", "plus1", "minus1", "bandpass"),
    Amplifier("A2", "plus2", "minus2", "lowpass"),
)
OUTPUTS = {"highpass": "highpass", "bandpass": "bandpass", "lowpass": "lowpass"}

CIRCUIT = Circuit(
    "state-variable",
    __doc__,
    (
        Resistor("Rin", INPUT, "minus0"),
        Resistor("Rhp", "highpass", "minus0"),
        Resistor("Rlp", "lowpass", "minus0"),
        Resistor("Rbp", "bandpass", "plus0"),
        Resistor("Rg", "plus0", GROUND),
        Amplifier("A0", "plus0", "minus0", "highpass"),
        *INTEGRATORS,
    ),
    OUTPUTS,
    {"Rb1": "wire", "Rb2": "wire"},
)
