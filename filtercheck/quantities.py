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
from math import inf, isfinite, isnan

from filtercheck.errors import QuantityError
from filtercheck.wording import suggestion

LONGEST = 64
_PREFIXES = {"p": -12, "n": -9, "u": -6, "µ": -6, "μ": -6, "m": -3, "": 0}
_PREFIXES |= {"k": 3, "K": 3, "M": 6, "G": 9, "T": 12}
_SHOWN = {-12: "p", -9: "n", -6: "µ", -3: "m", 0: "", 3: "k", 6: "M", 9: "G", 12: "T"}

_NUMBER = re.compile(
    r"([+-]?)([0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE]([+-]?[0-9]+))?[ \u00a0]?([^0-9\s+-]*)",
    re.ASCII,
)
_CODE = re.compile(r"([+-]?)([0-9]*)([A-Za-zµμ])([0-9]+)[ \u00a0]?([^0-9\s]*)", re.ASCII)

# Signs of what was written instead of a number, each with what to do about it.
_HINTS = (
    (re.compile(r"_"), "leave the underscores out"),
    (re.compile(r":"), "write one number, without a colon"),
    (re.compile(r"(?i)^[+-]?0[xbo]"), "write the number in decimal"),
    (re.compile(r"(?i)^[+-]?(nan|inf|infinite|infinity)\b"), "write a finite number"),
    (re.compile(r"[^\D0-9]"), "write the number in the digits 0 to 9"),
    (re.compile(r"[0-9][\s'’]+[0-9]"), "leave the separator out of the number"),
    (re.compile(r"[^\S \u00a0]"), "write an ordinary space"),
    (re.compile(r"[pnuµμmkKMGT]\s+\D"), "write the prefix and the unit without a space"),
    (re.compile(r"(?i)[0-9]\s*meg"), "write M for mega"),
    (re.compile(r"^\D*$"), "begin with a number"),
)


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


_OHM = dict.fromkeys(("Ω", "\u2126", "ohm", "ohms", "Ohm"), 0)
_PPM = {"ppm/K": -6, "ppm/°C": -6}
_RATIO = {"V/V": 0, "V/mV": 3, "dB": 0}

