"""Networks without a solution: the error names the part and the node."""

from __future__ import annotations

import pytest

from filtercheck.errors import NetworkError
from filtercheck.network.curve import Curve
from filtercheck.network.diagnosis import check
from filtercheck.network.elements import (
    Amplifier,
    Capacitor,
    Element,
    Inductor,
    Network,
    Resistor,
)
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response
from filtercheck.network.stability import instability


def ideal(name: str, plus: str, minus: str, out: str) -> Amplifier:
    return Amplifier(name, plus, minus, out, finite_gain=False, finite_bandwidth=False)


DIVIDER = (Resistor("R1", "in", "o"), Resistor("R2", "o", "ground"))
BROKEN: list[tuple[str, tuple[Element, ...], str, str]] = [
    (
        "dangling",
        (*DIVIDER, Resistor("R3", "o", "x")),
        "R3",
        "node 'x' floats: nothing but R3 is connected to it",
    ),
    (
        "two capacitors",
        (*DIVIDER, Capacitor("C1", "o", "x"), Capacitor("C2", "x", "ground")),
        "C1",
        "node 'x' floats: no path for direct current leads to it",
    ),
    (
        "island",
        (*DIVIDER, Resistor("R3", "x", "y"), Resistor("R4", "x", "y")),
        "R3",
        "node 'x' floats: no path for direct current leads to it",
    ),
    (
        "output at the source",
        (*DIVIDER, Amplifier("U1", "o", "in", "in")),
        "U1",
        "the output of U1 shorts another source",
    ),
    (
        "output at ground",
        (*DIVIDER, Amplifier("U1", "o", "ground", "ground")),
        "U1",
        "the output of U1 shorts another source",
    ),
    (
        "two outputs",
        (*DIVIDER, Amplifier("U1", "in", "o2", "o2"), Amplifier("U2", "o", "o2", "o2")),
        "U2",
        "the output of U2 shorts another source",
    ),
    (
        "unused output",
        (*DIVIDER, Amplifier("U1", "o", "ground", "x")),
        "U1",
        "node 'x' floats: nothing but U1 is connected to it",
    ),
    (
        "no feedback",
        (*DIVIDER, ideal("U1", "o", "ground", "x"), Resistor("R3", "x", "ground")),
        "U1",
        "the loop of U1 has no solution",
    ),
    (
        "two nodes between capacitors",
        (
            *DIVIDER,
            *(Capacitor("C1", "o", "x"), Capacitor("C2", "x", "ground")),
            *(Capacitor("C3", "o", "y"), Capacitor("C4", "y", "ground")),
        ),
        "C1",
        "node 'x' floats: no path for direct current leads to it",
    ),
    (
        "three capacitors in a row",
        (*DIVIDER, Capacitor("C1", "o", "x"), Capacitor("C2", "x", "y"), Capacitor("C3", "y", "o")),
        "C1",
        "node 'x' floats: no path for direct current leads to it",
    ),
    (
        "an input behind a capacitor alone",
        (Capacitor("C1", "in", "p"), ideal("U1", "p", "o", "o")),
        "C1",
        "node 'p' floats: no path for direct current leads to it",
    ),
    (
        "two islands",
        (
            *DIVIDER,
            *(Resistor("R3", "x", "y"), Resistor("R4", "x", "y")),
            *(Resistor("R5", "v", "w"), Resistor("R6", "v", "w")),
        ),
        "R3",
        "node 'x' floats: no path for direct current leads to it",
    ),
    (
        "an island and no feedback",
        (
            *DIVIDER,
            *(ideal("U1", "o", "ground", "x"), Resistor("R3", "x", "ground")),
            *(Resistor("R5", "v", "w"), Resistor("R6", "v", "w")),
        ),
        "R5",
        "node 'v' floats: no path for direct current leads to it",
    ),
    (
        "no feedback twice",
        (
            *DIVIDER,
            *(ideal("U1", "o", "ground", "x"), Resistor("R3", "x", "ground")),
            *(ideal("U2", "o", "ground", "y"), Resistor("R4", "y", "ground")),
        ),
        "U2",
        "the loop of U2 has no solution",
    ),
    (
        "both inputs at one node",
        (*DIVIDER, ideal("U1", "o", "o", "x"), Resistor("R3", "x", "o")),
        "U1",
        "the loop of U1 has no solution",
    ),
]


