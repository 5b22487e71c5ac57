"""The summary that a person reads, at 80 columns.

One line for each requirement, worst first; then what is wrong in whole sentences, and what
the figures rest on.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from textwrap import wrap

from filtercheck.model.part import Passive
from filtercheck.model.verdict import Judged, Outcome, Run, Verdict
from filtercheck.quantities import rounded
from filtercheck.report import sentences
from filtercheck.wording import visible

WIDTH = 80
HEADINGS = ("verdict", "margin", "closest at", "value", "requirement")
WIDTHS = (9, 10, 10, 10, 37)  # with a space between two columns these are 80


def render(run: Run) -> str:
    """Return the summary."""
    lines = [_title(run), ""]
    if run.verdicts:
        lines += [_row(HEADINGS), *(_line(verdict) for verdict in sentences.worst_first(run))]
    for verdict in sentences.worst_first(run):
        if verdict.outcome is not Outcome.PASS:
            lines += ["", *_details(verdict)]
    basis = [line for judged in run.filters for line in _basis(judged)]
    if basis:
        lines += ["", "What this rests on", *basis]
    lines += ["", *wrap(sentences.CAUTION, WIDTH)]
    return "\n".join(lines) + "\n"


def _title(run: Run) -> str:
    count = len(run.verdicts)
    what = f"{count} requirement{'' if count == 1 else 's'} of {len(run.filters)} filter"
    what += "" if len(run.filters) == 1 else "s"
    name = f"{visible(run.board)}: " if run.board else ""
    return f"{name}{what}: {sentences.counts(run)}"


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


def _details(verdict: Verdict) -> Iterator[str]:
    outcome = sentences.outcome(verdict)
    yield from wrap(f"{outcome} {verdict.filter} {verdict.requirement}", WIDTH)
    says = [f"{verdict.kind} of {verdict.output}: {sentences.summary(verdict)}"]
    says += [sentences.said(one) for one in verdict.findings[1:] if one.reached < 0.0]
    for text in says:
        yield from wrap(text, WIDTH, initial_indent="  ", subsequent_indent="    ")
    yield from wrap(
        f"at {visible(str(verdict.at))}",
        WIDTH,
        initial_indent="  ",
        subsequent_indent="    ",
        break_on_hyphens=False,
    )


def _basis(judged: Judged) -> Iterator[str]:
    """Yield what is assumed of one filter's parts, wrapped under its name."""
    notes = list(_notes(judged))
    if notes:
        yield from wrap(
            f"{judged.name}: {'; '.join(notes)}",
            WIDTH,
            initial_indent="  ",
            subsequent_indent="    ",
        )


def _notes(judged: Judged) -> Iterator[str]:
    if any(verdict.verify == "nominal" for verdict in judged.verdicts):
        yield "nominal, the part values as fitted and no others"
    passives = [part for part in judged.parts if isinstance(part, Passive)]
    for part in passives:
        if part.ideal is not None:
            yield (
                f"{part.designator} ideal {rounded(part.ideal, part.quantity, digits=6)}, "
                f"fitted {rounded(part.value, part.quantity, digits=6)} ({part.series}, "
                f"{_signed(part.value / part.ideal - 1.0)})"
            )
    for part in judged.parts:
        if part.changed:
            yield f"{sentences.fitted(part)} by --set, not as in the file"
    free = [part.designator for part in passives if not part.series and not part.changed]
    if free:
        yield f"not checked against any series: {', '.join(free)}"
    for part in judged.parts:
        if ideal := sentences.ideal_figures(part):
            yield f"{part.designator} with ideal {ideal}"


def _signed(fraction: float) -> str:
    text = rounded(fraction, "percentage", digits=2)
    return f"+{text}" if fraction > 0.0 else text
