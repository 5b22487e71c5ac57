"""The drawing in each circuit's manual, read as a network, is the circuit's own network.

How a drawing is read: `-`, `|` and `+` are wires, `+` joins its four neighbours; a role between
two wires is a part, a role before `>` an op-amp, whose `(+)` and `(-)` stand on the lines above
and below it; `ground`, `in` and the outputs name the wire that they touch.
"""

from __future__ import annotations

import re
from collections import defaultdict
from dataclasses import replace

import pytest

from filtercheck.circuits import CIRCUITS
from filtercheck.circuits.circuit import Circuit
from filtercheck.network.elements import GROUND, INPUT, Amplifier

Cell = tuple[int, int]  # line, column
Net = frozenset[str]  # what is connected to one node

ACROSS, DOWN = "-+", "|+"
WORD = re.compile(r"\([+-]\)|[A-Za-z]\w*(?: >)?")


class Drawing:
    """The drawing's wires, and the words that touch them."""

    def __init__(self, manual: str) -> None:
        before = manual.partition("    circuit: ")[0]
        self.lines = [f"{line} " for line in before.partition("\n\n")[2].splitlines()]
        self.wire: dict[Cell, Cell] = {}  # a cell and the next one of the same wire
        for place, mark in self.marks():
            for there, kinds in ((self.right(place), ACROSS), (self.below(place), DOWN)):
                if mark in kinds and self.at(there) in kinds:
                    self.wire[self.end(place)] = self.end(there)

    def marks(self) -> list[tuple[Cell, str]]:
        """Return the cells of all wires; the signs of the op-amps' inputs are none."""
        bare = [re.sub(r"\([+-]\)", "   ", line) for line in self.lines]
        return [
            ((i, k), mark)
            for i, line in enumerate(bare)
            for k, mark in enumerate(line)
            if mark in "-|+"
        ]

    def words(self) -> list[tuple[str, int, int, int]]:
        """Return each word with its line, its first column and the column after it."""
        return [
            (m[0], i, m.start(), m.end())
            for i, line in enumerate(self.lines)
            for m in WORD.finditer(line)
        ]

    def at(self, place: Cell) -> str:
        line, column = place
        inside = 0 <= line < len(self.lines) and 0 <= column < len(self.lines[line])
        return self.lines[line][column] if inside else " "

    @staticmethod
    def right(place: Cell) -> Cell:
        return place[0], place[1] + 1

    @staticmethod
    def below(place: Cell) -> Cell:
        return place[0] + 1, place[1]

    def end(self, place: Cell) -> Cell:
        """Return the cell that stands for the whole wire."""
        while self.wire.get(place, place) != place:
            place = self.wire[place]
        return place

    def touching(self, line: int, first: int, after: int) -> set[Cell]:
        """Return the wires that end at a word, on its line or above and below it."""
        beside = {(line, k) for k in (first - 1, after) if self.at((line, k)) in ACROSS}
        spaced = {
            (line, far)
            for near, far in ((first - 1, first - 2), (after, after + 1))
            if self.at((line, near)) == " " and self.at((line, far)) in ACROSS
        }
        stacked = {
            (i, k)
            for i in (line - 1, line + 1)
            for k in range(first, after)
            if self.at((i, k)) in DOWN
        }
        return {self.end(place) for place in beside | spaced | stacked}


def drawn(circuit: Circuit) -> tuple[set[Net], list[str]]:
    """Return the nets of the drawing, and the roles that are drawn."""
    drawing = Drawing(circuit.manual)
    words = drawing.words()
    nets: dict[Cell, set[str]] = defaultdict(set)
    grounds: list[Cell] = []
    roles: list[str] = []
    for word, line, first, after in words:
        wires = drawing.touching(line, first, after)
        role = word.removesuffix(" >")
        if word in ("(+)", "(-)"):
            (owner,) = (
                w.removesuffix(" >")
                for w, i, k, _ in words
                if w.endswith(" >") and abs(i - line) == 1 and 0 <= k - after <= 2
            )
            role = f"{owner} {word}"
        elif role in circuit.roles:
            roles.append(role)
        if role == GROUND:
            grounds += wires
        else:
            expected = 2 if circuit.roles.get(role, "amplifier") != "amplifier" else 1
            assert len(wires) == expected or role in circuit.outputs, (role, wires)
            for wire in wires:
                nets[wire].add(role)
    if grounds:
        nets[(-1, -1)] = {GROUND}.union(*(nets.pop(wire) for wire in set(grounds)))
    return {frozenset(net) for net in nets.values()}, roles


def wired(circuit: Circuit) -> set[Net]:
    """Return the nets of the circuit's elements."""
    nets: dict[str, set[str]] = defaultdict(set)
    for element in circuit.elements:
        if isinstance(element, Amplifier):
            nets[element.plus].add(f"{element.name} (+)")
            nets[element.minus].add(f"{element.name} (-)")
            nets[element.out].add(element.name)
        else:
            for node in element.nodes:
                nets[node].add(element.name)
    for output, node in circuit.outputs.items():
        nets[node].add(output)
    for node in {INPUT, GROUND} & set(nets):
        nets[node].add(node)
    return {frozenset(net) for net in nets.values()}


@pytest.mark.parametrize("circuit", CIRCUITS.values(), ids=lambda circuit: circuit.name)
def test_the_drawing_is_the_circuit(circuit: Circuit) -> None:
    nets, roles = drawn(circuit)

    assert sorted(roles) == sorted(circuit.roles)
    assert nets == wired(circuit)


@pytest.mark.parametrize("circuit", CIRCUITS.values(), ids=lambda circuit: circuit.name)
def test_a_manual_is_plain_text_of_80_columns(circuit: Circuit) -> None:
    assert circuit.manual.isascii()
    assert max(map(len, circuit.manual.splitlines())) <= 80


@pytest.mark.parametrize(
    ("right", "wrong"),
    [
        ("+--- Rf ---+", "   - Rf ---+"),  # a wire that ends in the air
        ("--- Rf ---", "--- Rb ---"),  # a role drawn twice, and one not at all
        ("(-)", "(+)"),
    ],
)
def test_a_wrong_drawing_is_noticed(right: str, wrong: str) -> None:
    circuit = CIRCUITS["inverting-gain"]
    assert right in circuit.manual
    nets, _ = drawn(replace(circuit, manual=circuit.manual.replace(right, wrong)))

    assert nets != wired(circuit)
