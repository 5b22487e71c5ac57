"""Bounds worked by hand: second-order terms, common factors, coefficients that are zero."""

from __future__ import annotations

from dataclasses import replace
from math import isfinite

import numpy as np
import pytest
from boxes import Real, coefficients, symbols

from filtercheck.network.polynomial import Polynomial
from filtercheck.tolerance import certificate
from filtercheck.tolerance import stage as stage_module
from filtercheck.tolerance.box import Box, Common
from filtercheck.tolerance.certificate import Sides, ratio, relative_ratio
from filtercheck.tolerance.chain import Chain
from filtercheck.tolerance.corners import Nodes, nodes, true_corners
from filtercheck.tolerance.limit import Limit
from filtercheck.tolerance.prover import prove
from filtercheck.tolerance.segment import Segment
from filtercheck.tolerance.stage import Stage
from filtercheck.tolerance.terms import Terms


def two_factors() -> Stage:
    """Return H = (1 + x s)/(2 - x + s), x from 0.5 to 1.5: H(infinity)/H(0) = x (2 - x)."""
    known = symbols([False, True])
    top, bottom = Polynomial(known, {0: 1, 3: 1}), Polynomial(known, {0: 2, 1: -1, 2: 1})
    return Stage(top, bottom, Box(np.array([0.5, 1.0]), np.array([1.5, 1.0]), np.ones(2)))


def two_frequencies() -> float:
    """Return the bound of |H(infinity)/H(0)| with g against the angle of B = j."""
    ends = (Segment(np.inf, np.inf), Segment(0.0, 0.0))
    return relative_ratio(two_factors(), Sides("numerators"), ends, ((-1j, -1j), (-1j, -1j)))


def test_a_product_is_larger_between_the_corners() -> None:
    # By hand: x (2 - x) is 0.75 at both corners and 1 in the middle. The second-order term is
    # 1 * 1/2, so that the bound is 1.25.
    assert two_frequencies() == pytest.approx(1.25, rel=1e-10)


def test_without_the_second_order_term_the_bound_would_be_exceeded(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    def none(one: certificate.Form, bit: int) -> Real:
        return np.zeros(one.at_nodes.shape[-1])

    monkeypatch.setattr(certificate, "_difference", none)

    assert two_frequencies() == pytest.approx(0.75, rel=1e-10)  # below x (2 - x) = 1


def shared_factor() -> Stage:
    """Return H = 2 x - x y of two values that are 1 times a common u, 0.5 to 1.5: 2 u - u^2."""
    known = symbols([False, False])
    one, box = np.ones(2), (Common(3, 0.5, 1.5),)
    top, bottom = Polynomial(known, {1: 2, 3: -1}), Polynomial(known, {0: 1})
    return Stage(top, bottom, Box(one, one, np.ones(3), box))


def test_a_common_factor_is_larger_between_the_corners() -> None:
    # By hand: 2 u - u^2 is 0.75 at both ends and 1 in the middle; its Bernstein coefficient
    # there is 2 (0.5 + 1.5)/2 - 0.5 * 1.5 = 1.25.
    here = Segment(1.0, 1.0)

    c = ratio(shared_factor(), Sides("numerators"), here, (1.0, 1.0), 1.0)

    assert c == pytest.approx(1.25, rel=1e-10)


def test_without_the_middle_node_the_bound_would_be_exceeded(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    def ends_only(of: Terms, box: Box, degrees: tuple[int, ...], doubt: Real) -> Nodes:
        found = nodes(of, box, degrees, doubt)
        return replace(found, values=found.values[:, true_corners(degrees)])

    monkeypatch.setattr(stage_module, "nodes", ends_only)

    c = ratio(shared_factor(), Sides("numerators"), Segment(1.0, 1.0), (1.0, 1.0), 1.0)

    assert c == pytest.approx(0.75, rel=1e-10)  # below 2 u - u^2 = 1


# A fault that these tests found: where the numerator has no coefficient, one of the denominator
# on the far side of the line was passed over, as if no average could fall there.


def test_a_pole_on_the_stretch_leaves_no_bound() -> None:
    # (s + 4) (s^2 + 1) = 4 + s + 4 s^2 + s^3 is zero at s = j, so s^3 over it has no bound.
    stage = coefficients((4.0, 1.0, 4.0, 1.0), (4.0, 1.0, 4.0, 1.0), top=[3])
    segment = Segment(0.0, 4.0)
    end = -60.0 - 60.0j  # (4 + 4j) ((4j)^2 + 1), the denominator at the upper end
    g = (0.25, end.conjugate() / abs(end))

    assert not isfinite(ratio(stage, Sides("numerators"), segment, g, 1.0))


def test_a_ceiling_far_below_the_peak_is_not_proved() -> None:
    # (s^2 + 1) (s^2 + 4 s + 1) + 0.1 s^2 is 1 - 0.1 - 1 + 0 j + ... = -0.1 at s = j, where s^4
    # is 1: the gain there is 20 dB, and 0 dB is no ceiling of it.
    a = (1.0, 4.0, 2.1, 4.0, 1.0)
    assert abs(1.0 / np.polyval(a[::-1], 1j)) == pytest.approx(10.0)
    ceiling = Limit("at most", ((0.0, 0.0),), (0.0, 8.0 / (2 * np.pi)))

    proof = prove(Chain((coefficients(a, a, top=[4]),), 1.0), ceiling, (), 100_000_000)

    assert proof.challenge is not None or proof.gap_db > 0.0
