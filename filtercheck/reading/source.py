"""YAML -> data with positions; every scalar stays the text it was.

YAML 1.1 would read `12:30` as 750, `010` as 8 and `no` as False; here `quantities` decides
what a number is. The file is untrusted: no tags, no anchors or aliases (an alias can point
at its own parent, or grow without bound), no merge keys, bounded size and depth.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Union

import yaml

from filtercheck.errors import InputError, InputErrors
from filtercheck.position import Position

LARGEST = 1_000_000  # bytes
DEEPEST = 64

Data = Union[str, list["Data"], dict[str, "Data"]]  # noqa: UP007  (strings inside)
Path = tuple[str | int, ...]

# The parser built on libyaml is several times as fast, with the same marks.
_LOADER = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


# What YAML 1.1 takes for the end of a line, and the characters that it forbids.
LINE_END = re.compile("\r\n|[\n\r\x85\u2028\u2029]")
_FORBIDDEN = re.compile(
    "[^\t\n\r\x20-\x7e\x85\xa0-\ud7ff\ue000-\ufefe\uff00-\ufffd\U00010000-\U0010ffff]"
)


@dataclass(frozen=True)
class Source:
    """A file's data, and where each value and each key of it stands."""

    file: str
    data: Data
    values: dict[Path, Position]
    keys: dict[Path, Position]

    def at(self, *path: str | int) -> Position:
        """Return where the key that leads to a value stands, or a list's item itself."""
        return self.keys.get(path) or self.values[path]


def read(text: str, file: str) -> Source:
    """Read a file's text.

    Raises
    ------
    InputErrors
        If the text is no YAML, or uses what is refused here.
    """
    reader = _Reader(text, file)
    if forbidden := _FORBIDDEN.search(text):
        raise InputErrors([_unreadable(text, file, forbidden.start())])
    try:
        data = reader.document()
    except yaml.MarkedYAMLError as error:
        raise InputErrors([*reader.errors, reader.syntax(error)]) from error
    if reader.errors:
        raise InputErrors(reader.errors)
    return Source(file, data, reader.values, reader.keys)


def _unreadable(text: str, file: str, at: int) -> InputError:
    before = LINE_END.split(text[:at])
    line = LINE_END.split(text)[len(before) - 1]
    return InputError(
        "a character is not allowed in YAML",
        Position(file, len(before), len(before[-1]) + 1, 1, line),
        found=text[at],
        allowed="text, tabs and line ends",
        fix="delete the character",
    )


class _Reader:
    """Builds the data from the parser's events, one pass, so that nothing is built of what
    is refused."""

    def __init__(self, text: str, file: str) -> None:
        self.file = file
        self.lines = LINE_END.split(text)
        self.events: Iterator[yaml.Event] = yaml.parse(text, Loader=_LOADER)
        self.values: dict[Path, Position] = {}
        self.keys: dict[Path, Position] = {}
        self.errors: list[InputError] = []
        self.last: yaml.Event | None = None  # where the collection just read ends

    def document(self) -> Data:
        data: Data = {}
        seen = 0
        for event in self.events:
            if isinstance(event, yaml.DocumentStartEvent):
                seen += 1
                if seen > 1:
                    self.refuse(event, "a second document", "one document in a file", "split it")
                    return data
                data = self.node(next(self.events), ())
        if not seen:
            start = Position(self.file, 1, 1, 1, self.lines[0])
            fix = "write `format:` and what follows it, see `filtercheck explain filter`"
            self.errors.append(
                InputError("the file is empty", start, found="nothing", allowed="keys", fix=fix)
            )
        return data

    def node(self, event: yaml.Event, path: Path) -> Data:
        """Return one value, and note where it stands."""
        self.values[path] = self.position(event)
        if len(path) > DEEPEST:
            self.refuse(event, "nested too deeply", f"at most {DEEPEST} levels", "flatten it")
            raise InputErrors(self.errors)
        self.check(event)
        if isinstance(event, yaml.ScalarEvent):
            return str(event.value)
        if isinstance(event, yaml.AliasEvent):
            return ""  # refused already
        data = (
            self.sequence(path)
            if isinstance(event, yaml.SequenceStartEvent)
            else self.mapping(path)
        )
        self.values[path] = self.position(event, self.last)
        return data

    def sequence(self, path: Path) -> Data:
        items: list[Data] = []
        while not isinstance(event := next(self.events), yaml.SequenceEndEvent):
            items.append(self.node(event, (*path, len(items))))
        self.last = event
        return items

    def mapping(self, path: Path) -> Data:
        members: dict[str, Data] = {}
        while not isinstance(event := next(self.events), yaml.MappingEndEvent):
            key = self.key(event, path)
            here = (*path, key)
            at = self.position(event)
            if key in members:
                self.errors.append(
                    InputError(
                        f"{key!r} is given twice",
                        at,
                        found=f"first given at {self.keys[here]}",
                        allowed="each name once",
                        fix="delete or rename one of them",
                    )
                )
            self.keys.setdefault(here, at)
            members[key] = self.node(next(self.events), here)
        self.last = event
        return members

    def key(self, event: yaml.Event, path: Path) -> str:
        if isinstance(event, yaml.ScalarEvent):
            self.check(event)
            if event.value == "<<" and event.implicit[0]:
                self.refuse(event, "a merge key", "plain keys", "write the keys out")
            return str(event.value)
        self.refuse(event, "a key that is no word", "words as keys", "write a word")
        self.node(event, (*path, "?"))
        return "?"

    def check(self, event: yaml.Event) -> None:
        if isinstance(event, yaml.AliasEvent):
            self.refuse(event, "an alias", "values written out", "write the value here again")
        elif getattr(event, "anchor", None):
            self.refuse(event, "an anchor", "values without `&`", "delete the anchor")
        elif getattr(event, "tag", None) not in (None, "!"):
            self.refuse(event, "a tag", "values without `!`", "delete the tag")

    def refuse(self, event: yaml.Event, what: str, allowed: str, fix: str) -> None:
        at = self.position(event)
        found = at.text[at.column - 1 : at.column - 1 + at.width] or what
        self.errors.append(
            InputError(f"{what} is not allowed", at, found=found, allowed=allowed, fix=fix)
        )

    def position(self, event: yaml.Event, last: yaml.Event | None = None) -> Position:
        """Return where an event, or all from one to the last, stands on its first line."""
        start, end = event.start_mark, (last or event).end_mark
        if start is None or end is None:
            raise TypeError("the parser gave an event without its place")
        text = self.line(start.line)
        stop = end.column if end.line == start.line else len(text)
        width = max(1, stop - start.column)
        return Position(self.file, start.line + 1, start.column + 1, width, text)

    def line(self, index: int) -> str:
        return self.lines[index] if index < len(self.lines) else ""

    def syntax(self, error: yaml.MarkedYAMLError) -> InputError:
        mark = error.problem_mark or error.context_mark
        line, column = (mark.line, mark.column) if mark else (0, 0)
        found = " ".join(filter(None, (error.context, error.problem)))
        return InputError(
            "the file is not well-formed YAML",
            Position(self.file, line + 1, column + 1, 1, self.line(line)),
            found=found or "something else",
            allowed="YAML: `key: value`, [a, b] and {a: b}",
            fix="mend the line; look for a missing space after a colon, a bracket or a quote",
        )
