"""The parts of a filter's file -> model: values, preferred values, tolerances."""

from __future__ import annotations

from collections.abc import Mapping
from math import inf
from typing import cast

from filtercheck.errors import InputError, QuantityError
from filtercheck.model.part import Figure, OpAmp, Part, Passive, Spread
from filtercheck.model.reach import WORDS, within_reach
from filtercheck.position import Position
from filtercheck.preferred import is_member, nearest, neighbours
from filtercheck.quantities import parse, rounded
from filtercheck.reading.source import Data, Source
from filtercheck.wording import listed

QUANTITIES = ("resistance", "capacitance", "inductance")
# The letter of a designator's class, for parts that state an `ideal` value alone. Source: IEC
# 81346-2 and the usage of circuit diagrams before it (from memory).
_CLASS = {"R": "resistance", "C": "capacitance", "L": "inductance"}

Keys = Mapping[str, Data]


def parts(source: Source, faults: list[InputError]) -> dict[str, Part]:
    """Return the parts by designator, of a file that has passed its schema; add what is wrong."""
    found: dict[str, Part] = {}
    for designator, data in cast("Mapping[str, Keys]", cast("Keys", source.data)["parts"]).items():
        try:
            found[designator] = _part(designator, data, source)
        except InputError as error:
            faults.append(error)
    return found


def _part(designator: str, data: Keys, source: Source) -> Part:
    place = source.at("parts", designator)
    stated = [key for key in (*QUANTITIES, "ideal", "amplifier") if key in data]
    if len(stated) != 1:
        raise InputError(
            f"{designator} must state one value",
            place,
            found=" and ".join(stated) or "no value",
            allowed="one of resistance, capacitance, inductance, ideal or amplifier",
            fix="add one, such as `resistance: 10k`" if not stated else "delete the others",
        )
    if stated == ["amplifier"]:
        return _op_amp(designator, data, source)
    if stated == ["ideal"]:
        return _preferred(designator, data, source)
    quantity = stated[0]
    value = parse(str(data[quantity]), quantity)
    series = str(data["series"]) if "series" in data else None
    if series and not is_member(value, series):
        raise _not_preferred(designator, value, quantity, series, source)
    return Passive(
        designator,
        quantity,
        value,
        None,
        series,
        *_variation(designator, data, source),
        False,
        place,
    )


def _not_preferred(
    designator: str, value: float, quantity: str, series: str, source: Source
) -> InputError:
    below, above = (rounded(near, quantity) for near in neighbours(value, series))
    return InputError(
        f"{designator} is not an {series} value",
        source.values["parts", designator, quantity],
        found=rounded(value, quantity, digits=6),
        allowed=f"{series} values (IEC 60063); the nearest are {below} and {above}",
        fix=f"write {below} or {above}, or mend `series`",
    )


def _preferred(designator: str, data: Keys, source: Source) -> Passive:
    """Fit the nearest preferred value for an ideal one."""
    at = source.values["parts", designator, "ideal"]
    quantity = _CLASS.get(designator[0].upper())
    if quantity is None or "series" not in data:
        raise InputError(
            f"{designator} states an ideal value"
            + (" without a series" if quantity else ", but is of no class that tells its unit"),
            at,
            found=f"{designator}: ideal {data['ideal']}",
            allowed="`ideal` with `series`, for designators that begin with R, C or L",
            fix="add `series: E96`" if quantity else "write `resistance:` or the like instead",
        )
    try:
        ideal = parse(str(data["ideal"]), quantity)
    except QuantityError as error:
        raise InputError(
            error.problem, at, found=error.found, allowed=error.allowed, fix=error.fix
        ) from error
    if not ideal > 0.0 or not within_reach(ideal):
        raise InputError(
            f"the ideal value of {designator} is not positive, or out of all range",
            at,
            found=str(data["ideal"]),
            allowed=f"a value above 0; {WORDS}",
            fix="mend the value",
        )
    series = str(data["series"])
    return Passive(
        designator,
        quantity,
        nearest(ideal, series),
        ideal,
        series,
        *_variation(designator, data, source),
        False,
        source.at("parts", designator),
    )


