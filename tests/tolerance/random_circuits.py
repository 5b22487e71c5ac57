"""Small random circuits of many shapes, each the same for the same seed, with tolerances and with
limits near what their worst boards do."""

from __future__ import annotations

import random
from collections.abc import Iterator
from dataclasses import dataclass
from math import inf, pi

import numpy as np
from board_search import Limit
from judging import line
from nodal import GAIN, GBW, Drawing, Element, Range, Real, elements, exact, filter_text, within

# The drawings of the known circuits, typed from their manuals, and the nodes of their outputs.
INTEGRATORS = "R R1 hp m1 | C C1 m1 bp | U A1 0 m1 bp | R R2 bp m2 | C C2 m2 lp | U A2 0 m2 lp"
THREE = {"highpass": "hp", "bandpass": "bp", "lowpass": "lp"}
KNOWN: dict[str, tuple[str, dict[str, str]]] = {
    "passive-lowpass": ("R R in o | C C o 0", {"lowpass": "o"}),
    "passive-highpass": ("C C in o | R R o 0", {"highpass": "o"}),
    "one-pole-lowpass": ("R R in p | C C p 0 | U A p o o", {"lowpass": "o"}),
    "one-pole-highpass": ("C C in p | R R p 0 | U A p o o", {"highpass": "o"}),
    "one-pole-lowpass-inverting": (
        "R Rin in m | R Rf m o | C C m o | U A 0 m o",
        {"lowpass": "o"},
    ),
    "one-pole-highpass-inverting": (
        "C C in x | R Rin x m | R Rf m o | U A 0 m o",
        {"highpass": "o"},
    ),
    "sallen-key-lowpass": (
        "R R1 in x | R R2 x p | C C1 x o | C C2 p 0 | U A p m o | R Rf o m | R Rg m 0",
        {"lowpass": "o"},
    ),
    "sallen-key-highpass": (
        "C C1 in x | C C2 x p | R R1 x o | R R2 p 0 | U A p o o",
        {"highpass": "o"},
    ),
    "multiple-feedback-lowpass": (
        "R Rin in x | R Rf x o | C C1 x 0 | R R2 x m | C C2 m o | U A 0 m o",
        {"lowpass": "o"},
    ),
    "multiple-feedback-highpass": (
        "C Cin in x | C Cf x o | R R1 x 0 | C C2 x m | R R2 m o | U A 0 m o",
        {"highpass": "o"},
    ),
    "multiple-feedback-bandpass": (
        "R Rin in x | R Rg x 0 | C C1 x o | C C2 x m | R R2 m o | U A 0 m o",
        {"bandpass": "o"},
    ),
    "state-variable": (
        "R Rin in s | R Rhp hp s | R Rlp lp s | R Rbp bp t | R Rg t 0 | U A0 t s hp |"
        + INTEGRATORS,
        THREE,
    ),
    "state-variable-noninverting": (
        "R Rin in t | R Rbp bp t | R Rg t 0 | R Rhp hp s | R Rlp lp s | U A0 t s hp |"
        + INTEGRATORS,
        THREE,
    ),
}
# Circuits that are written with their nodes alone, with the output o.
OTHERS = {
    "rc-ladder": "R R1 in a | C C1 a 0 | R R2 a b | C C2 b 0 | R R3 b o | C C3 o 0",
    "cr-ladder": "C C1 in a | R R1 a 0 | C C2 a o | R R2 o 0",
    "rlc-lowpass": "R R1 in a | L L1 a b | C C1 b 0 | L L2 b o | R R2 o 0",
    "rlc-pi": "R R1 in a | C C1 a 0 | L L1 a o | C C2 o 0 | R R2 o 0",
    "rlc-highpass": "R R1 in a | C C1 a b | L L1 b 0 | C C2 b o | R R2 o 0",
    "rlc-bandpass": "R R1 in a | L L1 a b | C C1 b o | L L2 o 0 | C C2 o 0 | R R2 o 0",
    "bridged-t": "C C1 in a | C C2 a o | R R1 a 0 | R R2 in o | R R3 o 0",
    "bridged-t-resistive": "R R1 in a | R R2 a o | C C1 a 0 | C C2 in o | R R3 o 0",
    "twin-t": "R R1 in a | R R2 a o | C C3 a 0 | C C1 in b | C C2 b o | R R3 b 0 | R R4 o 0",
    "twin-t-follower": "R R1 in a | R R2 a p | C C3 a 0 | C C1 in b | C C2 b p | R R3 b 0 | "
    "U A p o o",
}
PASSIVE = ("passive-lowpass", "passive-highpass")
SHORT = [name for name in KNOWN if not name.startswith(("state", "passive"))]
SINGLE = [name for name in KNOWN if name not in PASSIVE]


