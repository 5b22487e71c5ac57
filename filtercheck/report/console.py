"""The summary that a person reads, at 80 columns.

One line for each requirement, worst first; then what is wrong in whole sentences, and what
the figures rest on.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from filtercheck.model.part import Passive
from filtercheck.model.verdict import Finding, Judged, Outcome, Run, Verdict
from filtercheck.quantities import rounded
from filtercheck.report import sentences
from filtercheck.wording import visible, wrapped

MOST_SENSITIVE = 4  # parts that are named
VERIFIED = {
    "worst-case": "every combination of values that the tolerances allow, and every frequency; "
    "the value is that of the worst board found, and no board is worse by more than the margin "
    "found exceeds the margin proved",
    "yield": "random boards, each part drawn on its own from its distribution",
    "nominal": "the part values as fitted and no others; tolerances are not considered",
}
HEADINGS = ("verdict", "margin", "closest at", "value", "requirement")
WIDTHS = (9, 11, 10, 11, 35)  # with a space between two columns these are 80


def render(run: Run) -> str:
    """Return the summary."""
    lines = wrapped(_title(run))
    if not run.verdicts:
        return "\n".join(lines) + "\n"
    lines += ["", _row(HEADINGS), *(_line(verdict) for verdict in sentences.worst_first(run))]
    judged = {one.name: one for one in run.filters}
    for verdict in sentences.worst_first(run):
        if verdict.outcome is not Outcome.PASS:
            lines += ["", *_details(verdict, judged[verdict.filter])]
    basis = [*_verified(run), *(line for judged in run.filters for line in _basis(judged))]
    if basis:
        lines += ["", "What this rests on", *basis]
    lines += ["", *wrapped(sentences.CAUTION)]
    return "\n".join(lines) + "\n"


def _title(run: Run) -> str:
    judged = (
        f"{_count(len(run.verdicts), 'requirement')} of {_count(len(run.filters), 'filter')}: "
        f"{sentences.counts(run)}"
    )
    broken = len({fault.at.file for fault in run.faults})
    parts = [judged] if run.verdicts else []
    parts += [f"{_count(broken, 'file')} could not be judged"] if broken else []
    name = f"{visible(run.board)}: " if run.board else ""
    return name + "; ".join(parts or ["nothing to judge"])


def _count(number: int, what: str) -> str:
    return f"{number} {what}{'' if number == 1 else 's'}"


def _row(cells: Iterable[str]) -> str:
    fitted = [_cut(cell, width).ljust(width) for cell, width in zip(cells, WIDTHS, strict=True)]
    return " ".join(fitted).rstrip()


def _cut(text: str, width: int) -> str:
    """Return the text within a width, cut in the middle: both ends of a name tell it apart."""
    if len(text) <= width:
        return text
    ahead = width // 2
    return f"{text[:ahead]}…{text[len(text) - (width - ahead - 1) :]}"


def _line(verdict: Verdict) -> str:
    name = f"{verdict.filter} {verdict.requirement}"
    if not verdict.findings:
        return _row([sentences.outcome(verdict), "-", "-", "-", name])
    finding = verdict.findings[0]
    return _row(
        [
            sentences.outcome(verdict),
            sentences.margin(finding),
            sentences.place(finding),
            sentences.value(finding),
            name,
        ]
    )


def _details(verdict: Verdict, judged: Judged) -> Iterator[str]:
    outcome = sentences.outcome(verdict)
    yield from wrapped(f"{outcome} {verdict.filter} {verdict.requirement}")
    says = [f"{verdict.kind} of {verdict.output}: {sentences.summary(verdict)}"]
    beyond = [sentences.said(one) for one in verdict.findings[1:] if one.reached < 0.0]
    says += [text for text in beyond if text != sentences.summary(verdict)]
    says += sentences.oscillating(verdict)
    for finding in verdict.findings[:1]:
        says += _worst(verdict, finding, judged)
    for text in says:
        yield from wrapped(text, "  ")
    yield from wrapped(f"at {visible(str(verdict.at))}", "  ")


def _worst(verdict: Verdict, finding: Finding, judged: Judged) -> Iterator[str]:
    """Yield the worst board, what its margin depends on most, and how to compute it again."""
    if not finding.worst:
        return
    varied = sentences.varied(finding, judged)
    yield f"worst board: {sentences.board(varied) or 'as fitted'}"
    if finding.sensitivities:
        yield f"margin for 1 % more of: {sentences.sensitive(finding, MOST_SENSITIVE)}"
    yield f"to compute it: {sentences.recomputed(verdict, finding, judged)}"


def _verified(run: Run) -> Iterator[str]:
    """Yield what each way to verify that was used does, and does not, consider."""
    used = {verdict.verify for verdict in run.verdicts}
    for verify, text in VERIFIED.items():
        if verify in used:
            yield from wrapped(f"{verify}: {text}", "  ")


def _basis(judged: Judged) -> Iterator[str]:
    """Yield what is assumed of one filter's parts, wrapped under its name."""
    notes = list(_notes(judged))
    if notes:
        yield from wrapped(f"{judged.name}: {'; '.join(notes)}", "  ")


def _notes(judged: Judged) -> Iterator[str]:
    passives = [part for part in judged.parts if isinstance(part, Passive)]
    for part in passives:
        if part.ideal is not None:
            yield (
                f"{part.designator} ideal {rounded(part.ideal, part.quantity, digits=6)}, "
                f"fitted {rounded(part.value, part.quantity, digits=6)} ({part.series}, "
                f"{_signed(part.value / part.ideal - 1.0)})"
            )
    if any(verdict.verify != "nominal" for verdict in judged.verdicts):
        exact = [part.designator for part in judged.parts if sentences.is_exact(part)]
        if exact:
            yield f"without a tolerance, taken as exact: {', '.join(exact)}"
    changed = [part for part in judged.parts if part.changed]
    yield from (f"{sentences.fitted(part)} by --set, not as in the file" for part in changed)
    free = [part.designator for part in passives if not part.series and not part.changed]
    if free:
        yield f"not checked against any series: {', '.join(free)}"
    ideal = {part.designator: sentences.ideal_figures(part) for part in judged.parts}
    yield from (f"{name} with ideal {what}" for name, what in ideal.items() if what)


def _signed(fraction: float) -> str:
    text = rounded(fraction, "percentage", digits=2)
    return f"+{text}" if fraction > 0.0 else text
