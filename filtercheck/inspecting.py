"""A filter -> its poles, zeros, and what takes up the margins of its requirements."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from filtercheck import check
from filtercheck.model.inspection import Budget, Inspection
from filtercheck.model.subject import Subject
from filtercheck.model.verdict import Finding, Judged
from filtercheck.verification import roots
from filtercheck.wiring.limits import stated
from filtercheck.wiring.variation import Variation
from filtercheck.wiring.wired import wired


def inspection(subject: Subject) -> Inspection:
    """Return what there is to know of one filter.

    Raises
    ------
    InputErrors
        All that makes the file impossible to judge.
    """
    variation = Variation(wired(subject), subject.parts)
    zeros = tuple(
        (output, tuple(roots.found(variation, variation.chain(output), "numerators")))
        for output in subject.outputs
    )
    return Inspection(
        subject.name,
        subject.title,
        tuple(roots.found(variation, variation.whole, "denominators")),
        zeros,
        tuple(_budgets(subject, variation)),
    )


def _budgets(subject: Subject, variation: Variation) -> Iterator[Budget]:
    """Yield what takes up the margin of each limit, whatever way it is verified."""
    widths = dict(_widths(variation))
    nominal, worst = (_judged(subject, verify) for verify in ("nominal", "worst-case"))
    for fitted, every in zip(nominal.verdicts, worst.verdicts, strict=True):
        known = {(one.subject, one.sense): one for one in fitted.findings}
        for finding in every.findings:
            yield _budget(every.requirement, known[finding.subject, finding.sense], finding, widths)


def _judged(subject: Subject, verify: str) -> Judged:
    requirements = tuple(replace(one, verify=verify, sampling=None) for one in subject.requirements)
    return check.judge(replace(subject, requirements=requirements))


def _budget(
    requirement: str, fitted: Finding, finding: Finding, widths: dict[str, float]
) -> Budget:
    """A part takes what its margin changes per cent of it, times the per cent of its tolerance
    to the side that is worse."""
    shares = [(name, -abs(change) * widths[name]) for name, change in finding.sensitivities]
    return Budget(
        requirement,
        f"{finding.subject} {finding.sense}",
        fitted.reached,
        finding.reached,
        finding.margin_quantity,
        tuple(sorted(shares, key=lambda pair: (pair[1], pair[0]))),
    )


def _widths(variation: Variation) -> Iterator[tuple[str, float]]:
    """Yield half the width of the range of each value, in per cent."""
    for of in variation.slots:
        for slot in of:
            within = stated(slot.part, slot.symbol.kind)
            yield slot.name, 50.0 * (within.max - within.min) / within.typical
