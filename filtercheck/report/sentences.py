"""What a verdict says, in words that every reporter shares."""

from __future__ import annotations

from collections.abc import Iterable
from math import inf, isfinite, isnan

from filtercheck.model.part import OpAmp, Part, Passive
from filtercheck.model.verdict import Finding, Judged, Outcome, Run, Verdict
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
    number = finding.value - finding.limit if finding.interval else finding.reached
    text = rounded(number, finding.margin_quantity, digits=3)
    return f"+{text}" if number > 0.0 else text


def _share(finding: Finding) -> str:
    low, high = (rounded(end, finding.quantity, digits=5) for end in finding.interval or ())
    required = rounded(finding.limit, finding.quantity, digits=5)
    text = f"{finding.subject} {rounded(finding.value, finding.quantity, digits=5)}, "
    return f"{text}{finding.sense} {required}: it is from {low} to {high} ({visible(finding.note)})"


def proved(finding: Finding) -> str:
    """Return what is proved for every board: 'proved +0.12 dB', or that nothing is."""
    if finding.certain == -inf or isnan(finding.certain):
        return "nothing proved"
    text = rounded(finding.certain, finding.margin_quantity, digits=3)
    return f"proved {'+' if finding.certain > 0.0 else ''}{text}"


def board(parts: Iterable[Part]) -> str:
    """Return the values of a board: 'R1 9.9 kΩ, C2 10.5 nF'."""
    return ", ".join(fitted(part) for part in parts)


def oscillating(verdict: Verdict) -> list[str]:
    """Return the board that oscillates, in a line; nothing where none is the reason."""
    return [f"a board that oscillates: {board(verdict.unstable)}"] if verdict.unstable else []


def varied(finding: Finding, judged: Judged) -> list[Part]:
    """Return the parts of the worst board that are not as fitted."""
    stated = {part.designator: part for part in judged.parts}
    return [part for part in finding.worst if _differs(part, stated[part.designator])]


def _differs(part: Part, stated: Part) -> bool:
    if isinstance(part, Passive) and isinstance(stated, Passive):
        return part.value != stated.value
    return part != stated


def recomputed(verdict: Verdict, finding: Finding, judged: Judged) -> str:
    """Return the command that computes the worst board's response at the closest approach."""
    places = [freq for freq in (finding.freq_hz, finding.reference_hz) if freq is not None]
    settings = [f"--set {one}" for part in varied(finding, judged) for one in _settings(part)]
    at = ",".join(f"{freq:.12g}" for freq in places if isfinite(freq)) or "1k"
    words = [f"filtercheck response {judged.file}", f"--output {verdict.output}", f"--at {at}"]
    return visible(" ".join([*words, *settings]))


def _settings(part: Part) -> list[str]:
    if isinstance(part, Passive):
        return [f"{part.designator}={part.value:.10g}"]
    return [
        f"{part.designator}.{name}={figure.typical:.10g}"
        for name, figure in part.figures.items()
        if figure
    ]


def sensitive(finding: Finding, most: int) -> str:
    """Return the parts that the margin depends on most: 'R3 -0.083 dB, R1 +0.08 dB'."""
    return ", ".join(
        f"{name} {'+' if change > 0.0 else ''}{rounded(change, finding.margin_quantity, digits=2)}"
        for name, change in finding.sensitivities[:most]
    )


def place(finding: Finding) -> str:
    """Return where the approach is closest; '-' where there is no such place."""
    return "-" if finding.freq_hz is None else rounded(finding.freq_hz, "frequency")


def summary(verdict: Verdict) -> str:
    """Return one line that is never empty: what was found, where, and against what."""
    if verdict.reason:
        return visible(verdict.reason)
    if not verdict.findings:
        return "nothing was found to judge"
    return said(verdict.findings[0])


def said(finding: Finding) -> str:
    """Return a finding in one line."""
    if finding.interval:
        return _share(finding)
    if isnan(finding.value):
        return f"no {finding.subject}, {visible(finding.note) or 'for no reason that is known'}"
    where = "" if finding.quantity == "frequency" else f" at {place(finding)}"
    text = f"{finding.subject} {value(finding)}{where}, {finding.sense} "
    text += f"{rounded(finding.limit, finding.quantity)}: margin {margin(finding)}"
    if finding.worst:
        text += f", {proved(finding)}"
    return f"{text} ({visible(finding.note)})" if finding.note else text


def fitted(part: Part) -> str:
    """Return what is fitted: 'R4 21.5 kΩ'."""
    if isinstance(part, Passive):
        return f"{part.designator} {rounded(part.value, part.quantity, digits=6)}"
    figures = {
        "gain-bandwidth": (part.gain_bandwidth, "frequency"),
        "open-loop gain": (part.open_loop_gain, "voltage-gain"),
    }
    said = [
        f"{name} {rounded(figure.typical, quantity)}"
        for name, (figure, quantity) in figures.items()
        if figure
    ]
    return f"{part.designator} {' and '.join(said) or 'ideal'}"


def is_exact(part: Part) -> bool:
    """Whether nothing of a part may vary."""
    if isinstance(part, Passive):
        return part.tolerance is None
    return all(figure.min == figure.max for figure in part.figures.values() if figure)


def ideal_figures(part: Part) -> str:
    """Return what of an amplifier is ideal; empty where nothing is."""
    if not isinstance(part, OpAmp):
        return ""
    stated = {"gain-bandwidth": part.gain_bandwidth, "open-loop gain": part.open_loop_gain}
    return " and ".join(name for name, figure in stated.items() if figure is None)
