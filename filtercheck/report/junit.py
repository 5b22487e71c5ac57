"""JUnit XML, for CI dashboards.

One test case for each requirement, whatever its outcome, so that a requirement that quietly
disappears from its file disappears from the dashboard's count as well. A fail becomes
<failure>, an undecided one <error>; neither is ever skipped. A file that cannot be judged is
an <error> of the suite "files".
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from xml.etree import ElementTree as ET

from junit_xml import TestCase, TestSuite

from filtercheck.errors import InputError
from filtercheck.model.verdict import Judged, Outcome, Run, Verdict
from filtercheck.report import sentences
from filtercheck.wording import visible


def render(run: Run) -> str:
    """Return the whole document; equal runs give equal bytes."""
    suites = [TestSuite(one.name, [_case(v, one) for v in one.verdicts]) for one in run.filters]
    if run.faults:
        suites.append(TestSuite("files", _faults(run.faults)))
    root = ET.Element("testsuites")
    for suite in suites:
        root.append(_plain(suite.build_xml_doc(encoding="utf-8")))
    for count in ("tests", "failures", "errors"):
        root.set(count, str(sum(int(suite.get(count, "0")) for suite in root)))
    ET.indent(root)
    body = ET.tostring(root, encoding="unicode")
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{body}\n'


def _plain(suite: ET.Element) -> ET.Element:
    """Take away what the schemas in use do not know, and what depends on the clock."""
    for element in suite.iter():
        for name in ("disabled", "time", "timestamp"):
            element.attrib.pop(name, None)
    return suite


def _case(verdict: Verdict, judged: Judged) -> TestCase:
    case = TestCase(verdict.requirement, classname=f"{verdict.filter}.{verdict.kind}")
    summary = sentences.summary(verdict)
    details = "\n".join(
        [
            f"{verdict.filter} {verdict.requirement}: {verdict.kind} of {verdict.output}",
            *([] if verdict.findings else [summary]),
            *(sentences.said(finding) for finding in verdict.findings),
            *_boards(verdict, judged),
            f"verified: {verdict.verify}",
            visible(str(verdict.at)),
        ]
    )
    # junit_xml drops a failure whose texts are both empty, and the case then reads as passed;
    # a summary is never empty.
    if verdict.outcome is Outcome.FAIL:
        case.add_failure_info(summary, details)
    elif verdict.outcome is Outcome.UNDECIDED:
        case.add_error_info(summary, details)
    return case


def _boards(verdict: Verdict, judged: Judged) -> Iterator[str]:
    """Yield the boards that explain a verdict."""
    yield from sentences.oscillating(verdict)
    for finding in verdict.findings[:1]:
        if finding.worst:
            yield f"worst board: {sentences.board(finding.worst)}"
            yield f"to compute it: {sentences.recomputed(verdict, finding, judged)}"


def _faults(faults: Iterable[InputError]) -> list[TestCase]:
    """Return one case for each file at fault, with all its errors."""
    by_file: dict[str, list[InputError]] = {}
    for fault in faults:
        by_file.setdefault(fault.at.file, []).append(fault)
    cases = []
    for file, errors in by_file.items():
        case = TestCase(visible(file), classname="files")
        case.add_error_info(visible(errors[0].problem), "\n\n".join(map(str, errors)))
        cases.append(case)
    return cases
