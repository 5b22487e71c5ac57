"""A board's files -> Run: the only place where reading and computing meet."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from filtercheck import check, inspecting, sampling
from filtercheck.errors import InputError, InputErrors, UsageError
from filtercheck.model.inspection import Inspection
from filtercheck.model.sample import Sample
from filtercheck.model.subject import Subject
from filtercheck.model.verdict import Judged, Run
from filtercheck.reading import changes, discovery
from filtercheck.reading.files import File, content
from filtercheck.reading.filter_file import subject


def judged(paths: Sequence[str], settings: Sequence[str] = (), jobs: int = 1) -> Run:
    """Judge every filter that the paths stand for; what cannot be judged is a fault of the Run.

    Parameters
    ----------
    paths : sequence of str
        Files and folders; none for the board around the current folder.
    settings : sequence of str
        Values to put in the place of those in the files, such as "R4=11k5".
    jobs : int
        In how many processes; the result is the same with any number of them.

    Raises
    ------
    UsageError, InputErrors
        If the paths, the settings or a board file are wrong.
    """
    found = discovery.find(paths)
    faults: list[InputError] = []
    hashes = dict(found.hashes)
    subjects = changes.changed(
        _subjects(found.files, faults, hashes), [changes.change(given) for given in settings]
    )
    filters: list[Judged] = []
    for one in _each(subjects, jobs):
        if isinstance(one, InputErrors):
            faults.extend(one.errors)
        else:
            filters.append(one)
    return Run(found.board, tuple(filters), InputErrors(faults).errors, hashes)


def _each(subjects: Sequence[Subject], jobs: int) -> Iterable[Judged | InputErrors]:
    """Judge filters one by one, or several at a time in processes of their own; in their order."""
    if jobs <= 1 or len(subjects) <= 1:
        return map(_judged, subjects)
    from concurrent.futures import ProcessPoolExecutor
    from multiprocessing import get_context

    # A forked child of a process with threads may hang; a new one costs a start-up.
    with ProcessPoolExecutor(min(jobs, len(subjects)), get_context("spawn")) as workers:
        return list(workers.map(_judged, subjects))


def _judged(one: Subject) -> Judged | InputErrors:
    try:
        return check.judge(one)
    except InputErrors as errors:
        return errors


def _subjects(
    files: Sequence[File], faults: list[InputError], hashes: dict[str, str]
) -> list[Subject]:
    """Read the files and note their hashes; a name that another file has already is a fault."""
    named: dict[str, Subject] = {}
    for file in files:
        try:
            text, hashes[file.name] = content(file)
            one = subject(text, file.name)
        except InputErrors as errors:
            faults.extend(errors.errors)
            continue
        if one.name in named:
            faults.append(
                InputError(
                    f"the filter {one.name!r} is there twice",
                    one.at,
                    found=f"first at {named[one.name].at}",
                    allowed="each filter's name once in a repository",
                    fix="rename one of them",
                )
            )
        else:
            named[one.name] = one
    return list(named.values())


def inspected(path: str, settings: Sequence[str] = ()) -> Inspection:
    """Inspect one filter file.

    Raises
    ------
    UsageError, InputErrors
        If the path, the settings or the file are wrong.
    """
    return inspecting.inspection(_one(path, settings))


def _one(path: str, settings: Sequence[str]) -> Subject:
    found = discovery.find([path])
    if len(found.files) != 1:
        raise UsageError(f"{path}: name one file, not a folder of {len(found.files)}")
    (file,) = found.files
    read = subject(content(file)[0], file.name)
    (one,) = changes.changed([read], [changes.change(given) for given in settings])
    return one


@dataclass(frozen=True)
class Curves:
    """Points of a filter's responses, and whether they mean anything."""

    samples: tuple[Sample, ...]
    stable: bool


def curves(
    path: str, output: str | None, freq_hz: Sequence[float], settings: Sequence[str] = ()
) -> Curves:
    """Compute the responses of one filter file.

    Raises
    ------
    UsageError, InputErrors
        If the path, the settings, the output or the file are wrong.
    """
    one = _one(path, settings)
    return Curves(tuple(sampling.samples(one, output, freq_hz)), sampling.stable(one))