@dataclass(frozen=True)
class Circuit:
    """A circuit, with the lines of its sections where it has such, and with limits in groups
    that one requirement states."""

    name: str
    drawing: Drawing
    sections: tuple[str, ...]
    requirements: tuple[tuple[Limit, ...], ...]

    def text(self, verify: str = "worst-case", *, connected: bool = False) -> str:
        """Return the filter file, with its sections unless it shall be `connected`."""
        lines = [
            line(f"Q{i}", limits, verify) for i, limits in enumerate(self.requirements, start=1)
        ]
        return filter_text(self.name, self.drawing, lines, () if connected else self.sections)


def circuit(seed: int) -> Circuit:
    """Return a circuit; one whose boards come near oscillation is drawn anew."""
    for attempt in range(100):
        rng = random.Random(f"circuit {seed} {attempt}")
        shape, drawn, sections, output = _shape(rng, seed)
        f0_hz = 10 ** rng.uniform(2.3, 3.7)
        drawing = Drawing(drawn, _ranges(rng, drawn, f0_hz), output)
        boards = sample(drawing, seed)
        if all(_steady(drawing, board) for board in boards):
            name = f"{shape}-{seed}"
            return Circuit(name, drawing, sections, _requirements(rng, drawing, boards, f0_hz))
    raise AssertionError("no steady circuit was drawn")


def sample(drawing: Drawing, seed: int) -> Real:
    """Return the typical board, and some at random corners."""
    rng = np.random.default_rng(seed)
    high = rng.integers(0, 2, (40, len(drawing.low))).astype(bool)
    return np.vstack([drawing.typical, np.where(high, drawing.high, drawing.low)])


def _steady(drawing: Drawing, board: Real) -> bool:
    poles = drawing.nodal.poles(board)
    return bool((poles.real < -0.02 * np.abs(poles)).all())


def _shape(rng: random.Random, seed: int) -> tuple[str, tuple[Element, ...], tuple[str, ...], str]:
    """Return a name, the elements, the lines of the sections and the output's node: in turn of a
    known circuit, another, passive ones that load each other, two in a row, a known one."""
    turn, kind = divmod(seed, 5)
    if kind == 1:
        name = list(OTHERS)[turn % len(OTHERS)]
        return name, elements(OTHERS[name]), (), "o"
    if kind == 2:
        names = [rng.choice(PASSIVE) for _ in range(rng.choice((2, 3, 4)))]
    elif kind == 3:
        names = [rng.choice([*PASSIVE, *SHORT]), rng.choice(SHORT)]
    else:
        names = [SINGLE[(turn + 5 * (kind == 4)) % len(SINGLE)]]
    drawn: list[Element] = []
    sections = ["sections:"]
    entry = output = "in"
    for i, name in enumerate(names, start=1):
        text, outputs = KNOWN[name]
        drives = rng.choice(list(outputs))
        node = {"0": "0", "in": entry}
        own = elements(text)
        drawn += [
            Element(e.kind, f"{e.name}_{i}", tuple(node.get(n, f"{n}{i}") for n in e.nodes))
            for e in own
        ]
        fit = ", ".join(f"{e.name}: {e.name}_{i}" for e in own)
        sections.append(f"  - {{circuit: {name}, name: s{i}, drives: {drives}, fit: {{{fit}}}}}")
        entry = f"{outputs[drives]}{i}"
        output = f"s{i}.{drives}"
    shape = names[0] if len(names) == 1 else "loaded" if kind == 2 else "pair"
    return shape, tuple(drawn), (*sections, output), entry


