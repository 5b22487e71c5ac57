"""Judge a filter: its parts and requirements -> verdicts."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from filtercheck.errors import InputError, InputErrors
from filtercheck.model.part import Figure, OpAmp
from filtercheck.model.requirement import Requirement
from filtercheck.model.subject import Subject
from filtercheck.model.verdict import Judged, Outcome, Verdict, decide
from filtercheck.network.curve import Curve
from filtercheck.network.response import Response
from filtercheck.network.stability import instability
from filtercheck.quantities import rounded
from filtercheck.requirements import KINDS
from filtercheck.requirements.kind import Wanted
from filtercheck.wiring.wired import responses, wired

FAST = Figure(1e12, 1e12, 1e12)  # a gain-bandwidth far above that of any part [Hz]


def judge(subject: Subject) -> Judged:
    """Judge every requirement of one filter with the parts as fitted.

    Raises
    ------
    InputErrors
        All that makes the file impossible to judge.
    """
    wanted, faults = _wanted(subject)
    try:
        wiring = wired(subject)
    except InputErrors as errors:
        raise InputErrors([*faults, *errors.errors]) from errors
    if faults:
        raise InputErrors(faults)
    reached, whole = responses(subject, wiring)
    standing = _standing(whole) or _standing(_whole_with_real(subject))
    curves = {output: Curve(response) for output, response in reached.items()}
    verdicts = (
        _verdict(subject, requirement, wanted[requirement.name], curves, standing)
        for requirement in subject.requirements
    )
    return Judged(
        subject.name,
        subject.title,
        subject.file,
        tuple(subject.parts.values()),
        tuple(verdicts),
    )


def _whole_with_real(subject: Subject) -> Response:
    """Return the response through the whole with op-amps that are fast, but not infinitely so.

    The equations of an ideal op-amp cannot tell its inputs apart: exchanged by mistake, they
    give the same response, and only a finite bandwidth shows that the loop runs away.
    """
    real = {
        name: replace(part, gain_bandwidth=FAST)
        if isinstance(part, OpAmp) and part.gain_bandwidth is None
        else part
        for name, part in subject.parts.items()
    }
    fast = replace(subject, parts=real)
    return responses(fast, wired(fast))[1]


def _wanted(subject: Subject) -> tuple[dict[str, Wanted], list[InputError]]:
    wanted, faults = {}, []
    for requirement in subject.requirements:
        try:
            wanted[requirement.name] = KINDS[requirement.kind].read(requirement)
        except InputError as error:
            faults.append(error)
    return wanted, faults


def _verdict(
    subject: Subject,
    requirement: Requirement,
    wanted: Wanted,
    curves: Mapping[str, Curve],
    standing: tuple[Outcome, str] | None,
) -> Verdict:
    """Judge one requirement. A response means nothing for a circuit that oscillates."""
    findings = () if standing else tuple(wanted.findings(curves[requirement.output]))
    outcome, reason = standing or (decide(findings), "")
    return Verdict(
        subject.name,
        requirement.name,
        requirement.kind,
        requirement.output,
        requirement.verify,
        outcome,
        tuple(sorted(findings, key=lambda finding: finding.tightness_db)),
        reason,
        requirement.at,
    )


def _standing(whole: Response) -> tuple[Outcome, str] | None:
    """Return the outcome and the reason when the circuit is not shown stable, else None."""
    found = instability(whole)
    if found is None:
        return None
    pole = f"a pole at {rounded(found.freq_hz, 'frequency')}"
    if found.certain:
        return Outcome.FAIL, f"unstable: {pole} lies in the right half-plane"
    return (
        Outcome.UNDECIDED,
        f"not shown stable: {pole} lies on the imaginary axis, or too near",
    )