QUANTITIES: dict[str, Quantity] = {
    "resistance": Quantity("a resistance", "Ω", _OHM, "4k7", point="R"),
    "capacitance": Quantity("a capacitance", "F", {"F": 0}, "15 nF", point="F"),
    "inductance": Quantity("an inductance", "H", {"H": 0}, "22 mH", point="H"),
    "frequency": Quantity("a frequency", "Hz", {"Hz": 0}, "1.2 kHz"),
    "time": Quantity("a time", "s", {"s": 0}, "10 µs"),
    "level": Quantity("a level", "dB", {"dB": 0}, "-0.5 dB", prefixed=False, bare=False),
    "percentage": Quantity("a percentage", "%", {"%": -2}, "1 %", prefixed=False, bare=False),
    "temperature-coefficient": Quantity(
        "a temperature coefficient", "ppm/K", _PPM, "50 ppm/K", prefixed=False, bare=False
    ),
    "number": Quantity("a number", "", {}, "0.7071", prefixed=False),
    "voltage-gain": Quantity("a voltage gain", "V/V", _RATIO, "110 dB", prefixed=False),
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
    text = text.strip()
    if len(text) > LONGEST:
        raise _error("the text is too long", f"{text[:LONGEST]}…", kind, "write a number")
    plain = text.replace("\u2212", "-")
    if match := _NUMBER.fullmatch(plain):
        sign, digits, exponent, suffix = match.groups()
        power, unit = _suffix(text, suffix, kind)
        power += int(exponent or 0)
    elif match := _CODE.fullmatch(plain):
        sign, whole, letter, fraction, unit = match.groups()
        digits, power = f"{whole}.{fraction}", _letter(text, letter, unit, kind)
    else:
        raise _unreadable(text, kind)
    # One conversion of one decimal text rounds once; a multiplication would round again.
    value = float(f"{sign}{digits}e{power}")
    if unit == "dB" and quantity == "voltage-gain":
        value = 10.0 ** (value / 20.0) if value < 6160.0 else inf
    if not isfinite(value):
        raise _error("the number is too large", text, kind, "write a smaller number")
    if not value and digits.strip("0."):
        raise _error("the number is too small", text, kind, "write 0, if that is meant")
    return value


def _suffix(text: str, suffix: str, kind: Quantity) -> tuple[int, str]:
    """Return the power of ten of a prefix and a unit, and the unit."""
    if suffix in kind.units or (not suffix and kind.bare):
        return kind.units.get(suffix, 0), suffix
    if kind.prefixed and suffix[:1] in _PREFIXES and suffix[1:] in ("", *kind.units):
        return _PREFIXES[suffix[:1]], suffix[1:]
    if suffix and suffix == kind.point:
        return 0, kind.unit
    raise _misfit(text, suffix, kind)


def _letter(text: str, letter: str, unit: str, kind: Quantity) -> int:
    """Return the power of ten of a code's letter."""
    if not kind.prefixed or (letter != kind.point and letter not in _PREFIXES):
        raise _misfit(text, letter, kind)
    if unit and unit not in kind.units:
        raise _misfit(text, unit, kind)
    return 0 if letter == kind.point else _PREFIXES[letter]


def _misfit(text: str, suffix: str, kind: Quantity) -> QuantityError:
    """Say what is wrong with what follows a number, or with the letter of a code."""
    if hint := _hint(text):
        return _error(f"this is not {kind.noun}", text, kind, hint)
    if not suffix:
        return _error("the unit is missing", text, kind, f"write {text} {kind.unit}")
    if kind.prefixed and suffix in ("R", "L"):
        fix = "write it with a prefix and a unit; practice differs on what the letter means"
        return _error(f"the letter {suffix} is ambiguous in {kind.noun}", text, kind, fix)
    unit, stated = _stated(suffix)
    if stated is kind:
        return _error(f"{suffix!r} has no place in a code", text, kind, "write a decimal point")
    if stated:
        found = f"{text}, {stated.noun}"
        return _error(f"the unit {unit} does not fit {kind.noun}", found, kind)
    return _misspelt(text, suffix, kind)


def _stated(suffix: str) -> tuple[str, Quantity | None]:
    """Return a unit, and the quantity that it states if there is one."""
    for kind in QUANTITIES.values():
        if suffix in kind.units:
            return suffix, kind
        if kind.prefixed and suffix[0] in _PREFIXES and suffix[1:] in kind.units:
            return suffix[1:], kind
    return suffix, None


def _misspelt(text: str, suffix: str, kind: Quantity) -> QuantityError:
    """Say which prefix or unit is near, but never choose between milli and mega."""
    prefixes = _PREFIXES if kind.prefixed else {"": 0}
    known = [f"{prefix}{unit}" for unit in ("", *kind.units) for prefix in prefixes]
    alike = [word for word in (*known, kind.point) if word.lower() == suffix.lower()]
    if {"m", "M"} <= {word[0] for word in alike}:
        fix = f"write m{alike[0][1:]} for milli or M{alike[0][1:]} for mega"
        return _error("the prefix is not clear", text, kind, fix)
    if not kind.prefixed and suffix[0] in _PREFIXES and suffix[1:] in ("", *kind.units):
        fix = "write the number out, without a prefix"
        return _error(f"{kind.noun} takes no prefix", text, kind, fix)
    # A prefix is suggested only if its case is all that is wrong; a unit also if it is near.
    near = alike[0] if alike else None if kind.prefixed else suggestion(suffix, kind.units)
    fix = f"write {near}, if that is meant" if near else ""
    return _error(f"{suffix!r} is no unit of {kind.noun}", text, kind, fix)


def _unreadable(text: str, kind: Quantity) -> QuantityError:
    if not text:
        return _error("the value is missing", "nothing", kind, f"write {kind.example}")
    if "," in text:
        point = text.replace(",", ".")
        fix = f"write {point}" if point.count(".") == 1 else "write a decimal point"
        return _error("a number has no comma", text, kind, f"{fix}, and no separators")
    return _error(f"this is not {kind.noun}", text, kind, _hint(text))


def _hint(text: str) -> str:
    return next((fix for sign, fix in _HINTS if sign.search(text)), "")


def _error(problem: str, found: str, kind: Quantity, fix: str = "") -> QuantityError:
    wanted = f"{kind.noun}, such as {kind.example}"
    return QuantityError(problem, found=found, allowed=wanted, fix=fix or f"write {wanted}")


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
    if quantity == "level" and abs(value) < 1e9:
        return f"{round(value, 3) + 0.0:.3f} dB"
    return _written(Decimal(f"{value + 0.0:.{digits}g}"), QUANTITIES[quantity])


def _written(number: Decimal, kind: Quantity) -> str:
    """Write a number in engineering notation, in the unit shown."""
    number = number.scaleb(-kind.units.get(kind.unit, 0))
    exponent = number.adjusted() // 3 * 3 if kind.prefixed and number else 0
    exponent = exponent if exponent in _SHOWN else 0
    return f"{_digits(number.scaleb(-exponent))} {_SHOWN[exponent]}{kind.unit}".rstrip()


def _digits(number: Decimal) -> str:
    """Write a number without superfluous zeros, with an exponent where it is far from 1."""
    if not number:
        return "-0" if number.is_signed() else "0"
    number = number.normalize()
    if -7 <= number.adjusted() <= 17:
        return f"{number:f}"
    return f"{number:e}".replace("e+", "e")
