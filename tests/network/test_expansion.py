"""Network functions against independent solutions of the nodal equations."""

from __future__ import annotations

import random
from math import inf, pi

import numpy as np
import pytest

from filtercheck.errors import NetworkError
from filtercheck.network.curve import Curve
from filtercheck.network.elements import (
    GROUND,
    INPUT,
    Amplifier,
    Capacitor,
    Element,
    Inductor,
    Network,
    Resistor,
    Symbol,
    symbols,
)
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response

TYPICAL = {
    "conductance": 1e-4,
    "capacitance": 1e-8,
    "inductance": 1.0,
    "inverse gain": 1e-5,
    "inverse bandwidth": 1e-7,
}


def random_network(rng: random.Random) -> Network:
    """Return a connected network: a chain from the source, then parts anywhere, op-amps as
    followers or inverters at some of the nodes; up to fifteen parts."""
    count = rng.randint(2, 5)
    nodes = [f"n{i}" for i in range(count)]
    passive = (Resistor, Resistor, Capacitor, Inductor)
    elements: list[Element] = []
    for i, node in enumerate(nodes):
        elements.append(Resistor(f"R{i}", INPUT if i == 0 else nodes[i - 1], node))
    for i in range(rng.randint(2, 6)):
        a, b = rng.sample([*nodes, INPUT, GROUND], 2)
        elements.append(rng.choice(passive)(f"P{i}", a, b))
    for i in range(rng.randint(0, 2)):
        out, node = f"o{i}", rng.choice(nodes)
        finite = {"finite_gain": rng.random() < 0.7, "finite_bandwidth": rng.random() < 0.7}
        if rng.random() < 0.5:
            elements.append(Amplifier(f"U{i}", node, out, out, **finite))
            elements.append(Resistor(f"F{i}", out, rng.choice(nodes)))
        else:
            elements.append(Resistor(f"I{i}", node, f"m{i}"))
            elements.append(rng.choice((Resistor, Capacitor))(f"F{i}", f"m{i}", out))
            elements.append(Amplifier(f"U{i}", GROUND, f"m{i}", out, **finite))
    return Network(tuple(elements))


def nodal(network: Network, values: dict[Symbol, float], freq_hz: float) -> dict[str, complex]:
    """Solve the nodal equations with numpy; inductors as admittances, unlike the program."""
    s = 2j * pi * freq_hz
    place = {node: i for i, node in enumerate(network.nodes)}
    matrix = np.zeros((len(place), len(place)), complex)
    right = np.zeros(len(place), complex)

    def add(row: str, node: str, amount: complex) -> None:
        if row in place and node == INPUT:
            right[place[row]] -= amount
        elif row in place and node in place:
            matrix[place[row], place[node]] += amount

    for e in network.elements:
        given = {symbol.kind: values[symbol] for symbol in symbols(e)}
        if isinstance(e, Amplifier):
            inverse_gain, tau = given.get("inverse gain", 0.0), given.get("inverse bandwidth", 0.0)
            add(e.out, e.out, inverse_gain + s * tau)
            add(e.out, e.plus, -1)
            add(e.out, e.minus, 1)
            continue
        if isinstance(e, Resistor):
            y: complex = given["conductance"]
        else:
            y = (
                s * given["capacitance"]
                if isinstance(e, Capacitor)
                else 1 / (s * given["inductance"])
            )
        for here, there in (e.nodes, e.nodes[::-1]):
            if here not in network.stiff:
                add(here, here, y)
                add(here, there, -y)
    return dict(zip(network.nodes, np.linalg.solve(matrix, right), strict=True))


@pytest.mark.parametrize("seed", range(80))
def test_random_networks_agree_with_the_nodal_solution(seed: int) -> None:
    rng = random.Random(seed)
    network = random_network(rng)
    values = {
        symbol: TYPICAL[symbol.kind] * 10 ** rng.uniform(-0.5, 0.5)
        for e in network.elements
        for symbol in symbols(e)
    }
    functions = network_functions(network)
    for freq_hz in (10.0, 300.0, 2e3, 5e4):
        want = nodal(network, values, freq_hz)
        for node in network.nodes:
            numerator = functions.numerators[node]
            response = Response((ratio(numerator, functions.denominator, values),))
            at = np.array([freq_hz])
            got = 10 ** (response.gain_db(at) / 20) * np.exp(
                1j * np.radians(response.phase_deg(at))
            )
            assert got[0] == pytest.approx(want[node], rel=1e-9)


