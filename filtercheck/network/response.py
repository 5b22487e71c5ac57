"""The response of one board: network functions at one set of part values.

A response is a product of factors N(s)/D(s), one for each group of sections that does not
load the next. The factors are kept apart: the roots of a product of high degree would be
lost to rounding, those of its factors are not.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from math import log

import numpy as np

from filtercheck.network.ratio import Complex, Ratio, Real, horner, log_derivative

DECIBEL_PER_NEPER = 20.0 / log(10.0)


@dataclass(frozen=True, eq=False)
class Response:
    """Output voltage over input voltage of one board, as a product of ratios."""

    factors: tuple[Ratio, ...]

    @property
    def order(self) -> int:
        """Zeros at 0 Hz less poles at 0 Hz."""
        return sum(factor.order for factor in self.factors)

    @property
    def degree(self) -> int:
        """Degree of the numerator less that of the denominator."""
        return self.order + sum(len(f.zeros) - len(f.poles) for f in self.factors)

    @cached_property
    def zeros(self) -> Complex:
        return np.concatenate([np.empty(0, complex), *(f.zeros for f in self.factors)])

    @cached_property
    def poles(self) -> Complex:
        return np.concatenate([np.empty(0, complex), *(f.poles for f in self.factors)])

    def gain_db(self, freq_hz: Real) -> Real:
        """Return the gain; 0 Hz and infinity are allowed.

        Parameters
        ----------
        freq_hz : float array, shape (F,)
            Frequencies, not negative. [Hz]

        Returns
        -------
        float array, shape (F,)
            20 log10 |H|, minus infinity where the response is zero. [dB]
        """
        total = np.zeros(len(freq_hz))
        finite = np.isfinite(freq_hz)
        s = 2j * np.pi * freq_hz[finite]
        with np.errstate(divide="ignore"):
            for factor in self.factors:
                x = s / factor.omega0
                size = (
                    np.abs(horner(factor.numerator, x)),
                    np.abs(horner(factor.denominator, x)),
                )
                total[finite] += 20.0 * (np.log10(size[0]) - np.log10(size[1]))
            if self.order:
                total[finite] += 20.0 * self.order * np.log10(np.abs(s))
            total[finite] -= 20.0 * sum(f.order * np.log10(f.omega0) for f in self.factors)
        total[~finite] = self._gain_db_at_infinity()
        return total

    def _gain_db_at_infinity(self) -> float:
        if any(not factor.numerator.any() for factor in self.factors) or self.degree < 0:
            return -np.inf
        if self.degree > 0:
            return np.inf
        leading = [abs(f.numerator[-1] / f.denominator[-1]) for f in self.factors]
        powers = [
            (f.order + len(f.zeros) - len(f.poles)) * np.log10(f.omega0) for f in self.factors
        ]
        return float(20.0 * (np.log10(leading).sum() - np.sum(powers)))

    def phase_deg(self, freq_hz: Real) -> Real:
        """Return the phase, continuous in frequency whichever frequencies are asked for. [deg]

        At 0 Hz it is the limit from above: 0 or 180 for a response that passes 0 Hz.
        """
        phase = np.zeros(len(freq_hz))
        omega = 2.0 * np.pi * freq_hz
        for factor in self.factors:
            value = horner(factor.numerator, 1j * omega / factor.omega0) / horner(
                factor.denominator, 1j * omega / factor.omega0
            )
            # The roots say which turn it is, the polynomials say exactly where on the turn.
            negative = factor.numerator[0] * factor.denominator[0] < 0
            turn = np.pi * negative + _swept(factor.zeros, omega) - _swept(factor.poles, omega)
            principal = np.angle(value)
            phase += principal + 2.0 * np.pi * np.round((turn - principal) / (2.0 * np.pi))
        return np.asarray(np.degrees(phase + self.order * np.pi / 2.0))

    def group_delay_s(self, freq_hz: Real) -> Real:
        """Return minus the derivative of the phase by the angular frequency. [s]"""
        delay = np.zeros(len(freq_hz))
        for factor in self.factors:
            x = 2j * np.pi * freq_hz / factor.omega0
            slope = log_derivative(factor.numerator, x) - log_derivative(factor.denominator, x)
            delay -= np.real(slope) / factor.omega0
        return delay

    def slope(self, freq_hz: Real) -> Real:
        """Return the derivative of the gain by the logarithm of the frequency. [dB/neper]

        20 dB per decade are 8.686 dB per neper: d 20 log10|H| / d ln f = 8.686 Re(s H'/H).
        """
        total = np.full(freq_hz.shape, float(self.order))
        for factor in self.factors:
            x = 2j * np.pi * freq_hz / factor.omega0
            total += np.real(x * log_derivative(factor.numerator, x))
            total -= np.real(x * log_derivative(factor.denominator, x))
        return np.asarray(total * DECIBEL_PER_NEPER)


def product(responses: Sequence[Response]) -> Response:
    """Return the response of sections in a row, none of which loads the one before."""
    return Response(tuple(factor for response in responses for factor in response.factors))


def _swept(roots: Complex, omega: Real) -> Real:
    """Return the angle that jw - root turns through from 0 to w, summed over the roots."""
    if not len(roots):
        return np.zeros(len(omega))
    # Seen from a root in the right half-plane the axis runs the other way round.
    side = np.where(roots.real > 0, -1.0, 1.0)
    toward = side[:, None] * (1j * omega[None, :] - roots[:, None])
    start = side * -roots
    return np.asarray((np.angle(toward) - np.angle(start)[:, None]).sum(axis=0))
