"""Limits on one number of a response, such as a frequency or a Q."""

from __future__ import annotations

from collections.abc import Iterator
from math import nan

from filtercheck.model.requirement import Band
from filtercheck.model.verdict import Finding


def within(
    limits: Band,
    value: float | None,
    *,
    subject: str,
    quantity: str,
    freq_hz: float | None,
    reference_hz: float | None = None,
    note: str,
) -> Iterator[Finding]:
    """Yield a finding for each of two limits on a number; the margin is a fraction of the limit.

    A number that does not exist (None) is beyond both; one that has no meaning (NaN) is
    neither within nor beyond.
    """
    for sense, limit in zip(("at least", "at most"), limits, strict=True):
        sign = 1.0 if sense == "at least" else -1.0
        margin = float("-inf") if value is None else sign * (value - limit) / limit
        yield Finding(
            subject=subject,
            sense=sense,
            limit=limit,
            value=nan if value is None else value,
            quantity=quantity,
            certain=margin,
            reached=margin,
            margin_quantity="percentage",
            freq_hz=freq_hz,
            reference_hz=reference_hz,
            note=note,
        )
