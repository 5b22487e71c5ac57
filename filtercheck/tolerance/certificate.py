"""The proof that no board of a box exceeds a ratio on a stretch of frequencies.

Theorem. Let A and B be polynomials in s and in the values of a box, let A_vj and B_vj be their
coefficients as forms on a segment (`segment`), at node v of the box (`corners`), and let
g(t) = g1 (1 - t) + g2 t with complex g1, g2. If for one number c

    |A_vj| <= c Re (g B)_vj      for all v and j,

then |A| <= c |g| |B|, and so |A/B| <= c ((1 - t) |g1| + t |g2|), for every board of the box and
every frequency of the segment.

Proof. For fixed t and board, A and g B are averages of the A_vj and (g B)_vj with the same
weights, none negative. The absolute value of an average is at most the average of the absolute
values; Re (g B) is the average of the real parts; and Re (g B) <= |g| |B|. QED

One direction g serves all nodes at once; it turns with the frequency as the worst boards at
both ends do. At a worst board the inequality is an equality where g B is real and positive, so
that nothing is lost where the nodes of B lie on the far side of the line through it at right
angles. This is the mapping theorem with a supporting line written down.

Relative limits compare A = A1(w) A2(w') with B = B1(w) B2(w') of the same board: degree two in
each own value, whose middle coefficient is the mean of the outer two less
(dA1)(dA2)/2, where d is the difference between the ends. The theorem holds with the corners
alone when the sum of those terms over all values is added on the left and taken away on the
right. They are of second order in the tolerances; halving the box quarters them.

Source: Zadeh and Desoer, Linear System Theory (1963; from memory) for the mapping theorem.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product
from math import comb, inf

import numpy as np

from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.corners import Nodes
from filtercheck.tolerance.faces import keep, weighted
from filtercheck.tolerance.segment import Segment, times_linear, times_size
from filtercheck.tolerance.stage import Stage


@dataclass(frozen=True)
class Form:
    """A polynomial's coefficients on a segment at every node, and how wrong they may be."""

    at_nodes: Complex  # (2^n, C, J)
    doubt: Real  # (J,)


def form(nodes: Nodes, segment: Segment, degree: int) -> Form:
    """Return a polynomial at the nodes as forms of a degree on a segment."""
    powers = segment.powers(degree)[: nodes.values.shape[-1]]
    return Form(nodes.values @ powers, nodes.doubt @ np.abs(powers))


@dataclass(frozen=True)
class Sides:
    """The polynomials of a stage whose ratio A/B is bounded, by name."""

    above: str  # of A1: "numerators" or "denominators"; B1, A2 and B2 follow from it

    @property
    def below(self) -> str:
        return "denominators" if self.above == "numerators" else "numerators"

    @property
    def both(self) -> tuple[str, str]:
        return self.above, self.below


def ratio(
    stage: Stage, sides: Sides, segment: Segment, g: tuple[complex, complex], enough: float
) -> float:
    """Return the smallest c of the theorem, or infinity where there is none.

    For a stage of more free values than can be listed, return `enough` or infinity.
    """
    a, b = (segment.powers(stage.degree)[: stage.named(side).degree + 1] for side in sides.both)
    left_doubt, right_doubt = (
        stage.doubt(side) @ np.abs(forms) for side, forms in zip(sides.both, (a, b), strict=True)
    )
    if not segment.is_point:
        left_doubt, right_doubt = times_size(left_doubt, 1.0, 1.0), times_size(right_doubt, *g)
        a, b = times_linear(a, 1.0, 1.0), times_linear(b, *g)
    else:
        b, right_doubt = g[0] * b, abs(g[0]) * right_doubt
    if stage.is_large:
        kept = keep(
            weighted(stage.named(sides.above), stage.box, stage.degrees, a),
            weighted(stage.named(sides.below), stage.box, stage.degrees, enough * b),
            stage.box,
            np.tile(left_doubt + enough * right_doubt, stage.common_nodes),
        )
        return enough if kept else inf
    above, below = (stage.nodes(side).values for side in sides.both)
    return _largest(np.abs(above @ a) + left_doubt, below @ np.real(b) - right_doubt)


