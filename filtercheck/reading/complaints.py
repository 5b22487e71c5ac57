"""A schema validator's errors -> what the reader of the file needs to know."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from jsonschema import ValidationError

from filtercheck.errors import InputError, QuantityError
from filtercheck.position import Position
from filtercheck.reading.source import Path, Source
from filtercheck.wording import listed, suggestion

_FORMS = {"object": "keys with values", "array": "a list [ , ]", "string": "a word"}
_COUNTS = {
    "minItems": "at least {} of them",
    "maxItems": "no more than {} of them",
    "minProperties": "at least {} of them",
    "minLength": "at least {} characters",
    "maxLength": "at most {} characters",
}


def complaints(error: ValidationError, source: Source) -> Iterator[InputError]:
    """Yield what a schema's error means to the reader, at the place that causes it."""
    path: Path = tuple(error.absolute_path)
    rule: Mapping[str, Any] = error.schema if isinstance(error.schema, Mapping) else {}
    limit: Any = error.validator_value
    at, found = source.values[path], _shown(error.instance)
    if "propertyNames" in error.absolute_schema_path:
        at = source.keys[(*path, str(error.instance))]
    match error.validator:
        case "quantity":
            yield _misread(error, at)
        case "additionalProperties":
            yield from _unknown_keys(error.instance, list(rule.get("properties", ())), source, path)
        case "required":
            yield from _missing_keys(error, rule, source, path)
        case "enum":
            meant = suggestion(found, limit)
            fix = f"write {meant}" if meant else "write one of them"
            yield _error(f"{found!r} is not known here", at, found, listed(limit), fix)
        case "const":
            yield _error(f"{found!r} is not known here", at, found, limit, f"write {limit}")
        case "type":
            wanted = rule.get("title") or " or ".join(_forms(limit))
            problem = f"{_subject(path)} has the wrong form"
            yield _error(problem, at, found, wanted, f"write {wanted}")
        case validator:
            wanted = _COUNTS.get(str(validator), "{}").format(limit)
            if validator == "pattern" or "Items" in str(validator):
                wanted = rule.get("title") or wanted
            problem = f"{_subject(path)} is not acceptable"
            yield _error(problem, at, found, wanted, f"write {wanted}")


def _misread(error: ValidationError, at: Position) -> InputError:
    cause = error.cause
    if not isinstance(cause, QuantityError):
        raise TypeError(f"the keyword `quantity` failed without a cause: {error.message}")
    return _error(cause.problem, at, cause.found, cause.allowed, cause.fix)


def _unknown_keys(
    instance: Any, known: list[str], source: Source, path: Path
) -> Iterator[InputError]:
    for key in instance:
        if key not in known:
            meant = suggestion(key, [k for k in known if k not in instance] or known)
            fix = f"write {meant}" if meant else "delete it, or write one of the keys above"
            at = source.keys[(*path, key)]
            yield _error(f"unknown key {key!r}", at, key or "nothing", listed(known), fix)


def _missing_keys(
    error: ValidationError, rule: Mapping[str, Any], source: Source, path: Path
) -> Iterator[InputError]:
    # The validator reports each missing key on its own, and names it in its message only.
    required: Any = error.validator_value
    for key in required:
        if key not in error.instance and error.message.startswith(repr(key)):  # type: ignore[operator]
            hint = rule.get("properties", {}).get(key)
            what = hint.get("title") if isinstance(hint, Mapping) else None
            yield _error(
                f"{_subject(path)} has no {key!r}",
                source.at(*path),
                _shown(error.instance),
                f"{key}: {what}" if what else f"the keys {listed(required)}",
                f"add `{key}:`",
            )


def _error(problem: str, at: Position, found: str, allowed: str, fix: str) -> InputError:
    return InputError(problem, at, found=found, allowed=allowed, fix=fix)


def _subject(path: Path) -> str:
    names = [f"item {part + 1}" if isinstance(part, int) else part for part in path]
    return ".".join(names) or "the file"


def _shown(instance: object) -> str:
    if isinstance(instance, dict):
        return f"the keys {listed(instance)}" if instance else "no keys"
    if isinstance(instance, list):
        return f"a list of {len(instance)}"
    return str(instance) or "nothing"


def _forms(types: str | list[str]) -> list[str]:
    names = [types] if isinstance(types, str) else types
    return [_FORMS[name] for name in names if name in _FORMS]