def _variation(
    designator: str, data: Keys, source: Source
) -> tuple[Spread | None, str | None, float | None, str]:
    """Return tolerance, matched network, track and distribution."""
    if ("network" in data) != ("track" in data) or ("track" in data and "tolerance" not in data):
        raise InputError(
            f"{designator} is only half a member of a matched network",
            source.at("parts", designator),
            found=listed(key for key in ("network", "track", "tolerance") if key in data),
            allowed="`network`, `track` and `tolerance` together",
            fix="add the ones that are missing",
        )
    track = parse(str(data["track"]), "percentage") if "track" in data else None
    if track is not None and track >= 1.0:
        raise InputError(
            f"the track of {designator} leaves no range of positive values",
            source.values["parts", designator, "track"],
            found=str(data["track"]),
            allowed="less than 100 %",
            fix="mend the track",
        )
    return (
        _tolerance(designator, data, source),
        str(data["network"]) if "network" in data else None,
        track,
        str(data.get("distribution", "uniform")),
    )


def _tolerance(designator: str, data: Keys, source: Source) -> Spread | None:
    if "tolerance" not in data:
        return None
    stated = data["tolerance"]
    if isinstance(stated, list):
        below, above = (parse(str(end), "percentage") for end in stated)
    else:
        above = parse(str(stated), "percentage")
        below = -above
    if not -1.0 < below <= above < inf:
        raise InputError(
            f"the tolerance of {designator} leaves no range of positive values",
            source.values["parts", designator, "tolerance"],
            found=f"{rounded(below, 'percentage')} to {rounded(above, 'percentage')}",
            allowed="`5 %`, or `[-20 %, +80 %]`; the lower end above -100 %",
            fix="mend the tolerance",
        )
    return Spread(below, above)


def _op_amp(designator: str, data: Keys, source: Source) -> OpAmp:
    for key in ("series", "tolerance", "network", "track"):
        if key in data:
            raise InputError(
                f"an amplifier has no {key}",
                source.at("parts", designator, key),
                found=f"{key} of {designator}",
                allowed="gain_bandwidth and open_loop_gain, each with min, typical and max",
                fix=f"delete `{key}`",
            )
    stated = data["amplifier"]
    place = source.at("parts", designator)
    distribution = str(data.get("distribution", "uniform"))
    if isinstance(stated, str):  # the word `ideal`
        return OpAmp(designator, None, None, distribution, False, place)
    figures = cast("Mapping[str, Data]", stated)
    at = source.values["parts", designator, "amplifier"]
    return OpAmp(
        designator,
        _figure(figures["gain_bandwidth"], "frequency", at),
        _figure(figures["open_loop_gain"], "voltage-gain", at),
        distribution,
        False,
        place,
    )


def _figure(stated: Data, quantity: str, at: Position) -> Figure | None:
    """Return a figure; one that is given alone is exact, `ideal` is none at all."""
    if stated == "ideal":
        return None
    if isinstance(stated, str):
        value = parse(stated, quantity)
        return Figure(value, value, value)
    data = cast("Keys", stated)
    if ({"min", "max"} <= data.keys()) == ("tolerance" in data):
        raise InputError(
            "the figure's limits are missing, or given twice",
            at,
            found=listed(data),
            allowed="`min` and `max`, or `tolerance`, beside `typical`",
            fix="add `tolerance: 30 %`" if "tolerance" not in data else "delete `tolerance`",
        )
    given = {key: parse(str(text), quantity) for key, text in data.items() if key != "tolerance"}
    typical = given["typical"]
    if "tolerance" in data:
        tolerance = parse(str(data["tolerance"]), "percentage")
        given |= {"min": typical * (1.0 - tolerance), "max": typical * (1.0 + tolerance)}
    figure = Figure(typical, given["min"], given["max"])
    if not 0.0 < figure.min <= figure.typical <= figure.max:
        raise InputError(
            "the figures are not in rising order above 0",
            at,
            found=", ".join(f"{key} {text}" for key, text in data.items()),
            allowed="min, typical and max in rising order; a tolerance below 100 %",
            fix="mend the figures",
        )
    return figure
