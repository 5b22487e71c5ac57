"""The proof for many free values gives what listing all corners gives."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from hypothesis import event, given
from hypothesis import strategies as st

from filtercheck.tolerance import faces
from filtercheck.tolerance.box import Box
from filtercheck.tolerance.faces import Weighted, keep


def corners(left: Weighted, right: Weighted, low: list[float], high: list[float]) -> float:
    """Return the largest |L| - Re R of all corners, by plain arithmetic."""
    found = []
    for corner in product(*zip(low, high, strict=True)):
        worth = [
            np.prod(np.where(of.members > 0, np.array(corner), 1.0), axis=1) for of in (left, right)
        ]
        above, below = (w @ of.weights[:, 0] for w, of in zip(worth, (left, right), strict=True))
        found.append(abs(above) - float(np.real(below)))
    return float(max(found))


@given(st.integers(0, 10_000), st.integers(2, 6), st.sampled_from([0.001, 0.02, 0.1, 0.3]))
def test_the_answer_is_that_of_all_corners(seed: int, count: int, width: float) -> None:
    random = np.random.default_rng(seed)
    low = random.uniform(0.5, 2.0, count)
    high = low * (1 + width)
    left, right = (
        Weighted(
            np.array(random.random((terms, count)) < 0.5, float),
            (random.normal(size=(terms, 1)) + 1j * random.normal(size=(terms, 1))),
        )
        for terms in (4, 6)
    )
    # A constant that leaves a little to spare, or misses by a little.
    right.weights[0], right.members[0] = 0.0, 0.0
    most = corners(left, right, low.tolist(), high.tolist())
    spare = float(random.choice([1e-6, 1e-3, 0.1, -1e-6, -1e-3, -0.1]))
    right.weights[0] = most + spare
    event(f"kept: {spare > 0}")
    box = Box(low, high, (low + high) / 2)

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(faces, "LISTED", 1)
        assert keep(left, right, box, np.zeros(1)) == (spare > 0)