@pytest.mark.parametrize(
    ("elements", "culprit", "problem"), [b[1:] for b in BROKEN], ids=[b[0] for b in BROKEN]
)
def test_the_culprit_is_named(elements: tuple[Element, ...], culprit: str, problem: str) -> None:
    with pytest.raises(NetworkError) as raised:
        check(Network(elements), frozenset({"o"}))

    assert raised.value.culprit == culprit
    assert raised.value.problem == problem
    assert raised.value.fix


def test_a_floating_node_is_reported_with_all_that_reach_it() -> None:
    capacitors = (Capacitor("C1", "o", "x"), Capacitor("C2", "x", "ground"))
    with pytest.raises(NetworkError) as raised:
        check(Network((*DIVIDER, *capacitors, ideal("U1", "x", "u", "u"))), frozenset({"o", "u"}))

    assert raised.value.found == "node 'x' is reached through C1, C2, U1 only"


@pytest.mark.parametrize("sound_first", [True, False])
def test_a_sound_amplifier_is_not_blamed_for_another(sound_first: bool) -> None:
    sound, bad = ideal("U1", "o", "b", "b"), ideal("U2", "b", "ground", "x")
    both = (sound, bad) if sound_first else (bad, sound)
    with pytest.raises(NetworkError) as raised:
        check(Network((*DIVIDER, *both, Resistor("R3", "x", "b"))), frozenset({"o"}))

    assert raised.value.culprit == "U2"


@pytest.mark.parametrize(
    "elements",
    [
        DIVIDER,
        (Resistor("R1", "in", "o"),),
        (*DIVIDER, Amplifier("U1", "o", "ground", "x"), Resistor("R3", "x", "ground")),
        (*DIVIDER, Inductor("L1", "in", "ground")),
        (Capacitor("C1", "in", "o"), Resistor("R1", "o", "ground")),
    ],
)
def test_sound_networks_pass(elements: tuple[Element, ...]) -> None:
    check(Network(elements), frozenset({"o"}))


def built(elements: tuple[Element, ...], node: str, **values: float) -> Response:
    functions = network_functions(Network(elements))
    numbers = {s: values.get(s.element, 1.0) for s in functions.denominator.symbols}
    return Response((ratio(functions.numerators[node], functions.denominator, numbers),))


def test_feedback_that_cancels_is_found_at_these_values_only() -> None:
    elements = (
        Resistor("R1", "in", "p"),
        Resistor("R2", "p", "o"),
        Resistor("R3", "ground", "m"),
        Resistor("R4", "m", "o"),
        ideal("U1", "p", "m", "o"),
    )
    check(Network(elements), frozenset({"o"}))

    with pytest.raises(NetworkError, match="no solution at these part values"):
        built(elements, "o")
    assert Curve(built(elements, "o", R4=3.0)).gain_db(0.0) > -100


def test_stability() -> None:
    lossless = (Inductor("L1", "in", "o"), Capacitor("C1", "o", "ground"))
    damped = (*lossless, Resistor("R1", "o", "ground"))
    integrator = (
        Resistor("R1", "in", "m"),
        Capacitor("C1", "m", "o"),
        ideal("U1", "ground", "m", "o"),
    )
    latch = (
        Resistor("R1", "in", "p"),
        Resistor("R2", "o", "p"),
        Amplifier("U1", "p", "ground", "o", finite_gain=False),
    )

    assert instability(built(damped, "o")) is None
    doubtful = instability(built(lossless, "o"))
    assert doubtful is not None
    assert not doubtful.certain
    at_zero = instability(built(integrator, "o"))
    assert at_zero is not None
    assert (at_zero.certain, at_zero.freq_hz) == (False, 0.0)
    oscillating = instability(built(latch, "o"))
    assert oscillating is not None
    assert oscillating.certain