def _ranges(rng: random.Random, drawn: tuple[Element, ...], f0_hz: float) -> dict[str, Range]:
    """Return values of which 3 to 12 have a range, the others are exact."""
    ohms = 1e3 if any(e.kind == "L" for e in drawn) else 1e4
    scale = {"R": ohms, "C": 1 / (2 * pi * f0_hz * ohms), "L": ohms / (2 * pi * f0_hz)}
    ideal = rng.random() < 0.15 and len(drawn) > 3
    typical: dict[str, float] = {}
    for e in drawn:
        if e.kind != "U":
            typical[e.name] = float(f"{scale[e.kind] * 10 ** rng.uniform(-0.35, 0.35):.4g}")
        elif not ideal:
            typical[f"{e.name}.{GBW}"] = float(f"{10 ** rng.uniform(5.8, 7.0):.3g}")
            typical[f"{e.name}.{GAIN}"] = float(f"{10 ** rng.uniform(4.0, 6.0):.3g}")
    most = min(12, len(typical))
    count = max(rng.randint(3, most) for _ in range(3))
    free = set(rng.sample(list(typical), count))
    return {n: _range(rng, n, value) if n in free else exact(value) for n, value in typical.items()}


def _range(rng: random.Random, name: str, value: float) -> Range:
    if name.endswith(GBW):
        spread = rng.choice((0.1, 0.3))
        return Range(float(f"{value * (1 - spread):.4g}"), value, float(f"{value * 1.3:.4g}"))
    if name.endswith(GAIN):
        return Range(float(f"{value / 3:.4g}"), value, float(f"{value * 3:.4g}"))
    percent = rng.choice((0.1, 1, 2, 5, 10))
    return within(value, percent, 2 * percent if rng.random() < 0.1 else percent)


def _requirements(
    rng: random.Random, drawing: Drawing, boards: Real, f0_hz: float
) -> tuple[tuple[Limit, ...], ...]:
    """Return one requirement of the gain, and in one circuit of two another, with limits that a
    part of the worst boards break."""

    def rounded(freq_hz: float) -> float:
        return float(f"{freq_hz:.4g}")

    low = rounded(f0_hz * 10 ** rng.uniform(-1.3, 0.3))
    high = rounded(low * 10 ** rng.uniform(0.1, 1.5))
    band = rng.choice([(low, high)] * 6 + [(0.0, high), (low, inf)])
    sloped = rng.random() < 0.2 and band == (low, high)
    levels = (0.0, rng.uniform(-6.0, 6.0)) if sloped else (0.0,)
    gain = [Limit("gain", sense, band, levels) for sense in ("at least", "at most")]
    second = rng.choice((None, None, "attenuation", "attenuation", "ripple"))
    groups = [tuple(gain)]
    if second:
        # An attenuation is measured from the side where the gain is larger.
        sides = np.array([rounded(low / 3), rounded(min(high, 10 * low) * 3)])
        side = sides[int(np.argmax(drawing.nodal.gain_db(boards[:1], sides)))]
        groups.append((Limit(second, _sense(second), band, (0.0,), float(side)),))
    found = [tuple(_placed(rng, drawing, boards, group)) for group in groups]
    return tuple(group for group in found if group)


def _sense(kind: str) -> str:
    return "at least" if kind == "attenuation" else "at most"


def _placed(
    rng: random.Random, drawing: Drawing, boards: Real, limits: tuple[Limit, ...]
) -> Iterator[Limit]:
    """Yield the limits with levels near those that boards keep; none where the gain may have no
    lowest value, as in a notch or without an end, and none that a file must not state."""
    freq_hz = np.geomspace(*limits[0].searched_hz, 40)
    gain_db = drawing.nodal.gain_db(boards, freq_hz)
    at_hz = np.array([limits[0].reference_hz or freq_hz[0]])
    reference_db = drawing.nodal.gain_db(boards, at_hz)[:, 0]
    for limit in limits:
        margins = limit.margins_db(gain_db, freq_hz, reference_db).min(axis=1)
        spread = max(margins[0] - margins.min(), 0.05)
        room = (rng.choice((0.4, 0.8, 0.95, 1.2, 1.5, 2.0)) - 1) * spread
        placed = limit.tightened(float(margins.min() - room), digits=4)
        if (limit.sense, limit.kind) in (("at least", "gain"), ("at most", "ripple")) and (
            limit.band_hz[1] == inf or gain_db.min() < -60 or _notched(gain_db)
        ):
            continue
        if limit.kind == "gain" or min(placed.levels) >= 0:
            yield placed


def _notched(gain_db: Real) -> bool:
    """Whether the gain has a dip inside the band, which may be a notch between the points."""
    dip = (gain_db[:, 1:-1] < gain_db[:, :-2]) & (gain_db[:, 1:-1] < gain_db[:, 2:])
    return bool(dip.any())
