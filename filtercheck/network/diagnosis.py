"""Why a network has no solution: the element or node to blame, found by trying repairs.

A node floats exactly when a resistor from it to ground would make the equations solvable;
an amplifier is to blame exactly when making it real (finite gain) would.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from dataclasses import replace

from filtercheck.errors import NetworkError
from filtercheck.network.elements import (
    GROUND,
    INPUT,
    Amplifier,
    Network,
    Resistor,
)
from filtercheck.network.expansion import Functions, network_functions
from filtercheck.network.polynomial import Polynomial


def check(network: Network, observed: frozenset[str]) -> None:
    """Raise NetworkError, naming the culprit, unless every voltage has one value.

    `observed` are the nodes that an output or a next section reads.
    """
    _check_sources(network)
    _check_connections(network, observed)
    if not network_functions(network).denominator.terms:
        raise _unsolvable(network)
    _check_direct_current(network)


def _check_sources(network: Network) -> None:
    driver = {INPUT: "the signal source", GROUND: "ground"}
    for element in network.elements:
        if not isinstance(element, Amplifier):
            continue
        if element.out in driver:
            raise NetworkError(
                f"the output of {element.name} shorts another source",
                culprit=element.name,
                found=f"node {element.out!r} is driven by {driver[element.out]} already",
                allowed="one source at a node",
                fix=f"give the output of {element.name} a node of its own",
            )
        driver[element.out] = f"amplifier {element.name}"


def _check_connections(network: Network, observed: frozenset[str]) -> None:
    ends = Counter(node for element in network.elements for node in element.nodes)
    for element in network.elements:
        for node in element.nodes:
            if ends[node] == 1 and node not in observed | {INPUT, GROUND}:
                raise NetworkError(
                    f"node {node!r} floats: nothing but {element.name} is connected to it",
                    culprit=element.name,
                    found=f"one connection at node {node!r}",
                    allowed="two connections or more at every node",
                    fix=f"connect another part to {node!r}, or mend the name of the node",
                )


def _unsolvable(network: Network) -> NetworkError:
    for element in network.elements:
        if isinstance(element, Amplifier) and _solvable(_made_real(network, element)):
            return NetworkError(
                f"the loop of {element.name} has no solution",
                culprit=element.name,
                found=f"{element.name} is ideal and nothing feeds its output back to its inputs",
                allowed="an ideal amplifier inside a feedback loop",
                fix=f"connect its output to its inverting input, or give {element.name} "
                "an open_loop_gain",
            )
    for node in network.nodes:
        if _solvable(_tied_down(network, node)):
            return _floating(network, node)
    names = [element.name for element in network.elements]
    return NetworkError(
        "the network has no solution",
        culprit=names[0],
        found="equations without a unique solution, whichever single part is mended",
        allowed="a network in which every node is reached from the source",
        fix="check the nodes of " + ", ".join(names),
    )


def _check_direct_current(network: Network) -> None:
    """Refuse nodes whose voltage at 0 Hz is left open, as between two capacitors."""
    functions = network_functions(network)
    if not _all_vanish_at_zero(functions):
        return
    for node in network.nodes:
        if not _all_vanish_at_zero(network_functions(_tied_down(network, node))):
            raise _floating(network, node)


def _floating(network: Network, node: str) -> NetworkError:
    culprit = next(e.name for e in network.elements if node in e.nodes)
    return NetworkError(
        f"node {node!r} floats: no path for direct current leads to it",
        culprit=culprit,
        found=f"node {node!r} is reached through {', '.join(_reaching(network, node))} only",
        allowed="a path for direct current from every node to ground, source or an amplifier",
        fix=f"connect a resistor to {node!r}, or mend the name of the node",
    )


def _reaching(network: Network, node: str) -> Iterator[str]:
    for element in network.elements:
        if node in element.nodes:
            yield element.name


def _solvable(network: Network) -> bool:
    return bool(network_functions(network).denominator.terms)


def _made_real(network: Network, amplifier: Amplifier) -> Network:
    real = replace(amplifier, finite_gain=True)
    return Network(tuple(real if e is amplifier else e for e in network.elements))


def _tied_down(network: Network, node: str) -> Network:
    """Return the network with one more resistor, from `node` to ground."""
    return Network((*network.elements, Resistor(f"leak at {node}", node, GROUND)))


def _all_vanish_at_zero(functions: Functions) -> bool:
    return all(
        _lowest_power(polynomial) > 0
        for polynomial in (functions.denominator, *functions.numerators.values())
        if polynomial.terms
    )


def _lowest_power(polynomial: Polynomial) -> int:
    dynamic = sum(1 << i for i, symbol in enumerate(polynomial.symbols) if symbol.dynamic)
    return min((mask & dynamic).bit_count() for mask in polynomial.terms)
