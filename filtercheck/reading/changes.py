"""`--set R4=11k5` -> a filter with another value fitted, to ask what would be."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

from filtercheck.errors import QuantityError, UsageError
from filtercheck.model.part import Figure, OpAmp, Part, Passive
from filtercheck.model.reach import within_reach
from filtercheck.model.subject import Subject
from filtercheck.quantities import parse
from filtercheck.wording import listed, suggestion

# The figures of an amplifier that can be set, and their quantities.
FIGURES = {"gain_bandwidth": "frequency", "open_loop_gain": "voltage-gain"}


@dataclass(frozen=True)
class Change:
    """One `--set`: a part, its figure if it is an amplifier, and the new value's text."""

    given: str
    filter: str | None
    designator: str
    figure: str | None
    text: str


def change(given: str) -> Change:
    """Read `[FILTER:]DESIGNATOR[.FIGURE]=VALUE`.

    Raises
    ------
    UsageError
        If it is not of that form.
    """
    target, sign, text = given.partition("=")
    scope, colon, part = target.strip().rpartition(":")
    designator, dot, figure = part.partition(".")
    if not (sign and designator and text.strip()):
        raise UsageError(f"--set {given}: write --set R4=11k5, or --set U1.gain_bandwidth=5MHz")
    return Change(given, scope if colon else None, designator, figure if dot else None, text)


def changed(subjects: Sequence[Subject], changes: Sequence[Change]) -> list[Subject]:
    """Return the filters with every change made.

    Raises
    ------
    UsageError
        If a change fits no part, parts of several filters, or is no such value.
    """
    result = {subject.name: subject for subject in subjects}
    for one in changes:
        fitting = [
            subject
            for subject in result.values()
            if one.designator in subject.parts and one.filter in (None, subject.name)
        ]
        if len(fitting) != 1:
            raise UsageError(f"--set {one.given}: {_not_one(one, fitting, subjects)}")
        subject = fitting[0]
        part = _set(subject.parts[one.designator], one)
        result[subject.name] = replace(subject, parts={**subject.parts, one.designator: part})
    return list(result.values())


def _not_one(one: Change, fitting: Sequence[Subject], subjects: Sequence[Subject]) -> str:
    if fitting:
        names = listed(subject.name for subject in fitting)
        return f"{one.designator} is a part of {names}; write FILTER:{one.designator}=…"
    known = {part for subject in subjects for part in subject.parts}
    meant = suggestion(one.designator, sorted(known))
    where = f" in {one.filter}" if one.filter else ""
    hint = f"; is {meant} meant?" if meant and meant != one.designator else ""
    return f"there is no part {one.designator}{where}{hint}"


def _set(part: Part, one: Change) -> Part:
    if isinstance(part, Passive):
        if one.figure is not None:
            raise UsageError(f"--set {one.given}: {one.designator} has one value and no figures")
        value = _positive(one, part.quantity)
        return replace(part, value=value, ideal=None, series=None, changed=True)
    return _set_figure(part, one)


def _set_figure(part: OpAmp, one: Change) -> OpAmp:
    if one.figure not in FIGURES:
        raise UsageError(
            f"--set {one.given}: {one.designator} is an amplifier; "
            f"write {one.designator}.gain_bandwidth=… or {one.designator}.open_loop_gain=…"
        )
    figure = None
    if one.text.strip() != "ideal":
        value = _positive(one, FIGURES[one.figure])
        figure = Figure(value, value, value)
    settings: Mapping[str, Figure | None] = {one.figure: figure}
    gain_bandwidth = settings.get("gain_bandwidth", part.gain_bandwidth)
    open_loop_gain = settings.get("open_loop_gain", part.open_loop_gain)
    return replace(part, gain_bandwidth=gain_bandwidth, open_loop_gain=open_loop_gain, changed=True)


def _positive(one: Change, quantity: str) -> float:
    try:
        value = parse(one.text.strip(), quantity)
    except QuantityError as error:
        raise UsageError(f"--set {one.given}: {error.problem}; {error.fix}") from error
    if value <= 0.0 or not within_reach(value):
        raise UsageError(f"--set {one.given}: the value is not positive, or out of all range")
    return value
