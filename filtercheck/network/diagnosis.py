"""Why a network has no solution: the element or node to blame, found by trying repairs.

A node floats at 0 Hz exactly when a resistor from it to ground takes a factor s out of every
polynomial; an amplifier is to blame exactly when making it real (finite gain), after those
before it, makes the equations solvable. There may be several of either: the first is named.
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
    _check_islands(network)
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


def _check_islands(network: Network) -> None:
    """Refuse nodes that no passive part connects to ground, to the source or to an output."""
    reached = {INPUT, GROUND} | network.stiff
    passive = [set(e.nodes) for e in network.elements if not isinstance(e, Amplifier)]
    while grown := [ends for ends in passive if ends & reached and ends - reached]:
        reached = reached.union(*grown)
    for node in network.nodes:
        if node not in reached:
            raise _floating(network, node)


def _unsolvable(network: Network) -> NetworkError:
    """Make the amplifiers real, one after the other; the one that mends it all is to blame.

    With all of them real and no islands, the passive parts alone determine every voltage.
    """
    amplifiers = [e for e in network.elements if isinstance(e, Amplifier)]
    mended, blamed = network, amplifiers[0]
    for blamed in amplifiers:
        mended = _made_real(mended, blamed)
        if _solvable(mended):
            break
    return NetworkError(
        f"the loop of {blamed.name} has no solution",
        culprit=blamed.name,
        found=f"{blamed.name} is ideal and nothing feeds its output back to its inputs",
        allowed="an ideal amplifier inside a feedback loop",
        fix=f"connect its output to its inverting input, or give {blamed.name} an open_loop_gain",
    )


def _check_direct_current(network: Network) -> None:
    """Refuse nodes whose voltage at 0 Hz is left open, as between two capacitors."""
    vanishing = _common_power(network_functions(network))
    if not vanishing:
        return
    for node in network.nodes:
        if _common_power(network_functions(_tied_down(network, node))) < vanishing:
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


def _common_power(functions: Functions) -> int:
    """Return the powers of s that the denominator and all numerators have in common."""
    polynomials = (functions.denominator, *functions.numerators.values())
    return functions.cancelled + min(_lowest_power(p) for p in polynomials if p.terms)


def _lowest_power(polynomial: Polynomial) -> int:
    dynamic = sum(1 << i for i, symbol in enumerate(polynomial.symbols) if symbol.dynamic)
    return min((mask & dynamic).bit_count() for mask in polynomial.terms)
