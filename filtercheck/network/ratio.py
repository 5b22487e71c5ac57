"""One network function at one set of part values: a ratio of two polynomials in s.

Values are scaled to typical ones of the network first, frequency by omega0 and impedance by
a typical resistance, so that the coefficients keep within the range of floating point.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from filtercheck.errors import NetworkError
from filtercheck.network.elements import Symbol
from filtercheck.network.polynomial import Polynomial

Real = NDArray[np.float64]
Complex = NDArray[np.complexfloating[Any, Any]]


@dataclass(frozen=True, eq=False)
class Ratio:
    """N/D in s/omega0, ascending powers, with the powers of s in front split off.

    H(s) = (s/omega0)**order * N(s/omega0) / D(s/omega0). D(0) is not zero, nor is N(0)
    unless H is zero everywhere.
    """

    numerator: Real
    denominator: Real
    order: int
    integrations: int  # poles at 0, whether or not zeros of this numerator hide them
    omega0: float  # [rad/s]

    @staticmethod
    def of(numerator: Real, denominator: Real, omega0: float) -> Ratio:
        """Return the ratio of two polynomials in s/omega0, ascending; the denominator is not 0."""
        lowest = int(np.flatnonzero(numerator)[0]) if numerator.any() else 0
        below = int(np.flatnonzero(denominator)[0])
        return Ratio(
            np.trim_zeros(numerator[lowest:], "b") if numerator.any() else np.zeros(1),
            np.trim_zeros(denominator[below:], "b"),
            lowest - below,
            below,
            omega0,
        )

    @cached_property
    def zeros(self) -> Complex:
        """Zeros other than those at 0. [rad/s]"""
        return _roots(self.numerator) * self.omega0

    @cached_property
    def poles(self) -> Complex:
        """Poles other than those at 0. [rad/s]"""
        return _roots(self.denominator) * self.omega0


def ratio(numerator: Polynomial, denominator: Polynomial, values: Mapping[Symbol, float]) -> Ratio:
    """Return N/D at these part values.

    Parameters
    ----------
    values : mapping
        A value for each symbol: conductance [S], capacitance [F], inductance [H], inverse
        gain [V/V], inverse bandwidth tau = 1/(2 pi GBW) [s].

    Raises
    ------
    NetworkError
        If the equations are singular at these values, for example when positive and
        negative feedback of an ideal amplifier cancel.
    """
    unit = units(values)
    scaled = np.array([values[symbol] / unit[symbol.kind] for symbol in denominator.symbols])
    top = numerator.coefficients(scaled)
    bottom = denominator.coefficients(scaled)
    if not bottom.any():
        raise NetworkError(
            "the network has no solution at these part values",
            culprit=denominator.symbols[0].element,
            found="positive and negative feedback that cancel",
            allowed="part values at which every voltage is determined",
            fix="check the parts that feed the outputs of the amplifiers back",
        )
    return Ratio.of(top, bottom, unit["angular frequency"])


def units(values: Mapping[Symbol, float], omega0: float | None = None) -> dict[str, float]:
    """Return units in which the values of this network are near 1, that of angular frequency
    [rad/s] being `omega0` where it is given."""

    def typical(kind: str) -> float | None:
        logs = [np.log(value) for symbol, value in values.items() if symbol.kind == kind]
        return float(np.exp(np.mean(logs))) if logs else None

    siemens, farad, henry, tau = map(
        typical, ("conductance", "capacitance", "inductance", "inverse bandwidth")
    )
    if siemens is None:
        siemens = np.sqrt(farad / henry) if farad and henry else 1.0
    if omega0 is None:
        if farad:
            omega0 = siemens / farad
        elif henry:
            omega0 = 1.0 / (siemens * henry)
        else:
            omega0 = 1.0 / tau if tau else 1.0
    return {
        "conductance": siemens,
        "capacitance": siemens / omega0,
        "inductance": 1.0 / (siemens * omega0),
        "inverse gain": 1.0,
        "inverse bandwidth": 1.0 / omega0,
        "angular frequency": omega0,
    }


def horner(coefficients: Real, x: Complex) -> Complex:
    value = np.full(x.shape, complex(coefficients[-1]))
    for coefficient in coefficients[-2::-1]:
        value = value * x + coefficient
    return value


def log_derivative(coefficients: Real, x: Complex) -> Complex:
    """Return P'(x)/P(x)."""
    if len(coefficients) == 1:
        return np.zeros(x.shape, complex)
    derivative = coefficients[1:] * np.arange(1, len(coefficients))
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(horner(derivative, x) / horner(coefficients, x))


def _roots(coefficients: Real) -> Complex:
    """Return the roots; each is as right as the coefficients' own roundings allow.

    The coefficients are first scaled so that the first and the last are alike. The eigenvalues
    of the companion matrix are right to a rounding of the largest; where roots lie many decades
    apart that is not enough for the small ones, hence the steps of Newton's method.
    """
    degree = len(coefficients) - 1
    if degree < 1:
        return np.empty(0, complex)
    scale = abs(coefficients[0] / coefficients[-1]) ** (1.0 / degree)
    balanced = coefficients * scale ** np.arange(degree + 1)
    roots = np.roots(balanced[::-1]).astype(complex)
    for _ in range(3):
        with np.errstate(divide="ignore", invalid="ignore"):
            step = 1.0 / log_derivative(balanced, roots)
        # A longer step would not be a correction: the root is a multiple one.
        roots -= np.where(np.abs(step) < 1e-3 * np.abs(roots), step, 0.0)
    return np.asarray(roots * scale)
