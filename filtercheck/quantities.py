"""Quantities as text: "4k7", "2.2 kΩ", "15 nF", "-0.5 dB" <-> float.

A quantity is a number with an optional SI prefix and unit, with or without a
space:

    4700   4.7e3   4.7k   4.7 kΩ   4.7 kohm
    15 nF   10MHz   22 µH   -0.5 dB   1 %   50 ppm/K

or a code of IEC 60062, in which a letter stands for the decimal point:

    4k7 = 4.7 kΩ   R47 = 0.47 Ω   0R1 = 0.1 Ω   2u2 = 2.2 µF   4n7 = 4.7 nF

`m` is always milli and `M` always mega, in prefixes and codes; neither is ever
guessed. `k` may be written `K`, and micro `u`, `µ` or `μ`. Levels (dB),
percentages and temperature coefficients need their unit, since a bare number
could mean something else. An open-loop gain is given in dB, or as a ratio: 110
dB, 300000, 300 V/mV.

Source: IEC 60062:2016 (the codes, from memory; examples in tests/reference).
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from decimal import Decimal
from functools import lru_cache
from math import isfinite, isnan

from filtercheck.errors import QuantityError

LONGEST = 64
_PREFIXES = {"p": -12, "n": -9, "u": -6, "µ": -6, "μ": -6, "m": -3, "": 0}
_PREFIXES |= {"k": 3, "K": 3, "M": 6, "G": 9, "T": 12}
_SHOWN = {-12: "p", -9: "n", -6: "µ", -3: "m", 0: "", 3: "k", 6: "M", 9: "G", 12: "T"}

# What to say of a text that is no number because of one sign in it.
_HINTS = {
    ":": "write one number, without a colon",
    "_": "leave the underscores out",
    "nan": "write a finite number",
    "inf": "write a finite number",
}

_NUMBER = re.compile(
    r"([+-]?)([0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE]([+-]?[0-9]{1,4}))?[ \u00a0]?([^0-9\s+-]*)",
    re.ASCII,
)
_CODE = re.compile(r"([+-]?)([0-9]*)([A-Za-zµμ])([0-9]+)[ \u00a0]?([^0-9\s]*)", re.ASCII)


@dataclass(frozen=True)
class Quantity:
    """What a text may state: its unit, how the unit is written, and an example."""

    noun: str
    unit: str  # as shown
    units: dict[str, int]  # as written, with the power of ten that it means
    example: str
    prefixed: bool = True  # whether SI prefixes and codes are used with it
    bare: bool = True  # whether the unit may be left out
    point: str = ""  # the letter that stands for the decimal point in a code


QUANTITIES: dict[str, Quantity] = {
    "resistance": Quantity(
        "a resistance",
        "Ω",
        dict.fromkeys(("Ω", "\u2126", "ohm", "ohms", "Ohm"), 0),
        "4k7",
        point="R",
    ),
    "capacitance": Quantity("a capacitance", "F", {"F": 0}, "15 nF", point="F"),
    "inductance": Quantity("an inductance", "H", {"H": 0}, "22 mH", point="H"),
    "frequency": Quantity("a frequency", "Hz", {"Hz": 0}, "1.2 kHz"),
    "time": Quantity("a time", "s", {"s": 0}, "10 µs"),
    "level": Quantity("a level", "dB", {"dB": 0}, "-0.5 dB", prefixed=False, bare=False),
    "percentage": Quantity("a percentage", "%", {"%": -2}, "1 %", prefixed=False, bare=False),
    "temperature-coefficient": Quantity(
        "a temperature coefficient",
        "ppm/K",
        {"ppm/K": -6, "ppm/°C": -6},
        "50 ppm/K",
        prefixed=False,
        bare=False,
    ),
    "number": Quantity("a number", "", {}, "0.7071", prefixed=False),
    "voltage-gain": Quantity(
        "a voltage gain", "V/V", {"V/V": 0, "V/mV": 3, "dB": 0}, "110 dB", prefixed=False
    ),
}


@lru_cache(maxsize=4096)
def parse(text: str, quantity: str) -> float:
    """Return the number that a text states, in SI units; dB stay dB, percentages fractions.

    Raises
    ------
    QuantityError
        If it is no such quantity.
    """
    kind = QUANTITIES[quantity]
    plain = text.strip().replace("\u2212", "-")
    match = _NUMBER.fullmatch(plain) if len(plain) <= LONGEST else None
    if match:
        sign, digits, exponent, suffix = match.groups()
        power, unit = _suffix(text, suffix, kind)
        value = float(f"{sign}{digits}e{int(exponent or 0) + power}")
    elif (match := _CODE.fullmatch(plain)) and len(plain) <= LONGEST:
        sign, whole, letter, fraction, unit = match.groups()
        value = float(f"{sign}{whole or 0}.{fraction}e{_letter(text, letter, unit, kind)}")
    else:
        raise _unreadable(text, kind)
    if quantity == "voltage-gain" and unit == "dB":
        value = 10.0 ** (value / 20.0) if value < 1000.0 else float("inf")
    if not isfinite(value):
        raise _error("the number is too large", text, kind, "write a smaller number")
    return value


def _suffix(text: str, suffix: str, kind: Quantity) -> tuple[int, str]:
    """Return the power of ten of a prefix and a unit, and the unit."""
    if suffix in kind.units or (not suffix and kind.bare):
        return kind.units.get(suffix, 0), suffix
    prefix, unit = suffix[:1], suffix[1:]
    if kind.prefixed and prefix in _PREFIXES and (not unit or unit in kind.units):
        return _PREFIXES[prefix] + kind.units.get(unit, 0), unit
    if kind.point and suffix == kind.point:
        return 0, kind.unit
    raise _misfit(text, suffix, kind)


def _letter(text: str, letter: str, unit: str, kind: Quantity) -> int:
    """Return the power of ten of a code's letter."""
    if kind.prefixed and (not unit or unit in kind.units):
        if letter == kind.point:
            return 0
        if letter in _PREFIXES:
            return _PREFIXES[letter]
        if letter in "RL":
            raise _error(
                f"the letter {letter} is ambiguous in {kind.noun}",
                text,
                kind,
                "write it with a prefix and a unit; practice differs on what the letter means",
            )
    raise _misfit(text, letter + unit, kind)


