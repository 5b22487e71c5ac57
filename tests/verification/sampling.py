"""A `Sampled` from the text of a filter, so that its boards can be looked at one by one."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from filtercheck.model.part import OpAmp, Passive
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.reading.filter_file import subject
from filtercheck.requirements import KINDS
from filtercheck.verification.sampled import Sampled
from filtercheck.wiring.drawing import Drawing
from filtercheck.wiring.variation import Variation
from filtercheck.wiring.wired import wired

Real = NDArray[np.float64]

HEAD = "format: filtercheck-filter/1\nfilter: f\n"
ALL = "verify: {yield: 50 %, confidence: 95 %, boards: 100}"
DIVIDER = """\
connect: {R1: [in, out], R2: [out, ground]}
outputs: {out: out}
requirements: {A: {kind: gain, output: out, band: [0, 1], max: 0 dB}}
"""
RLC = """\
connect: {L1: [in, a], R1: [a, out], C1: [out, ground]}
outputs: {out: out}
"""
# Positive and negative feedback of one op-amp: it oscillates where R1 is larger than R2.
FEEDBACK = """\
connect: {R1: [in, p], R2: [out, p], R3: [out, m], R4: [m, ground],
          U1: {plus: p, minus: m, out: out}}
outputs: {out: out}
parts:
  R1: {resistance: RESISTANCE}
  R2: {resistance: 10k}
  R3: {resistance: 10k}
  R4: {resistance: 10k}
  U1: {amplifier: {gain_bandwidth: 1 MHz, open_loop_gain: ideal}}
"""


def sampled(text: str, identity: str = "f A", *, stable: bool = True) -> Sampled:
    """Return the first requirement of a file on random boards."""
    read = subject(HEAD + text, "f.filter.yaml")
    (required, *_) = read.requirements
    assert required.sampling is not None
    wanted = KINDS[required.kind].read(required)
    variation = Variation(wired(read), read.parts)
    nominal = Curve(variation.wiring.response(required.output, read.parts))
    return Sampled(wanted, variation, required.output, nominal, required.sampling, identity, stable)


def finding(text: str, identity: str = "f A", *, stable: bool = True) -> Finding:
    return sampled(text, identity, stable=stable).finding()


def drawn(text: str, count: int, seed: int = 5) -> dict[str, Real]:
    """Return the values of each part on so many boards."""
    read = subject(HEAD + text, "f.filter.yaml")
    variation = Variation(wired(read), read.parts)
    return values(variation, Drawing(variation, np.random.default_rng(seed)).boards(count))


def values(variation: Variation, boards: tuple[Real, ...]) -> dict[str, Real]:
    """Return the values of each part on boards that are points of the boxes."""
    found: dict[str, list[Any]] = {name: [] for name in variation.parts}
    for row in range(len(boards[0])):
        for name, part in variation.fitted(tuple(points[row] for points in boards)).items():
            if isinstance(part, Passive):
                found[name].append(part.value)
            elif isinstance(part, OpAmp) and part.gain_bandwidth:
                found[name].append(part.gain_bandwidth.typical)
    return {name: np.array(column) for name, column in found.items()}
