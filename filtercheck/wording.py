"""Text from files under check, made safe to show.

A pull request may hold any characters at all. Those that would move a cursor, hide text or
turn the reading direction are shown by their code instead, so that what a terminal, a log
or a report shows is what the file says.
"""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable
from difflib import get_close_matches
from itertools import islice
from textwrap import wrap

WIDTH = 80  # columns of a terminal
MOST_LISTED = 40  # words of a list

# Control, format (bidirectional marks are among these), surrogate, private and unassigned
# characters, and the two separators that some readers take for a line end.
_HIDDEN = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})


def visible(text: str) -> str:
    """Return `text` on one line, with every character that cannot be seen as its code."""
    if text.isascii() and text.isprintable():
        return text
    return "".join(_code(c) if unicodedata.category(c) in _HIDDEN else c for c in text)


def _code(character: str) -> str:
    number = ord(character)
    if number < 0x100:
        return f"\\x{number:02x}"
    return f"\\u{number:04x}" if number < 0x10000 else f"\\U{number:08x}"


def wrapped(text: str, indent: str = "") -> list[str]:
    """Return the text in lines of at most `WIDTH`; those after the first a little deeper."""
    return wrap(
        text,
        WIDTH,
        initial_indent=indent,
        subsequent_indent=f"{indent}    " if indent else "",
        break_on_hyphens=False,
    )


def suggestion(word: str, allowed: Iterable[str]) -> str | None:
    """Return the allowed word that `word` was probably meant to be, if any is near."""
    # Comparing takes time; nobody means one of the last of a thousand words.
    near = get_close_matches(word, islice(allowed, 1000), n=1)
    return near[0] if near else None


def listed(words: Iterable[str]) -> str:
    """Return the words as a list that can be read: 'a, b and c'."""
    *first, last = list(words) or ["nothing"]
    if len(first) >= MOST_LISTED:
        return f"{', '.join(first[:MOST_LISTED])} and {len(first) + 1 - MOST_LISTED} more"
    return f"{', '.join(first)} and {last}" if first else last
