"""A topic -> its manual, made from the documentation of the modules and schemas themselves."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from inspect import cleandoc
from typing import Any

from filtercheck import quantities, verification
from filtercheck.circuits import CIRCUITS
from filtercheck.errors import UsageError
from filtercheck.model import verdict
from filtercheck.reading.schema import schema
from filtercheck.requirements import KINDS
from filtercheck.wording import listed, suggestion, wrapped

FORMATS = ("filter", "board", "evidence")
NOTATIONS = {
    "quantities": quantities.__doc__,
    "verify": verification.__doc__,
    "verdicts": verdict.__doc__,
}


def topics() -> str:
    """Return the list of topics."""
    groups: dict[str, Iterable[str]] = {
        "kinds of requirement": KINDS,
        "circuits": CIRCUITS,
        "file formats": FORMATS,
        "notations": NOTATIONS,
    }
    lines = []
    for title, names in groups.items():
        lines += [title, *wrapped(", ".join(names), "  ")]
    return "\n".join(lines) + "\n"


def manual(topic: str) -> str:
    """Return what there is to say about a topic.

    Raises
    ------
    UsageError
        If there is no such topic.
    """
    texts: dict[str, str | None] = {name: kind.manual for name, kind in KINDS.items()}
    texts |= {name: circuit.manual for name, circuit in CIRCUITS.items()}
    texts |= NOTATIONS
    if topic in FORMATS:
        return "\n".join(_format(schema(topic))) + "\n"
    text = texts.get(topic)
    if text is None:
        known = [*texts, *FORMATS]
        meant = suggestion(topic, known)
        hint = f"is {meant} meant? " if meant else ""
        raise UsageError(f"there is no topic {topic!r}; {hint}The topics are {listed(known)}.")
    return cleandoc(text) + "\n"


def _format(rules: Mapping[str, Any]) -> Iterator[str]:
    yield from wrapped(str(rules["description"]))
    yield from _keys(rules, rules, "  ")


def _keys(rule: Mapping[str, Any], whole: Mapping[str, Any], indent: str) -> Iterator[str]:
    """Yield the keys of a mapping with what the schema says of each, deeper ones indented."""
    required = rule.get("required", ())
    for key, given in rule.get("properties", {}).items():
        inner = _resolved(given, whole)
        if inner is True:
            continue
        must = "required" if key in required else "optional"
        text = f"{key} ({must}): {inner.get('description', '')}"
        words = [inner["const"]] if "const" in inner else inner.get("enum", ())
        if words:
            text += f" {'One of ' if len(words) > 1 else ''}{listed(map(str, words))}."
        yield from wrapped(text, indent)
        for below in (inner, inner.get("items"), inner.get("additionalProperties")):
            if isinstance(below, Mapping):
                yield from _keys(_resolved(below, whole), whole, f"{indent}    ")


def _resolved(rule: Any, whole: Mapping[str, Any]) -> Any:
    """Follow a reference to the schema's own definitions."""
    if isinstance(rule, Mapping) and "$ref" in rule:
        return whole["definitions"][rule["$ref"].rpartition("/")[2]]
    return rule
