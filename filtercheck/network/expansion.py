"""The network functions of a network, expanded once for its shape.

Every element enters the nodal equations M v + m = 0 as a stamp of rank one (m is the column
of the source's node, at 1 V):

    resistor, capacitor   +G or +sC between its two nodes, in Kirchhoff's current law
    inductor              a current of its own: V_a - V_b - s L I = 0
    amplifier             V_out (1/A0 + s tau) - V_plus + V_minus = 0, which takes the place
                          of the current law at the node it drives

By Cramer's rule every voltage is a minor of [M m] over det M, so all outputs share one
denominator. A minor of stamps of rank one is affine in every symbol (Cauchy-Binet), hence
the terms with a symbol squared cancel and can be dropped when they arise.

Source: Ho, Ruehli and Brennan, "The modified nodal approach to network analysis", IEEE
Trans. Circuits Syst., vol. 22, no. 6, pp. 504-509, 1975 (for the stamps, from memory).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import lru_cache

from filtercheck.errors import NetworkError
from filtercheck.network.elements import (
    GROUND,
    INPUT,
    Amplifier,
    Capacitor,
    Inductor,
    Network,
    Resistor,
    Symbol,
    symbols,
)
from filtercheck.network.polynomial import Polynomial

# More terms than this are refused: a network of so many meshes comes from no drawing of a
# filter, and a stranger's file must not take up the machine. A ladder of 24 elements needs 75 025.
MOST_TERMS = 1_000_000

Terms = dict[int, int]  # mask of symbols -> integer coefficient
Entry = list[tuple[int, int]]  # the terms of one matrix entry: (mask with one bit or none, sign)
Rows = list[dict[int, Entry]]  # for each equation its entries by column


@dataclass(frozen=True, eq=False)
class Functions:
    """What one network does: `numerators[node] / denominator` is the voltage at that node."""

    denominator: Polynomial
    numerators: Mapping[str, Polynomial]
    cancelled: int  # powers of s among the common symbols that were divided out


@lru_cache(maxsize=512)
def network_functions(network: Network) -> Functions:
    """Return the voltage of every node over that of the source, as polynomials.

    Where the equations have no unique solution for any values, the denominator has no
    terms; `diagnosis` tells why. Cost grows with the number of sub-determinants that are
    not zero: milliseconds for three amplifiers and a dozen parts.

    Raises
    ------
    NetworkError
        If there are more than `MOST_TERMS` terms.
    """
    known = [symbol for element in network.elements for symbol in symbols(element)]
    rows, columns = _equations(network, {symbol: 1 << i for i, symbol in enumerate(known)})
    minors = _minors(rows, len(columns))
    if minors is None:
        raise _too_large(network)
    last = len(columns) - 1  # the source's column
    whole: dict[str, Terms] = {}
    for i, name in enumerate(columns):
        sign = -1 if (last - i) % 2 else 1
        minor = minors.get((1 << len(columns)) - 1 & ~(1 << i), {})
        whole[name] = {mask: sign * c for mask, c in sorted(minor.items())}
    common = _common(whole[name] for name in (*network.nodes, INPUT))
    ratio = {
        name: Polynomial(tuple(known), {mask & ~common: c for mask, c in whole[name].items()})
        for name in (*network.nodes, INPUT)
    }
    cancelled = sum(symbol.dynamic and common >> i & 1 for i, symbol in enumerate(known))
    return Functions(ratio[INPUT], ratio, cancelled)


def _common(polynomials: Iterable[Terms]) -> int:
    """Return the symbols in every term: they cancel, and so do not matter to any output.

    Resistors that only balance bias currents are such, or a part across the source.
    """
    common = -1
    for terms in polynomials:
        for mask in terms:
            common &= mask
    return max(common, 0)


def _equations(network: Network, bit: Mapping[Symbol, int]) -> tuple[Rows, list[str]]:
    """Return the rows of [M m] and the names of its columns, the source's the last."""
    currents = [f"current of {e.name}" for e in network.elements if isinstance(e, Inductor)]
    columns = [*network.nodes, *currents, INPUT]
    place = {name: i for i, name in enumerate(columns)}
    law: dict[str, dict[int, Entry]] = {n: {} for n in network.nodes if n not in network.stiff}
    own: Rows = []

    def add(row: dict[int, Entry] | None, node: str, mask: int, sign: int) -> None:
        if row is not None and node != GROUND:
            row.setdefault(place[node], []).append((mask, sign))

    for element in network.elements:
        masks = [bit[symbol] for symbol in symbols(element)]
        match element:
            case Resistor(_, a, b) | Capacitor(_, a, b):
                for here, there in ((a, b), (b, a)):
                    add(law.get(here), here, masks[0], 1)
                    add(law.get(here), there, masks[0], -1)
            case Inductor(name, a, b):
                current = f"current of {name}"
                add(law.get(a), current, 0, 1)
                add(law.get(b), current, 0, -1)
                own.append({})
                add(own[-1], a, 0, 1)
                add(own[-1], b, 0, -1)
                add(own[-1], current, masks[0], -1)
            case Amplifier():
                own.append(_amplifier_row(element, place, masks))
    return [*law.values(), *own], columns


