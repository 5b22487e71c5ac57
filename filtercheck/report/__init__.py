"""Run -> text: one module for each output, and the table REPORTERS."""

from __future__ import annotations

from collections.abc import Callable

from filtercheck.model.verdict import Run
from filtercheck.report import console, evidence, junit

# What a pipeline asks for by option, `--junit FILE`; the console's text needs no option.
REPORTERS: dict[str, Callable[[Run], str]] = {
    "junit": junit.render,
    "evidence": evidence.render,
}

__all__ = ["REPORTERS", "console"]
