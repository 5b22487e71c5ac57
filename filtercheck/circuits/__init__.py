"""The circuits that filtercheck knows by name, one module each, and the table CIRCUITS."""

from __future__ import annotations

from filtercheck.circuits import (
    inverting_gain,
    multiple_feedback_bandpass,
    multiple_feedback_highpass,
    multiple_feedback_lowpass,
    noninverting_gain,
    one_pole_highpass,
    one_pole_highpass_inverting,
    one_pole_lowpass,
    one_pole_lowpass_inverting,
    passive_highpass,
    passive_lowpass,
    sallen_key_highpass,
    sallen_key_lowpass,
    state_variable,
    state_variable_noninverting,
    unity_gain,
)
from filtercheck.circuits.circuit import Circuit

_MODULES = (
    state_variable,
    state_variable_noninverting,
    one_pole_lowpass,
    one_pole_highpass,
    one_pole_lowpass_inverting,
    one_pole_highpass_inverting,
    passive_lowpass,
    passive_highpass,
    unity_gain,
    inverting_gain,
    noninverting_gain,
    sallen_key_lowpass,
    sallen_key_highpass,
    multiple_feedback_lowpass,
    multiple_feedback_highpass,
    multiple_feedback_bandpass,
)

CIRCUITS: dict[str, Circuit] = {module.CIRCUIT.name: module.CIRCUIT for module in _MODULES}
