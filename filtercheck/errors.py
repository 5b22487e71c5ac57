"""Every exception: each means that something could not be judged.

A requirement that does not hold is no exception but a verdict.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import islice

from filtercheck.position import Position
from filtercheck.wording import visible

MOST = 200  # errors of one file
LONGEST = 160  # characters of a line that are shown; of another text, four times as many


class FiltercheckError(Exception):
    """Something could not be judged."""


class QuantityError(FiltercheckError):
    """A text is no quantity of the kind that is wanted there."""

    def __init__(self, problem: str, *, found: str, allowed: str, fix: str) -> None:
        super().__init__(problem)
        self.problem = problem
        self.found = found
        self.allowed = allowed
        self.fix = fix


class NetworkError(FiltercheckError):
    """A network has no solution, or more than one."""

    def __init__(self, problem: str, *, culprit: str, found: str, allowed: str, fix: str) -> None:
        super().__init__(problem)
        self.problem = problem
        self.culprit = culprit  # the element or the node that causes it
        self.found = found
        self.allowed = allowed
        self.fix = fix


class InputError(FiltercheckError):
    """The files say something that cannot be accepted."""

    def __init__(self, problem: str, at: Position, *, found: str, allowed: str, fix: str) -> None:
        super().__init__(problem)
        self.problem = problem
        self.at = at
        self.found = found
        self.allowed = allowed
        self.fix = fix

    def __reduce__(self) -> tuple[object, ...]:
        """Tell how to make it again in another process."""
        return _again, (self.problem, self.at, self.found, self.allowed, self.fix)

    def __str__(self) -> str:
        """Show the problem under the line that caused it."""
        number = str(self.at.line)
        line, mark = _marked(self.at)
        return "\n".join(
            [
                f"{visible(str(self.at))}: error: {_short(self.problem)}",
                f" {number} | {line}",
                f" {' ' * len(number)} | {mark}",
                f"  found    {_short(self.found)}",
                f"  allowed  {_short(self.allowed)}",
                f"  fix      {_short(self.fix)}",
            ]
        )


def _again(problem: str, at: Position, found: str, allowed: str, fix: str) -> InputError:
    return InputError(problem, at, found=found, allowed=allowed, fix=fix)


def _marked(at: Position) -> tuple[str, str]:
    """Return the part of the line about a place, safe to show, and the mark under it."""
    first = max(0, at.column - 1 - LONGEST // 2)
    part = at.text[first : first + LONGEST]
    before = part[: at.column - 1 - first]
    marked = part[len(before) : len(before) + at.width]
    # A tab stays a tab in both lines, so that the mark stands under what it marks.
    indent = "".join("\t" if c == "\t" else " " * len(visible(c)) for c in before)
    line = "\t".join(visible(piece) for piece in part.split("\t"))
    return line, f"{indent}{'^' * max(1, len(visible(marked)))}"


def _short(text: str) -> str:
    """Return a text safe to show, of bounded length: an untrusted file may hold anything."""
    text = visible(text)
    return text if len(text) <= 4 * LONGEST else f"{text[: 4 * LONGEST]}…"


class InputErrors(FiltercheckError):
    """All that is wrong with the files, in the order of their lines."""

    def __init__(self, errors: Sequence[InputError]) -> None:
        super().__init__(f"{len(errors)} errors")
        self.errors = tuple(sorted(errors, key=_place))

    def __reduce__(self) -> tuple[object, ...]:
        """Tell how to make it again in another process."""
        return InputErrors, (self.errors,)

    def __str__(self) -> str:
        return "\n\n".join(str(error) for error in self.errors)


def _place(error: InputError) -> tuple[str, int, int]:
    return error.at.file, error.at.line, error.at.column


def bounded(errors: Iterable[InputError]) -> list[InputError]:
    """Return the errors, but no more than anyone reads: a stranger's file may hold any number."""
    first = list(islice(errors, MOST))
    if len(first) == MOST:
        first.append(
            InputError(
                f"more errors than {MOST} are not shown",
                max(first, key=_place).at,
                found=f"{MOST} errors up to here",
                allowed="a file that is sound",
                fix="mend these first",
            )
        )
    return first


class UsageError(FiltercheckError):
    """The command's arguments ask for something that cannot be done."""

    def __str__(self) -> str:
        return visible(super().__str__())
