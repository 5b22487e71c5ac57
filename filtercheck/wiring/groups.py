"""A filter as groups of elements, and the responses that they give."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from filtercheck.model.part import Parts
from filtercheck.network.elements import Network
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import ratio
from filtercheck.network.response import Response, product
from filtercheck.wiring.fitting import value

Places = dict[str, tuple[int, str]]  # what an output may name -> group and node


@dataclass(frozen=True)
class Group:
    """Elements that make one network, and the way back from their names to the parts."""

    network: Network
    designator: Mapping[str, str]  # element -> part
    drive: str  # the node that feeds the next group


@dataclass(frozen=True)
class Wiring:
    """All of a filter; an output stands at a node of one of the groups, fed by those before."""

    groups: tuple[Group, ...]
    outputs: Mapping[str, tuple[int, str]]

    def responses(self, parts: Parts) -> dict[str, Response]:
        """Return the response at every output, for these part values.

        Raises
        ------
        NetworkError
            If the equations are singular at these values.
        """
        return {output: self.response(output, parts) for output in self.outputs}

    def response(self, output: str, parts: Parts) -> Response:
        """Return the response at one output.

        Raises
        ------
        NetworkError
            If the equations are singular at these values.
        """
        last, node = self.outputs[output]
        fed = [_response(group, group.drive, parts) for group in self.groups[:last]]
        return product([*fed, _response(self.groups[last], node, parts)])

    def whole(self, parts: Parts) -> Response:
        """Return the response through all groups: its factors hold every pole there is."""
        return product([_response(group, group.drive, parts) for group in self.groups])


def _response(group: Group, node: str, parts: Parts) -> Response:
    functions = network_functions(group.network)
    denominator = functions.denominator
    values = {s: value(s, parts[group.designator[s.element]]) for s in denominator.symbols}
    return Response((ratio(functions.numerators[node], denominator, values),))
