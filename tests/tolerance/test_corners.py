"""Nodes at corners are the polynomial there, and as Bernstein coefficients they are all of it."""

from __future__ import annotations

from math import comb

import numpy as np
import pytest
from boxes import Real, boards, by_power, stages, symbols, values_of
from hypothesis import given
from hypothesis import strategies as st

from filtercheck.network.polynomial import Polynomial
from filtercheck.tolerance.box import Box, Common
from filtercheck.tolerance.corners import Nodes
from filtercheck.tolerance.stage import Stage


def sides(stage: Stage) -> tuple[tuple[Polynomial, Nodes], tuple[Polynomial, Nodes]]:
    return (stage.numerator, stage.numerators), (stage.denominator, stage.denominators)


def dense(polynomial: Polynomial, values: Real, length: int) -> Real:
    powers = by_power(polynomial, values)
    assert all(powers[k] == 0.0 for k in powers if k >= length)
    return np.array([powers.get(k, 0.0) for k in range(length)])


def rebuilt(nodes: Nodes, stage: Stage, point: Real) -> Real:
    """Return the mean of the nodes with the weights of a board: own values are linear, common
    factors have the binomial ones."""
    box = stage.box
    part = [
        (point[i] - box.low[i]) / (box.high[i] - box.low[i]) if box.high[i] > box.low[i] else 0.0
        for i in range(len(box.low))
    ]
    own = np.ones(1)
    for i in box.own_free:
        own = np.concatenate([own * (1 - part[i]), own * part[i]])
    common = np.ones(1)
    for k, m in enumerate(stage.degrees):
        u = part[len(box.own_low) + k]
        common = np.kron(common, [comb(m, j) * (1 - u) ** (m - j) * u**j for j in range(m + 1)])
    return np.asarray(np.einsum("v,c,vck->k", own, common, nodes.values))


@given(stages(commons=2), st.integers(0, 99))
def test_the_nodes_are_the_whole_polynomial(stage: Stage, seed: int) -> None:
    for point in boards(stage.box, np.random.default_rng(seed), 6):
        for polynomial, nodes in sides(stage):
            expected = dense(polynomial, values_of(stage.box, point), nodes.values.shape[-1])
            # `doubt` is what rounding may do, and more than it does.
            assert (np.abs(rebuilt(nodes, stage, point) - expected) <= nodes.doubt).all()


@given(stages(commons=2))
def test_nodes_at_corners_are_the_polynomial_there(stage: Stage) -> None:
    for own in range(2 ** len(stage.box.own_free)):
        for index, node in enumerate(stage.true_corners):
            values = values_of(stage.box, stage.corner(own, index))
            for polynomial, nodes in sides(stage):
                expected = dense(polynomial, values, nodes.values.shape[-1])
                assert (np.abs(nodes.values[own, node] - expected) <= nodes.doubt).all()


@given(stages(commons=2))
def test_boards_at_corners_are_at_the_ends(stage: Stage) -> None:
    box = stage.box
    for own in range(2 ** len(box.own_free)):
        for index in range(len(stage.true_corners)):
            point = stage.corner(own, index)
            assert ((point == box.low) | (point == box.high)).all()


@given(stages(commons=2), st.data())
def test_the_halves_of_a_box_cover_it(stage: Stage, data: st.DataObject) -> None:
    box = stage.box
    if len(box.free):
        coordinate = data.draw(st.sampled_from(box.free.tolist()))
        first, second = box.halves(coordinate)
        others = np.arange(len(box.low)) != coordinate

        assert first.low[coordinate] == box.low[coordinate]
        assert first.high[coordinate] == second.low[coordinate]
        assert second.high[coordinate] == box.high[coordinate]
        for half in (first, second):
            assert (half.low == box.low)[others].all()
            assert (half.high == box.high)[others].all()


def test_the_middle_node_by_hand() -> None:
    # x y with x = y = u, u from 1 to 3: u^2 has the Bernstein coefficients 1, 1 * 3, 9.
    known, one = symbols([False, False]), np.ones(2)
    product = Polynomial(known, {3: 1})
    stage = Stage(product, product, Box(one, one, np.ones(3), (Common(3, 1.0, 3.0),)))

    assert stage.degrees == (2,)
    assert stage.numerators.values.ravel().tolist() == pytest.approx([1.0, 3.0, 9.0], rel=1e-15)
