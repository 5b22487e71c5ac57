"""What a verdict says, in words that every reporter shares."""

from __future__ import annotations

from math import inf, isnan

from filtercheck.model.part import Figure, OpAmp, Part, Passive
from filtercheck.model.verdict import Finding, Outcome, Run, Verdict
from filtercheck.quantities import rounded
from filtercheck.wording import visible

CAUTION = (
    "A computed check is no certificate. Where a filter protects people or property, "
    "local codes and licensed practice decide."
)
ORDER = (Outcome.FAIL, Outcome.UNDECIDED, Outcome.PASS)
UNITS = {"resistance": "ohm", "capacitance": "F", "inductance": "H"}


def worst_first(run: Run) -> list[Verdict]:
    """Return all verdicts: fails, undecided, passes, each with the tightest margin first."""
    return sorted(run.verdicts, key=_tightness)


def _tightness(verdict: Verdict) -> tuple[int, float, str, str]:
    margin = verdict.findings[0].tightness_db if verdict.findings else -inf
    place = (verdict.filter, verdict.requirement)
    return (ORDER.index(verdict.outcome), -inf if isnan(margin) else margin, *place)


def outcome(verdict: Verdict) -> str:
    """Return the outcome as a word; a pass in small letters, so that the others stand out."""
    return "pass" if verdict.outcome is Outcome.PASS else verdict.outcome.value.upper()


def counts(run: Run) -> str:
    """Return how many requirements stand how: '3 fail, 1 undecided, 10 pass'."""
    outcomes = [verdict.outcome for verdict in run.verdicts]
    return ", ".join(f"{outcomes.count(one)} {one.value}" for one in ORDER if one in outcomes)


def limit(finding: Finding) -> str:
    """Return a limit: 'gain at least -0.5 dB'."""
    return f"{finding.subject} {finding.sense} {rounded(finding.limit, finding.quantity)}"


def value(finding: Finding) -> str:
    """Return the value found; there may be none, as where a response has no corner."""
    return "none" if isnan(finding.value) else rounded(finding.value, finding.quantity)


def margin(finding: Finding) -> str:
    """Return the margin with its sign: '-0.123 dB', '+2.1 %'."""
    text = rounded(finding.reached, finding.margin_quantity, digits=3)
    return f"+{text}" if finding.reached > 0.0 else text


def place(finding: Finding) -> str:
    """Return where the approach is closest."""
    return "nowhere" if finding.freq_hz is None else rounded(finding.freq_hz, "frequency")


def summary(verdict: Verdict) -> str:
    """Return one line that is never empty: what was found, where, and against what."""
    if verdict.reason:
        return visible(verdict.reason)
    if not verdict.findings:
        return "nothing was found to judge"
    return said(verdict.findings[0])


def said(finding: Finding) -> str:
    """Return a finding in one line."""
    if isnan(finding.value):
        return f"no {finding.subject}, {visible(finding.note) or 'for no reason that is known'}"
    where = "" if finding.quantity == "frequency" else f" at {place(finding)}"
    text = f"{finding.subject} {value(finding)}{where}, {finding.sense} "
    text += f"{rounded(finding.limit, finding.quantity)}: margin {margin(finding)}"
    return f"{text} ({visible(finding.note)})" if finding.note else text


def fitted(part: Part) -> str:
    """Return what is fitted: 'R4 21.5 kΩ'."""
    if isinstance(part, Passive):
        return f"{part.designator} {rounded(part.value, part.quantity, digits=6)}"
    return (
        f"{part.designator} gain-bandwidth {_figure(part.gain_bandwidth, 'frequency')}, "
        f"open-loop gain {_figure(part.open_loop_gain, 'voltage-gain')}"
    )


def _figure(figure: Figure | None, quantity: str) -> str:
    return rounded(figure.typical, quantity) if figure else "ideal"


def ideal_figures(part: Part) -> str:
    """Return what of an amplifier is ideal; empty where nothing is."""
    if not isinstance(part, OpAmp):
        return ""
    stated = {"gain-bandwidth": part.gain_bandwidth, "open-loop gain": part.open_loop_gain}
    return " and ".join(name for name, figure in stated.items() if figure is None)
