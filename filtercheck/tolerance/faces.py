"""The theorem's inequality for networks of more free values than their corners can be listed.

Wanted is f = |L| - Re R <= 0 at all corners, where L and R are affine in each own value. Along
one value f is convex. Where its derivative keeps its sign over the whole face of the box, only
one end of that value can be the largest, and the value is frozen there; that shrinks the face
and makes more signs certain. When no more signs are certain and few values are left, their
corners are listed; when many are left, the face is divided at the value that matters most.
Nothing is given up: the answer is that of listing all corners.

With each value m (1 + rho r), |r| <= 1, the derivative by r_i is

    its value in the middle, rho_i (sum of the terms with i), exact,
    the second order, rho_i rho_k (sum of the terms with i and k) r_k, exact, summed by size,
    what is beyond: at most rho_i (sum of |terms with i|)(prod(1 + rho) - 1 - sum rho),

and the direction of L, along which |L| is differentiated, turns by an angle that the orders of
its part at right angles bound.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.box import Box
from filtercheck.tolerance.corners import bernstein
from filtercheck.tolerance.terms import Terms

LISTED = 9  # values whose corners are listed
MOST_FACES = 4000  # that are looked at, for one inequality, before the attempt is given up


@dataclass(frozen=True, eq=False)
class Weighted:
    """A polynomial's terms: which own free values are in each, and what the rest is worth."""

    members: Real  # (T, n), 0 or 1
    weights: Complex  # (T, Q) for every inequality, or (T,) for one
    about: _About | None = None  # a face, if it has been worked out already

    def column(self, q: int, about: _About) -> Weighted:
        """Return the terms for one inequality."""
        return Weighted(self.members, self.weights[:, q], about)

    def without(self, chosen: NDArray[np.bool_], values: Real) -> Weighted:
        """Return the terms of one inequality with some values multiplied out, and what has
        become alike put together."""
        worth = np.exp(self.members[:, chosen] @ np.log(values[chosen]))
        left = self.members[:, ~chosen]
        keys = left @ 2.0 ** np.arange(left.shape[1])
        _, first, places = np.unique(keys, return_index=True, return_inverse=True)
        weights = self.weights * worth
        total = np.bincount(places, np.real(weights)) + 1j * np.bincount(places, np.imag(weights))
        return Weighted(left[first], total)


@dataclass(frozen=True, eq=False)
class _About:
    """What of the terms on a face does not depend on the inequality."""

    worth: Real  # (T,), the product of the values in the middle
    reaches: Real  # (T, n), rho of each value in the term
    growth: Real  # (T,), product of 1 + rho, less 1

    @staticmethod
    def of(members: Real, middle: Real, reach: Real) -> _About:
        rho = reach / middle
        return _About(
            np.exp(members @ np.log(middle)),
            members * rho,
            np.maximum(np.exp(members @ np.log1p(rho)) - 1.0, 0.0),
        )


def weighted(of: Terms, box: Box, degrees: tuple[int, ...], forms: Complex) -> Weighted:
    """Return a polynomial's terms for all coefficients of its forms, (K, J), and all Bernstein
    coefficients of the common factors: Q is J times the number of those."""
    own = len(box.own_free)
    weights = of.weights[:, None].astype(complex)
    columns = {int(coordinate): k for k, coordinate in enumerate(box.free)}
    for k, (common, degree) in enumerate(zip(box.commons, degrees, strict=True)):
        column = columns.get(len(box.own_low) + k)
        if column is not None:
            rows = bernstein(common, degree)[of.exponents[:, column].astype(int)]
            weights = (weights[:, :, None] * rows[:, None, :]).reshape(len(rows), -1)
    weights = weights[:, :, None] * forms[of.powers][:, None, :]
    return Weighted(of.exponents[:, :own], weights.reshape(len(of.weights), -1))


@dataclass(frozen=True, eq=False)
class _Face:
    """A part of the corners, and the inequality on it: what is frozen is multiplied out."""

    left: Weighted | None
    right: Weighted
    middle: Real  # (n,) of each value that is left
    reach: Real  # (n,)

    def frozen(self, chosen: NDArray[np.bool_], ends: Real) -> _Face:
        """Return the face with the chosen values at the ends that the signs `ends` say."""
        values = self.middle + ends * self.reach
        return _Face(
            self.left.without(chosen, values) if self.left else None,
            self.right.without(chosen, values),
            self.middle[~chosen],
            self.reach[~chosen],
        )


def keep(left: Weighted | None, right: Weighted, box: Box, slack: Real) -> bool:
    """Whether |L| - Re R <= -slack at all corners, for each of Q inequalities; slack is (Q,)."""
    free = box.own_free
    low, high = box.own_low[free], box.own_high[free]
    middle, reach = (low + high) / 2.0, (high - low) / 2.0
    abouts = [_About.of(one.members, middle, reach) if one else None for one in (left, right)]
    for q in range(right.weights.shape[1]):
        columns = [
            one.column(q, about) if one and about else None
            for one, about in zip((left, right), abouts, strict=True)
        ]
        if columns[1] and not _keeps(_Face(columns[0], columns[1], middle, reach), float(slack[q])):
            return False
    return True


