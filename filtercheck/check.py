"""Judge a filter: its parts and requirements -> verdicts."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property

from filtercheck.errors import InputError, InputErrors
from filtercheck.model.requirement import Requirement
from filtercheck.model.subject import Subject
from filtercheck.model.verdict import Finding, Judged, Verdict, decide
from filtercheck.network.curve import Curve
from filtercheck.network.response import Response
from filtercheck.requirements import KINDS
from filtercheck.requirements.kind import Wanted
from filtercheck.verification import standing, worst_case
from filtercheck.verification.sampled import Sampled
from filtercheck.verification.standing import Standing
from filtercheck.wiring.groups import Wiring
from filtercheck.wiring.variation import Variation
from filtercheck.wiring.wired import responses, wired


def judge(subject: Subject) -> Judged:
    """Judge every requirement of one filter.

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
    bench = _Bench(subject, wiring, reached, whole)
    verdicts = (bench.verdict(one, wanted[one.name]) for one in subject.requirements)
    return Judged(
        subject.name,
        subject.title,
        subject.file,
        tuple(subject.parts.values()),
        tuple(verdicts),
    )


def _wanted(subject: Subject) -> tuple[dict[str, Wanted], list[InputError]]:
    wanted, faults = {}, []
    for requirement in subject.requirements:
        try:
            wanted[requirement.name] = KINDS[requirement.kind].read(requirement)
        except InputError as error:
            faults.append(error)
    return wanted, faults


@dataclass(frozen=True, eq=False)
class _Bench:
    """What the requirements of one filter share, worked out when the first one needs it."""

    subject: Subject
    wiring: Wiring
    reached: Mapping[str, Response]
    whole: Response

    def verdict(self, requirement: Requirement, wanted: Wanted) -> Verdict:
        """Judge one requirement. A response means nothing for a circuit that oscillates."""
        stands = self.nominal_standing
        if stands is None and requirement.verify == "worst-case":
            stands = self.box_standing
        findings = () if stands else self._findings(requirement, wanted)
        return Verdict(
            filter=self.subject.name,
            requirement=requirement.name,
            kind=requirement.kind,
            output=requirement.output,
            verify=requirement.verify,
            outcome=stands.outcome if stands else decide(findings),
            findings=tuple(sorted(findings, key=lambda finding: finding.tightness_db)),
            reason=stands.reason if stands else "",
            unstable=stands.board if stands else (),
            at=requirement.at,
        )

    def _findings(self, requirement: Requirement, wanted: Wanted) -> Sequence[Finding]:
        curve = self.curves[requirement.output]
        identity = f"{self.subject.name} {requirement.name}"
        if requirement.verify == "nominal":
            return tuple(wanted.findings(curve))
        if requirement.sampling is not None:
            stable = self.box_standing is None
            return (
                Sampled(
                    wanted,
                    self.variation,
                    requirement.output,
                    curve,
                    requirement.sampling,
                    identity,
                    stable,
                ).finding(),
            )
        return tuple(
            worst_case.findings(wanted, self.variation, requirement.output, curve, identity)
        )

    @cached_property
    def curves(self) -> dict[str, Curve]:
        return {output: Curve(response) for output, response in self.reached.items()}

    @cached_property
    def variation(self) -> Variation:
        return Variation(self.wiring, self.subject.parts)

    @cached_property
    def nominal_standing(self) -> Standing | None:
        return standing.nominal(self.subject, self.whole)

    @cached_property
    def box_standing(self) -> Standing | None:
        return standing.every_board(self.subject, self.variation)
