"""JSON Schema -> errors with positions, and texts -> numbers as the schema says.

The schemas are draft-07 with keywords of our own: `quantity` names what a text must be (a
key of QUANTITIES), `words` what may stand there instead, `above` and `from` what the number
must exceed or reach. Editors pass over them.
"""

from __future__ import annotations

import json
from collections.abc import Iterator, Mapping
from functools import cache
from importlib.resources import files
from typing import Any

from jsonschema import Draft7Validator, ValidationError
from jsonschema.validators import extend

from filtercheck.errors import InputErrors, QuantityError, bounded
from filtercheck.model.reach import WORDS, within_reach
from filtercheck.model.requirement import Setting
from filtercheck.quantities import parse, rounded
from filtercheck.reading.complaints import complaints
from filtercheck.reading.source import Data, Source
from filtercheck.wording import listed

Schema = Mapping[str, Any]


@cache
def schema(name: str) -> Schema:
    """Return one of the schemas that are shipped, by its name: "filter", "board"."""
    text = files("filtercheck.schemas").joinpath(f"{name}.schema.json").read_text("utf-8")
    loaded: Schema = json.loads(text)
    return loaded


def check(source: Source, name: str) -> None:
    """Hold a file against its schema.

    Raises
    ------
    InputErrors
        All that is wrong, each at its place.
    """
    found = bounded(
        complaint
        for error in _validator(name).iter_errors(source.data)
        for complaint in complaints(error, source)
    )
    if found:
        raise InputErrors(found)


def converted(data: Data, rule: Schema) -> Setting:
    """Return a value with its texts read as the schema says; `data` has passed `check`."""
    if isinstance(data, str):
        if "quantity" not in rule or data in rule.get("words", ()):
            return data
        return parse(data, rule["quantity"])
    if isinstance(data, list):
        return tuple(converted(item, rule["items"]) for item in data)
    names, members = rule["propertyNames"], rule["additionalProperties"]
    return tuple((converted(k, names), converted(v, members)) for k, v in data.items())


@cache
def _validator(name: str) -> Any:
    return extend(Draft7Validator, {"quantity": _quantity})(schema(name))  # type: ignore[no-untyped-call]


def _quantity(_: object, quantity: str, text: object, rule: Schema) -> Iterator[ValidationError]:
    """Check that a text is a quantity; the error carries what to say about it."""
    words = rule.get("words", ())
    if not isinstance(text, str) or text in words:
        return
    also = f", or {listed(words)}" if words else ""
    try:
        value = parse(text, quantity)
    except QuantityError as error:
        yield _said(error.problem, error.found, error.allowed + also, error.fix)
        return
    if not within_reach(value):
        fix = "write a value that a part or a filter can have"
        yield _said("the value is out of all range", text, WORDS + also, fix)
        return
    above, least = rule.get("above"), rule.get("from")
    if above is not None and not value > above:
        bound = f"more than {rounded(above, quantity)}"
    elif least is not None and not value >= least:
        bound = f"at least {rounded(least, quantity)}"
    else:
        return
    yield _said("the value is out of range", text, bound + also, f"write {bound}")


def _said(problem: str, found: str, allowed: str, fix: str) -> ValidationError:
    cause = QuantityError(problem, found=found, allowed=allowed, fix=fix)
    return ValidationError(problem, cause=cause)