def _amplifier_row(
    element: Amplifier, place: Mapping[str, int], masks: list[int]
) -> dict[int, Entry]:
    row: dict[int, Entry] = {}
    terms = [(element.out, mask, 1) for mask in masks]
    for node, mask, sign in [*terms, (element.plus, 0, -1), (element.minus, 0, 1)]:
        if node != GROUND:
            row.setdefault(place[node], []).append((mask, sign))
    return row


def _too_large(network: Network) -> NetworkError:
    return NetworkError(
        "the network is too large to expand",
        culprit=network.elements[0].name,
        found=f"{len(network.elements)} parts that make more than {MOST_TERMS:,} terms",
        allowed="networks with fewer meshes",
        fix="divide the filter into sections where an amplifier drives the next part",
    )


def _minors(rows: Rows, width: int) -> dict[int, Terms] | None:
    """Return the minors of all rows by the set of columns used, as bit masks; None when they
    have too many terms.

    Row after row, each set of columns chosen so far keeps its minor; a set that leaves more
    than one column behind which no later row can use is dropped, since it cannot end in a
    minor of the whole.
    """
    order = _elimination_order(rows)
    later = [0] * (len(order) + 1)
    for k in range(len(order) - 1, -1, -1):
        later[k] = later[k + 1] | sum(1 << column for column in rows[order[k]])
    everything = (1 << width) - 1
    minors: dict[int, Terms] = {0: {0: _parity(order)}}
    for k, index in enumerate(order):
        grown: dict[int, Terms] = {}
        for used, minor in minors.items():
            for column, entry in rows[index].items():
                chosen = used | 1 << column
                lost = everything & ~chosen & ~later[k + 1]
                if chosen == used or lost & (lost - 1):
                    continue
                flip = -1 if (used >> column).bit_count() % 2 else 1
                _accumulate(grown.setdefault(chosen, {}), minor, entry, flip)
            if sum(map(len, grown.values())) > MOST_TERMS:
                return None
        minors = grown
    return minors


def _accumulate(total: Terms, minor: Terms, entry: Entry, flip: int) -> None:
    """Add `flip * minor * entry` to `total`."""
    for mask, sign in entry:
        for term, coefficient in minor.items():
            if term & mask:
                continue  # a square: such terms cancel, see the theorem above
            product = term | mask
            value = total.get(product, 0) + flip * sign * coefficient
            if value:
                total[product] = value
            else:
                del total[product]


def _elimination_order(rows: Rows) -> list[int]:
    """Return the rows in an order that keeps few columns open: the next is the one that
    brings in the fewest new columns."""
    order: list[int] = []
    met: set[int] = set()
    left = set(range(len(rows)))
    while left:
        nearest = min(left, key=lambda i: (len(rows[i].keys() - met), len(rows[i]), i))
        order.append(nearest)
        left.remove(nearest)
        met |= rows[nearest].keys()
    return order


def _parity(order: list[int]) -> int:
    """Return the sign of a permutation."""
    swaps = sum(1 for i, a in enumerate(order) for b in order[i + 1 :] if a > b)
    return -1 if swaps % 2 else 1
