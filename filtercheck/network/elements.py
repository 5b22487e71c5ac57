"""The elements of a network and the symbols they bring into its equations.

A network has named nodes. The signal, an ideal voltage source of 1 V, enters at `INPUT`;
`GROUND` is 0 V. Every element has a name of its own; values come later, so that networks
of the same shape are expanded once.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

INPUT = "in"
GROUND = "ground"


@dataclass(frozen=True, slots=True)
class Symbol:
    """One number of an element, to which every network function is affine."""

    element: str
    kind: str  # "conductance", "capacitance", "inductance", "inverse gain" or "inverse bandwidth"

    @property
    def dynamic(self) -> bool:
        """Whether it stands in the equations together with a factor s."""
        return self.kind in ("capacitance", "inductance", "inverse bandwidth")


@dataclass(frozen=True, slots=True)
class TwoTerminal:
    """What a resistor, a capacitor and an inductor have in common."""

    name: str
    a: str
    b: str

    @property
    def nodes(self) -> tuple[str, ...]:
        return (self.a, self.b)


class Resistor(TwoTerminal):
    __slots__ = ()


class Capacitor(TwoTerminal):
    __slots__ = ()


class Inductor(TwoTerminal):
    __slots__ = ()


@dataclass(frozen=True, slots=True)
class Amplifier:
    """An op-amp without output resistance: V_out (1/A0 + s tau) = V_plus - V_minus.

    tau = 1 / (2 pi GBW). A term that is ideal (zero) does not enter the equations at all.
    """

    name: str
    plus: str
    minus: str
    out: str
    finite_gain: bool = True
    finite_bandwidth: bool = True

    @property
    def nodes(self) -> tuple[str, ...]:
        return (self.plus, self.minus, self.out)


Element = Resistor | Capacitor | Inductor | Amplifier


@dataclass(frozen=True)
class Network:
    """Elements between nodes; hashable, so that its expansion can be remembered."""

    elements: tuple[Element, ...]
    _hash: int = field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        object.__setattr__(self, "_hash", hash(self.elements))

    def __hash__(self) -> int:
        return self._hash

    @property
    def nodes(self) -> tuple[str, ...]:
        """The nodes whose voltage is unknown, in the order in which they are met."""
        met = dict.fromkeys(node for element in self.elements for node in element.nodes)
        return tuple(node for node in met if node not in (INPUT, GROUND))

    @property
    def stiff(self) -> frozenset[str]:
        """The nodes that an amplifier drives: nothing connected to them loads them."""
        return frozenset(e.out for e in self.elements if isinstance(e, Amplifier))


def symbols(element: Element) -> Iterator[Symbol]:
    """Yield the symbols of one element."""
    match element:
        case Resistor():
            yield Symbol(element.name, "conductance")
        case Capacitor():
            yield Symbol(element.name, "capacitance")
        case Inductor():
            yield Symbol(element.name, "inductance")
        case Amplifier():
            if element.finite_gain:
                yield Symbol(element.name, "inverse gain")
            if element.finite_bandwidth:
                yield Symbol(element.name, "inverse bandwidth")
