"""A filter and frequencies -> points of its computed responses."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from filtercheck.errors import UsageError
from filtercheck.model.sample import Sample
from filtercheck.model.subject import Subject
from filtercheck.network.stability import instability
from filtercheck.wiring.wired import responses, wired
from filtercheck.wording import listed


def spaced(low_hz: float, high_hz: float, points: int) -> list[float]:
    """Return frequencies from low to high, evenly spaced in their logarithm."""
    return [float(freq) for freq in np.geomspace(low_hz, high_hz, points)]


def samples(subject: Subject, output: str | None, freq_hz: Sequence[float]) -> Iterator[Sample]:
    """Yield the points of one output, or of all.

    Raises
    ------
    InputErrors
        If the filter's circuit is wrong.
    UsageError
        If there is no such output.
    """
    if output is not None and output not in subject.outputs:
        raise UsageError(f"there is no output {output!r}; write one of {listed(subject.outputs)}")
    reached, _ = responses(subject, wired(subject))
    at = np.array(freq_hz, dtype=float)
    for name, response in reached.items():
        if output in (None, name):
            columns = (response.gain_db(at), response.phase_deg(at), response.group_delay_s(at))
            for row in zip(at, *columns, strict=True):
                yield Sample(name, *(float(value) for value in row))


def stable(subject: Subject) -> bool:
    """Whether the circuit is stable as fitted; a response means nothing when it is not."""
    return instability(responses(subject, wired(subject))[1]) is None