@pytest.mark.parametrize("seed", range(20))
def test_the_terms_are_whole_numbers_of_different_symbols(seed: int) -> None:
    functions = network_functions(random_network(random.Random(seed)))

    for polynomial in (functions.denominator, *functions.numerators.values()):
        assert polynomial.symbols == functions.denominator.symbols
        for mask, coefficient in polynomial.terms.items():
            assert isinstance(coefficient, int)
            assert coefficient != 0
            assert 0 <= mask < 1 << len(polynomial.symbols)


@pytest.mark.parametrize("seed", range(20))
def test_a_response_is_bilinear_in_each_part(seed: int) -> None:
    """A bilinear function keeps the cross-ratio of four values of a part."""
    rng = random.Random(seed)
    network = random_network(rng)
    values = {s: TYPICAL[s.kind] for e in network.elements for s in symbols(e)}
    symbol = rng.choice(list(values))
    node = network.nodes[-1]
    four = [TYPICAL[symbol.kind] * x for x in (0.5, 1.0, 2.0, 7.0)]
    h = [nodal(network, {**values, symbol: x}, 700.0)[node] for x in four]
    computed = []
    for x in four:
        functions = network_functions(network)
        chosen = ratio(functions.numerators[node], functions.denominator, {**values, symbol: x})
        at = np.array([700.0])
        response = Response((chosen,))
        gain = 10 ** (response.gain_db(at)[0] / 20)
        computed.append(gain * np.exp(1j * np.radians(response.phase_deg(at)[0])))
    np.testing.assert_allclose(computed, h, rtol=1e-9)
    if abs(h[0] - h[3]) > 1e-6 * abs(h[0]):
        (a, b, c, d), (p, q, r, s) = four, computed
        of_values = (a - c) * (b - d) / ((a - d) * (b - c))
        assert (p - r) * (q - s) / ((p - s) * (q - r)) == pytest.approx(of_values, rel=1e-6)


def rc_chain(buffered: bool) -> Network:
    second = "b" if buffered else "x"
    buffer: tuple[Element, ...] = ()
    if buffered:
        buffer = (Amplifier("U", "x", "b", "b", finite_gain=False, finite_bandwidth=False),)
    return Network(
        (
            Resistor("R1", INPUT, "x"),
            Capacitor("C1", "x", GROUND),
            *buffer,
            Resistor("R2", second, "y"),
            Capacitor("C2", "y", GROUND),
        )
    )


@pytest.mark.parametrize(("buffered", "middle"), [(True, 2.0), (False, 3.0)])
def test_a_passive_section_is_loaded_by_the_next(buffered: bool, middle: float) -> None:
    # By hand: 1/(1 + 2x + x^2) when buffered, 1/(1 + 3x + x^2) when not, x = s R C.
    functions = network_functions(rc_chain(buffered))
    values = dict.fromkeys(functions.denominator.symbols, 1.0)
    response = ratio(functions.numerators["y"], functions.denominator, values)

    np.testing.assert_allclose(response.denominator / response.denominator[0], [1, middle, 1])


def test_a_ladder_of_24_elements() -> None:
    # Twelve equal R-C sections: the coefficient of s is R C n (n + 1)/2, the Elmore delay.
    elements: list[Element] = []
    for i in range(12):
        elements += [
            Resistor(f"R{i}", f"n{i - 1}" if i else INPUT, f"n{i}"),
            Capacitor(f"C{i}", f"n{i}", GROUND),
        ]
    functions = network_functions(Network(tuple(elements)))
    values = dict.fromkeys(functions.denominator.symbols, 1.0)
    built = ratio(functions.numerators["n11"], functions.denominator, values)

    assert built.denominator[1] / built.denominator[0] == pytest.approx(78.0)
    assert Curve(Response((built,))).gain_db(0.0) == pytest.approx(0.0, abs=1e-12)
    assert Curve(Response((built,))).gain_db(inf) == -inf


def test_symbols_common_to_all_terms_cancel() -> None:
    network = Network(
        (
            Resistor("R1", INPUT, "m"),
            Resistor("R2", "m", "o"),
            Amplifier("U", "p", "m", "o"),
            Resistor("Rb", "p", GROUND),
        )
    )
    functions = network_functions(network)
    balance = [s.element for s in functions.denominator.symbols].index("Rb")

    assert all(not mask >> balance & 1 for mask in functions.denominator.terms)


def test_a_network_of_endless_meshes_is_refused() -> None:
    # A complete graph of n nodes has n^(n-2) spanning trees (Cayley), each of them a term.
    nodes = [INPUT, GROUND, *(f"n{i}" for i in range(18))]
    pairs = [(a, b) for i, a in enumerate(nodes) for b in nodes[i + 1 :]]
    network = Network(tuple(Resistor(f"R{i}", a, b) for i, (a, b) in enumerate(pairs)))

    with pytest.raises(NetworkError, match="too large to expand"):
        network_functions(network)