def _misfit(text: str, suffix: str, kind: Quantity) -> QuantityError:
    """Say what is wrong with a unit, without guessing what was meant."""
    if not suffix:
        return _error("the unit is missing", text, kind, f"write {text.strip()} {kind.unit}")
    for other in QUANTITIES.values():
        unit = suffix if suffix in other.units else suffix[1:]
        if unit in other.units and unit not in kind.units:
            problem = f"the unit {unit} does not fit {kind.noun}"
            return _error(problem, text, kind, f"write {kind.noun}, such as {kind.example}")
    for unit in kind.units:
        if not kind.prefixed and suffix.lower().endswith(unit.lower()):
            fix = f"write {kind.unit} without a prefix"
            return _error(f"{kind.noun} takes no prefix", text, kind, fix)
        if suffix.lower() == f"m{unit}".lower():
            fix = f"write m{unit} for milli or M{unit} for mega"
            return _error("the prefix is not clear", text, kind, fix)
    if suffix in _PREFIXES:
        return _error(f"{kind.noun} takes no prefix", text, kind, "write the number out")
    fix = f"write {kind.noun}, such as {kind.example}"
    return _error(f"{suffix!r} is no unit of {kind.noun}", text, kind, fix)


def _unreadable(text: str, kind: Quantity) -> QuantityError:
    if len(text) > LONGEST:
        return _error("the text is too long", text[:LONGEST] + "…", kind, "write a number")
    if not text.strip():
        return _error("the value is missing", "nothing", kind, f"write {kind.example}")
    if "," in text:
        fix = f"write {text.strip().replace(',', '.')}, or leave the separator out"
        return _error("a number has no comma", text, kind, fix)
    fix = f"write {kind.noun}, such as {kind.example}"
    fix = next((hint for sign, hint in _HINTS.items() if sign in text), fix)
    return _error(f"this is not {kind.noun}", text, kind, fix)


def _error(problem: str, text: str, kind: Quantity, fix: str) -> QuantityError:
    return QuantityError(
        problem, found=text, allowed=f"{kind.noun}, such as {kind.example}", fix=fix
    )


def exact(value: float, quantity: str) -> str:
    """Return the shortest text that `parse` reads as this very number.

    Raises
    ------
    ValueError
        If the number is infinite or none.
    """
    if not isfinite(value):
        raise ValueError(f"no text states {value}")
    return _written(Decimal(repr(value)), QUANTITIES[quantity])


def rounded(value: float, quantity: str, digits: int = 4) -> str:
    """Return a text to read, with so many significant digits; levels with three decimals."""
    if isnan(value):
        return "none"
    if not isfinite(value):
        return "infinite" if value > 0.0 else "-infinite"
    if quantity == "level":
        return f"{round(value, 3) + 0.0:.3f} dB"
    return _written(Decimal(f"{value + 0.0:.{digits}g}"), QUANTITIES[quantity])


def _written(number: Decimal, kind: Quantity) -> str:
    """Write a number in engineering notation, in the unit shown."""
    power = kind.units.get(kind.unit, 0)
    number = number.scaleb(-power)
    exponent = 0
    if kind.prefixed and number:
        exponent = number.adjusted() // 3 * 3
        exponent = exponent if exponent in _SHOWN else 0
    scaled = number.scaleb(-exponent)
    unit = f"{_SHOWN[exponent]}{kind.unit}"
    return f"{_digits(scaled)} {unit}".rstrip()


def _digits(number: Decimal) -> str:
    """Write a number without superfluous zeros, with an exponent where it is far from 1."""
    if not number:
        return "-0" if number.is_signed() else "0"
    number = number.normalize()
    if -7 <= number.adjusted() <= 17:
        return f"{number:f}"
    sign, digits, _ = number.as_tuple()
    text = "".join(map(str, digits))
    mantissa = f"{text[0]}.{text[1:]}" if len(text) > 1 else text
    return f"{'-' if sign else ''}{mantissa}e{number.adjusted()}"
