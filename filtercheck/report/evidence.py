"""Evidence: everything a run found, as JSON with a schema of its own.

Figures are rounded to nine significant digits, well beyond what parts or meters know, so
that equal inputs give equal bytes whatever the versions of the libraries underneath.
"""

from __future__ import annotations

import json
from collections.abc import Iterable
from math import isfinite, isnan

from filtercheck import __version__
from filtercheck.errors import InputError
from filtercheck.model.part import Figure, Part, Passive, Spread
from filtercheck.model.verdict import Finding, Judged, Run, Verdict
from filtercheck.quantities import QUANTITIES
from filtercheck.report import sentences
from filtercheck.wording import visible

FORMAT = "filtercheck-evidence/1"

Json = dict[str, "Json"] | list["Json"] | str | float | int | bool | None


def render(run: Run) -> str:
    """Return the document; equal runs give equal bytes."""
    document: Json = {
        "format": FORMAT,
        "tool": {"name": "filtercheck", "version": __version__},
        "board": run.board or None,
        "caution": sentences.CAUTION,
        "complete": not run.faults,
        "inputs": dict(run.hashes),
        "filters": [_filter(judged) for judged in run.filters],
        "faults": [_fault(fault) for fault in run.faults],
    }
    return json.dumps(document, indent=2, ensure_ascii=True, allow_nan=False) + "\n"


def _filter(judged: Judged) -> Json:
    return {
        "filter": judged.name,
        "title": judged.title,
        "file": judged.file,
        "parts": {part.designator: _part(part) for part in judged.parts},
        "requirements": {v.requirement: _requirement(v) for v in judged.verdicts},
    }


def _part(part: Part) -> Json:
    if isinstance(part, Passive):
        return {
            part.quantity: _number(part.value),
            "unit": sentences.UNITS[part.quantity],
            "ideal": None if part.ideal is None else _number(part.ideal),
            "series": part.series,
            "tolerance": _spread(part.tolerance),
            "network": part.network,
            "track": None if part.track is None else _number(part.track),
            "distribution": part.distribution,
            "changed": part.changed,
        }
    return {
        "amplifier": {name: _figure(figure) for name, figure in part.figures.items()},
        "unit": "gain_bandwidth in Hz, open_loop_gain in V/V",
        "distribution": part.distribution,
        "changed": part.changed,
    }


def _spread(tolerance: Spread | None) -> Json:
    return None if tolerance is None else [_number(tolerance.below), _number(tolerance.above)]


def _figure(figure: Figure | None) -> Json:
    if figure is None:
        return "ideal"
    return {name: _number(getattr(figure, name)) for name in ("min", "typical", "max")}


def _requirement(verdict: Verdict) -> Json:
    return {
        "kind": verdict.kind,
        "output": verdict.output,
        "verify": verdict.verify,
        "verdict": verdict.outcome.value,
        "summary": sentences.summary(verdict),
        "line": verdict.at.line,
        "findings": [_finding(finding) for finding in verdict.findings],
        "unstable_board": _board(verdict.unstable),
    }


def _finding(finding: Finding) -> Json:
    return {
        "quantity": finding.subject,
        "sense": finding.sense,
        "limit": _number(finding.limit),
        "value": _number(finding.value),
        "unit": QUANTITIES[finding.quantity].unit,
        "margin": _number(finding.reached),
        "margin_proved": _number(finding.certain),
        "margin_unit": "dB" if finding.margin_quantity == "level" else "fraction of the limit",
        "frequency_hz": None if finding.freq_hz is None else _number(finding.freq_hz),
        "reference_hz": None if finding.reference_hz is None else _number(finding.reference_hz),
        "note": finding.note,
        "interval": None if finding.interval is None else [_number(n) for n in finding.interval],
        "worst_board": _board(finding.worst),
        "margin_per_percent": {name: _number(change) for name, change in finding.sensitivities},
    }


def _board(parts: Iterable[Part]) -> Json:
    """Return the values of a board, passives by designator, amplifiers by figure."""
    values: dict[str, Json] = {}
    for part in parts:
        if isinstance(part, Passive):
            values[part.designator] = part.value
            continue
        for name, figure in part.figures.items():
            values[f"{part.designator}.{name}"] = figure.typical if figure else "ideal"
    return values or None


def _fault(fault: InputError) -> Json:
    return {
        "file": fault.at.file,
        "line": fault.at.line,
        "column": fault.at.column,
        "problem": visible(fault.problem),
        "found": visible(fault.found),
        "allowed": visible(fault.allowed),
        "fix": visible(fault.fix),
    }


def _number(value: float) -> Json:
    """Return a number for JSON, which knows neither infinity nor the lack of a number."""
    if isfinite(value):
        return float(f"{value:.9g}")
    if isnan(value):
        return "none"
    return "infinity" if value > 0 else "-infinity"
