"""Matched networks: their parts must be alike, or they have no factor in common."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from filtercheck.errors import InputError
from filtercheck.model.part import Part, Passive


def unlike(parts: Mapping[str, Part]) -> Iterator[InputError]:
    """Yield the members of matched networks that are not like the first one."""
    first: dict[str, Passive] = {}
    for part in parts.values():
        if not isinstance(part, Passive) or part.network is None:
            continue
        model = first.setdefault(part.network, part)
        if _nature(part) != _nature(model):
            yield InputError(
                f"{part.designator} is not like {model.designator} of the same network",
                part.at,
                found=f"another quantity, tolerance, track or distribution in {part.network}",
                allowed="the same ones for all parts of a matched network",
                fix=f"state here what {model.designator} states, or rename `network`",
            )


def _nature(part: Passive) -> tuple[object, ...]:
    return part.quantity, part.tolerance, part.track, part.distribution