def _largest(left: Real, right: Real) -> float:
    """Return the largest left/right; infinity where the right side is negative, or where it is
    zero and the left side is not."""
    with np.errstate(divide="ignore", invalid="ignore"):
        quotient = np.where(right > 0.0, left / right, inf)
    return float(np.where((left == 0.0) & (right == 0.0), 0.0, quotient).max())


def relative_ratio(
    stage: Stage,
    sides: Sides,
    segments: tuple[Segment, Segment],
    g: tuple[tuple[complex, complex], tuple[complex, complex]],
) -> float:
    """Return the smallest c for the ratio at frequencies of one segment over that at another's.

    `g[k][l]` belongs to end k of the first segment and end l of the second.
    """
    forms = {
        (name, i): form(stage.nodes(name), segment, stage.degree)
        for name in sides.both
        for i, segment in enumerate(segments)
    }
    left, left_loss = _product(forms[sides.above, 0], forms[sides.below, 1], stage)
    right, right_loss = _product(forms[sides.below, 0], forms[sides.above, 1], stage)
    ones = ((1.0, 1.0), (1.0, 1.0))
    sizes = ((abs(g[0][0]), abs(g[0][1])), (abs(g[1][0]), abs(g[1][1])))
    smooth: Real = np.abs(_weighted(left, ones, segments)) + np.real(
        _weighted(left_loss.astype(complex), ones, segments)
    )
    turned: Real = np.real(_weighted(right, g, segments)) - np.real(
        _weighted(right_loss.astype(complex), sizes, segments)
    )
    return _largest(smooth, turned)


def _weighted(
    forms: Complex,
    g: tuple[tuple[complex, complex], tuple[complex, complex]],
    segments: tuple[Segment, Segment],
) -> Complex:
    """Multiply forms (..., J, J') by what is linear between the values g at the four ends."""
    if segments[0].is_point and segments[1].is_point:
        return g[0][0] * forms
    if segments[1].is_point:
        return np.moveaxis(times_linear(np.moveaxis(forms, -2, -1), g[0][0], g[1][0]), -1, -2)
    if segments[0].is_point:
        return times_linear(forms, g[0][0], g[0][1])
    start = times_linear(forms, g[0][0], g[0][1])
    end = times_linear(forms, g[1][0], g[1][1])
    grown = np.zeros((*start.shape[:-2], start.shape[-2] + 1, start.shape[-1]), complex)
    grown[..., :-1, :] += start
    grown[..., 1:, :] += end
    return grown


def _product(one: Form, other: Form, stage: Stage) -> tuple[Complex, Real]:
    """Return the product at the corners, (2^n, C', J, J'), and what it may lack elsewhere, (J, J').

    Common factors are multiplied exactly: the Bernstein coefficients of a product are means of
    products of those of its factors.
    """
    shape = tuple(m + 1 for m in stage.degrees)
    grown = tuple(2 * m + 1 for m in stage.degrees)
    out = np.zeros(
        (
            len(one.at_nodes),
            int(np.prod(grown, dtype=int)),
            one.at_nodes.shape[-1],
            other.at_nodes.shape[-1],
        ),
        complex,
    )
    for i, first in enumerate(product(*(range(n) for n in shape))):
        for k, second in enumerate(product(*(range(n) for n in shape))):
            place = tuple(a + b for a, b in zip(first, second, strict=True))
            weight = 1.0
            for a, b, m in zip(first, second, stage.degrees, strict=True):
                weight *= comb(m, a) * comb(m, b) / comb(2 * m, a + b)
            index = int(np.ravel_multi_index(place, grown)) if grown else 0
            out[:, index] += weight * (one.at_nodes[:, i, :, None] * other.at_nodes[:, k, None, :])
    loss = np.zeros(out.shape[2:])
    for bit in range(len(stage.box.own_free)):
        loss += 0.5 * np.outer(_difference(one, bit), _difference(other, bit))
    tops = [np.abs(f.at_nodes).max(axis=(0, 1)) for f in (one, other)]
    loss += np.outer(one.doubt, tops[1] + other.doubt) + np.outer(tops[0], other.doubt)
    return out, loss


def _difference(one: Form, bit: int) -> Real:
    """Return the largest change along one own value, for each coefficient."""
    pairs = one.at_nodes.reshape(-1, 2, 2**bit, *one.at_nodes.shape[1:])
    return np.asarray(np.abs(pairs[:, 1] - pairs[:, 0]).max(axis=(0, 1, 2)))
