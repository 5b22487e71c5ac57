"""What a kind of requirement is: a name, a manual, and how it reads and measures."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Protocol

from filtercheck.model.requirement import Requirement
from filtercheck.model.verdict import Finding
from filtercheck.network.curve import Curve
from filtercheck.tolerance.limit import Claim, Pull


class Wanted(Protocol):
    """What one requirement asks for, read and found sound."""

    def findings(self, curve: Curve) -> Iterator[Finding]:
        """Yield how near one board's response comes to each limit, or how far beyond it.

        For every board there are as many findings, in the same order.
        """

    def claims(self, index: int, margin: float) -> Iterator[Claim]:
        """Yield what, if it holds for a board, gives its finding of that number the margin."""

    def pull(self, finding: Finding) -> Pull | None:
        """Return which gains made the margin what it is; None where it is not one of gains."""


@dataclass(frozen=True)
class Kind:
    """One kind; `read` raises InputError where the settings contradict each other."""

    name: str
    manual: str  # the module's docstring; its first lines are what a user would paste
    read: Callable[[Requirement], Wanted]
