"""Points of responses as CSV (RFC 4180), for plots and spreadsheets."""

from __future__ import annotations

import csv
from collections.abc import Iterable
from io import StringIO

from filtercheck.model.sample import Sample

COLUMNS = ("output", "frequency_hz", "gain_db", "phase_deg", "group_delay_s")


def render(samples: Iterable[Sample]) -> str:
    """Return a header and one row for each point, figures with twelve digits."""
    text = StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(COLUMNS)
    for one in samples:
        figures = (one.freq_hz, one.gain_db, one.phase_deg, one.group_delay_s)
        writer.writerow([one.output, *(f"{figure + 0.0:.12g}" for figure in figures)])
    return text.getvalue()
