"""A nodal analysis for the tests alone, of many boards at many frequencies, and the filter files
that say the same circuit. It shares nothing with the program but the laws of Kirchhoff."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np
import scipy.linalg
from numpy.typing import NDArray

Real = NDArray[np.float64]
Complex = NDArray[np.complex128]

GROUND, INPUT = "0", "in"
GBW, GAIN = "gain_bandwidth", "open_loop_gain"
QUANTITY = {"R": "resistance", "C": "capacitance", "L": "inductance"}
# So many equations are solved at a time, which bounds the memory.
AT_ONCE = 20_000


@dataclass(frozen=True)
class Element:
    """A resistor (R), capacitor (C) or inductor (L) between two nodes, or an op-amp (U) with
    its nodes +, - and output."""

    kind: str
    name: str
    nodes: tuple[str, ...]


@dataclass(frozen=True)
class Range:
    """What a value may be; `tolerance` says it as a filter file does, for a passive part."""

    low: float
    typical: float
    high: float
    tolerance: str = ""


def exact(value: float) -> Range:
    return Range(value, value, value)


def within(value: float, below_percent: float, above_percent: float) -> Range:
    """Return the range of a passive part with a tolerance."""
    low, high = value * (1 - below_percent / 100), value * (1 + above_percent / 100)
    if below_percent == above_percent:
        return Range(low, value, high, f"{above_percent} %")
    return Range(low, value, high, f"[-{below_percent} %, +{above_percent} %]")


@dataclass(frozen=True)
class Drawing:
    """A circuit with its values: by the name of a passive part, and by "A.gain_bandwidth" and
    "A.open_loop_gain" of an op-amp A; a figure of an op-amp that is left out is ideal."""

    elements: tuple[Element, ...]
    ranges: Mapping[str, Range]
    output: str

    @cached_property
    def nodal(self) -> Nodal:
        return Nodal(self.elements, tuple(self.ranges), self.output)

    @property
    def typical(self) -> Real:
        return np.array([r.typical for r in self.ranges.values()])

    @property
    def low(self) -> Real:
        return np.array([r.low for r in self.ranges.values()])

    @property
    def high(self) -> Real:
        return np.array([r.high for r in self.ranges.values()])


def elements(text: str) -> tuple[Element, ...]:
    """Read "R R1 in x | U A x o o"."""
    rows = (row.split() for row in text.replace("\n", "|").split("|") if row.strip())
    return tuple(Element(kind, name, tuple(nodes)) for kind, name, *nodes in rows)


class Nodal:
    """The equations of a circuit, linear in its conductances, capacitances, inductances, inverse
    open-loop gains and integration times of its op-amps: V_out (1/A0 + s tau) = V+ - V-."""

    def __init__(self, drawn: Iterable[Element], names: tuple[str, ...], output: str) -> None:
        drawn = tuple(drawn)
        nodes = {node for e in drawn for node in e.nodes} - {GROUND, INPUT}
        # The current through an inductor is an unknown too, so that nothing is divided by s.
        unknown = [*sorted(nodes), *(e.name for e in drawn if e.kind == "L")]
        # The last column stands for the input, whose voltage is 1.
        self._place = {name: i for i, name in enumerate([*unknown, INPUT])}
        self._size = len(unknown)
        self._driven = {e.nodes[2] for e in drawn if e.kind == "U"}
        self._output = self._place[output]
        self._fixed = np.zeros((self._size, self._size + 1))
        self._stamps = np.zeros((len(names), self._size, self._size + 1))
        self._dynamic = np.zeros(len(names), dtype=bool)
        self._inverse = np.zeros(len(names), dtype=bool)
        number = {name: i for i, name in enumerate(names)}
        for e in drawn:
            self._stamp(e, number)

    def _stamp(self, e: Element, number: Mapping[str, int]) -> None:
        if e.kind == "U":
            plus, minus, out = e.nodes
            self._add(self._fixed, out, plus, -1.0)
            self._add(self._fixed, out, minus, 1.0)
            for figure, factor in ((GAIN, 1.0), (GBW, 1 / (2 * np.pi))):
                k = number.get(f"{e.name}.{figure}")
                if k is not None:
                    self._add(self._stamps[k], out, out, factor)
                    self._dynamic[k], self._inverse[k] = figure == GBW, True
            return
        k = number[e.name]
        self._dynamic[k], self._inverse[k] = e.kind != "R", e.kind == "R"
        a, b = e.nodes
        if e.kind == "L":
            self._add(self._stamps[k], e.name, e.name, -1.0)
        for here, there, sign in ((a, b, 1.0), (b, a, -1.0)):
            if e.kind == "L":
                self._add(self._fixed, e.name, here, sign)
            # An op-amp gives what current its output must; its own equation stands in that row.
            if here not in self._driven and here in self._place and here != INPUT:
                if e.kind == "L":
                    self._add(self._fixed, here, e.name, sign)
                else:
                    self._add(self._stamps[k], here, here, 1.0)
                    self._add(self._stamps[k], here, there, -1.0)

    def _add(self, matrix: Real, row: str, column: str, amount: float) -> None:
        if column != GROUND:
            matrix[self._place[row], self._place[column]] += amount

    def _pencil(self, values: Real) -> tuple[Real, Real]:
        """Return the parts of the equations without and with s, of each board."""
        amounts = np.where(self._inverse, 1.0 / values, values)
        still = np.einsum("bk,kij->bij", amounts * ~self._dynamic, self._stamps)
        return still + self._fixed, np.einsum("bk,kij->bij", amounts * self._dynamic, self._stamps)

    def voltage(self, values: Real, freq_hz: Real) -> Complex:
        """Return the output for 1 V at the input; values of shape (B, K) give (B, F)."""
        step = max(1, AT_ONCE // len(freq_hz))
        s = 2j * np.pi * freq_hz[None, :, None, None]
        found = []
        for first in range(0, len(values), step):
            still, moving = self._pencil(values[first : first + step])
            whole = still[:, None] + s * moving[:, None]
            solved = np.linalg.solve(whole[..., :-1], -whole[..., -1:])
            found.append(solved[..., self._output, 0])
        return np.concatenate(found)

    def gain_db(self, values: Real, freq_hz: Real) -> Real:
        """Return the gain of boards, as `voltage` does; a gain of nothing is far down."""
        size = np.abs(self.voltage(values, freq_hz))
        return np.asarray(20 * np.log10(np.maximum(size, 1e-300)))

    def slopes(self, values: Real, freq_hz: float) -> tuple[float, Real, float]:
        """Return the gain of one board [dB], and its slopes over the logarithms of the values and
        of the frequency, from the adjoint equations."""
        s = 2j * np.pi * freq_hz
        still, moving = (part[0] for part in self._pencil(values[None]))
        whole = still + s * moving
        inverse = np.linalg.inv(whole[:, :-1])
        solution = np.append(-inverse @ whole[:, -1], 1.0)
        adjoint = inverse[self._output]
        output = solution[self._output]
        moves = -(adjoint @ self._stamps @ solution) * np.where(self._dynamic, s, 1.0)
        moves = moves * np.where(self._inverse, -1.0 / values, values)
        along = -(adjoint @ (s * moving) @ solution)
        per_relative = 20 / np.log(10)
        return (
            float(20 * np.log10(max(abs(output), 1e-300))),
            per_relative * (moves / output).real,
            float(per_relative * (along / output).real),
        )

    def poles(self, values: Real) -> Complex:
        """Return the natural frequencies of one board [rad/s]."""
        still, moving = (part[0, :, :-1] for part in self._pencil(values[None]))
        found = scipy.linalg.eigvals(-still, moving)
        # Nodes without a capacitor have theirs at infinity, or far beyond any part's.
        return np.asarray(found[np.abs(found) < 1e13])


def part_lines(drawing: Drawing) -> list[str]:
    """Return the lines of `parts` of a filter file."""
    lines = []
    for e in drawing.elements:
        if e.kind != "U":
            r = drawing.ranges[e.name]
            tolerance = f", tolerance: {r.tolerance}" if r.tolerance else ""
            lines.append(f"  {e.name}: {{{QUANTITY[e.kind]}: {r.typical!r}{tolerance}}}")
            continue
        stated = ", ".join(f"{f}: {_figure(drawing, e.name, f)}" for f in (GBW, GAIN))
        lines.append(f"  {e.name}: {{amplifier: {{{stated}}}}}")
    return lines


def _figure(drawing: Drawing, name: str, figure: str) -> str:
    r = drawing.ranges.get(f"{name}.{figure}")
    if r is None:
        return "ideal"
    if r.low == r.high:
        return repr(r.typical)
    return f"{{min: {r.low!r}, typical: {r.typical!r}, max: {r.high!r}}}"


def connect_lines(drawing: Drawing) -> list[str]:
    """Return the lines of `connect` of a filter file."""
    lines = ["connect:"]
    for e in drawing.elements:
        nodes = ["ground" if node == GROUND else node for node in e.nodes]
        if e.kind == "U":
            lines.append(f"  {e.name}: {{plus: {nodes[0]}, minus: {nodes[1]}, out: {nodes[2]}}}")
        else:
            lines.append(f"  {e.name}: [{nodes[0]}, {nodes[1]}]")
    return lines


def filter_text(
    name: str, drawing: Drawing, requirements: Iterable[str], sections: Iterable[str] = ()
) -> str:
    """Return a filter file with the output `out`; of `sections` where they are given, of which
    the last line names the output, else of `connect`."""
    *wiring, output = [*sections] or [*connect_lines(drawing), drawing.output]
    return "\n".join(
        [
            "format: filtercheck-filter/1",
            f"filter: {name}",
            *wiring,
            "parts:",
            *part_lines(drawing),
            f"outputs: {{out: {output}}}",
            "requirements:",
            *(f"  {line}" for line in requirements),
            "",
        ]
    )
