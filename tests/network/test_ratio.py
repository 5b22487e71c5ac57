"""The roots of polynomials whose roots lie many decades apart."""

from __future__ import annotations

import random

import mpmath
import numpy as np
import pytest

from filtercheck.network.ratio import Ratio


@pytest.mark.parametrize("seed", range(60))
def test_roots_are_as_right_as_the_coefficients(seed: int) -> None:
    """A root r moves by sum |c_k r^k| / |r P'(r)| times what the coefficients move by."""
    rng = random.Random(seed)
    eps = float(np.finfo(float).eps)
    with mpmath.workdps(60):
        roots: list[mpmath.mpc] = []
        for _ in range(rng.randint(1, 4)):
            size, q = mpmath.mpf(10) ** rng.uniform(-7, 7), mpmath.mpf(10) ** rng.uniform(-0.25, 4)
            pair = mpmath.mpc(-size / (2 * q), size * mpmath.sqrt(1 - 1 / (4 * q * q)))
            roots += [pair, mpmath.conj(pair), mpmath.mpc(-(mpmath.mpf(10) ** rng.uniform(-7, 7)))]
        whole = [mpmath.mpf(1)]
        for root in roots:
            whole = [
                (whole[k - 1] if k else 0) - (root * whole[k] if k < len(whole) else 0)
                for k in range(len(whole) + 1)
            ]
        coefficients = np.array([float(mpmath.re(c)) for c in whole])
        found = Ratio(np.ones(1), coefficients, 0, 0, 1.0).poles
        for root in roots:
            slope = sum(k * c * root**k for k, c in enumerate(whole))
            condition = sum(abs(c) * abs(root) ** k for k, c in enumerate(whole)) / abs(slope)
            error = min(abs(mpmath.mpc(complex(z)) / root - 1) for z in found)
            assert error <= 4 * eps * condition