def _keeps(whole: _Face, slack: float) -> bool:
    faces = [whole]
    for _ in range(MOST_FACES):
        if not faces:
            return True
        face = faces.pop()
        if len(face.middle) <= LISTED:
            if not _listed(face, slack):
                return False
            continue
        here = _behaviour(face, exact=False)
        if not here.sure.any() and here.highest > -slack:
            here = _behaviour(face, exact=True)
        if here.highest <= -slack:
            continue
        if here.sure.any():
            faces.append(face.frozen(here.sure, np.sign(here.slope)))
        else:
            most = np.arange(len(here.slope)) == np.argmax(np.abs(here.slope))
            faces += [face.frozen(most, np.full(len(most), end)) for end in (-1.0, 1.0)]
    return False


@dataclass(frozen=True, eq=False)
class _Behaviour:
    """What is known of f on a face."""

    slope: Real  # (n,), df/dr in the middle
    sure: NDArray[np.bool_]  # (n,), whether its sign is that on all of the face
    highest: float  # what f is at most


def _behaviour(face: _Face, *, exact: bool) -> _Behaviour:
    """Bound f; with the second order exact, or by the size of its terms, which is quicker."""
    r = _orders(face.right, face, exact)
    if face.left is None:
        slope: Real = np.asarray(-np.real(r.first), float)
        second: Real = np.abs(np.real(r.second))
        highest = np.abs(slope).sum() + second.sum() / 2.0 + r.rest - np.real(r.value)
        return _Behaviour(slope, np.abs(slope) > second.sum(axis=1) + r.beyond, float(highest))
    l = _orders(face.left, face, exact)  # noqa: E741  (the letter of the formula)
    size = abs(l.value)
    turn = np.conj(l.value) / size if size else 1.0
    first, bent = turn * l.first, turn * l.second
    slope = np.asarray(np.real(first) - np.real(r.first), float)
    both: Real = np.abs(np.real(bent - r.second))
    across: Real = np.abs(np.imag(first))
    # L = along + j across, as seen from its value in the middle.
    most_across = across.sum() + np.abs(np.imag(bent)).sum() / 2.0 + l.rest
    least_along = size - np.abs(np.real(first)).sum() - np.abs(np.real(bent)).sum() / 2.0 - l.rest
    highest = size - float(np.real(r.value)) + np.abs(slope).sum() + both.sum() / 2.0
    highest += l.rest + r.rest
    if least_along <= 0.0:
        never = np.zeros(len(slope), dtype=bool)
        return _Behaviour(slope, never, float(highest + most_across))
    # |L| <= along + across^2 / (2 along), and its direction turns by atan(across/along) at most.
    highest += most_across**2 / (2.0 * least_along)
    sine = most_across / float(np.hypot(most_across, least_along))
    sideways = across + np.abs(np.imag(bent)).sum(axis=1) + l.beyond
    lengthwise = np.abs(np.real(first)) + np.abs(np.real(bent)).sum(axis=1) + l.beyond
    turned = sine * sideways + sine**2 * lengthwise
    sure = np.abs(slope) > both.sum(axis=1) + l.beyond + r.beyond + turned
    return _Behaviour(slope, sure, float(highest))


@dataclass(frozen=True, eq=False)
class _Orders:
    """A polynomial about the middle of a face."""

    value: complex
    first: Complex  # (n,), by r_i
    second: Complex  # (n, n), by r_i r_k, 0 on the diagonal; (n, 0) where it is not exact
    beyond: Real  # (n,), what further orders add to a derivative at most
    rest: float  # what they add to the value at most


def _orders(terms: Weighted, face: _Face, exact: bool) -> _Orders:
    about = terms.about or _About.of(terms.members, face.middle, face.reach)
    values = terms.weights * about.worth
    reaches, size, sums = about.reaches, np.abs(values), about.reaches.sum(axis=1)
    # Of all orders but the lowest, for a derivative and for the value; none is negative.
    further, rest = about.growth, np.maximum(about.growth - sums, 0.0)
    second = np.zeros((reaches.shape[1], 0), complex)
    if exact:
        second = reaches.T @ (values[:, None] * reaches)
        np.fill_diagonal(second, 0.0)
        squares = (reaches**2).sum(axis=1)
        further, rest = rest, np.maximum(rest - (sums**2 - squares) / 2.0, 0.0)
    # The factor of the value itself is in `further` too, which does no harm.
    return _Orders(
        complex(values.sum()),
        values @ reaches,
        second,
        (size * further) @ reaches,
        float(size @ rest),
    )


def _listed(face: _Face, slack: float) -> bool:
    """Whether the inequality holds at the corners of a face of few values."""
    count = len(face.middle)
    signs = 2.0 * (np.arange(2**count)[:, None] >> np.arange(count) & 1) - 1.0
    logs = np.log(face.middle + signs * face.reach)
    left, right = face.left, face.right
    top = np.abs(np.exp(logs @ left.members.T) @ left.weights) if left else 0.0
    bottom = np.real(np.exp(logs @ right.members.T) @ right.weights)
    return bool((top - bottom <= -slack).all())
