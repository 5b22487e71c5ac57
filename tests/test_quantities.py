"""Texts of quantities: every notation, every refusal, and the way back."""

from __future__ import annotations

import math
import sys
from decimal import Decimal
from fractions import Fraction
from pathlib import Path

import pytest
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from filtercheck.errors import QuantityError
from filtercheck.quantities import QUANTITIES, exact, parse, rounded

CODES = yaml.safe_load((Path(__file__).parent / "reference" / "iec60062.yaml").read_text("utf-8"))
PREFIXES = {"p": -12, "n": -9, "u": -6, "µ": -6, "μ": -6, "m": -3, "": 0}
PREFIXES |= {"k": 3, "K": 3, "M": 6, "G": 9, "T": 12}
UNITS = {
    "resistance": ["", "Ω", "\u2126", "ohm", "ohms", "Ohm"],
    "capacitance": ["", "F"],
    "inductance": ["", "H"],
    "frequency": ["", "Hz"],
    "time": ["", "s"],
}


@settings(max_examples=7000, deadline=None)
@given(st.floats(allow_nan=False, allow_infinity=False), st.sampled_from(list(QUANTITIES)))
def test_every_value_survives_the_round_trip(value: float, quantity: str) -> None:
    text = exact(value, quantity)
    again = parse(text, quantity)

    assert again == value
    assert math.copysign(1, again) == math.copysign(1, value)


@pytest.mark.parametrize("quantity", QUANTITIES)
@pytest.mark.parametrize(
    "size", [0.0, 5e-324, 2.2250738585072014e-308, 0.1, 1.7e308, sys.float_info.max]
)
@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_the_ends_of_the_floats_survive_too(sign: float, size: float, quantity: str) -> None:
    again = parse(exact(sign * size, quantity), quantity)

    assert again == sign * size
    assert math.copysign(1, again) == sign


@settings(max_examples=4000, deadline=None)
@given(
    st.integers(0, 10**9),
    st.integers(0, 9),
    st.sampled_from(list(PREFIXES)),
    st.sampled_from(list(UNITS)),
    st.data(),
)
def test_every_notation_of_a_number_means_the_same(
    digits: int, places: int, prefix: str, quantity: str, data: st.DataObject
) -> None:
    """The number digits * 10^-places with a prefix, against one rounding of its decimal text."""
    whole, fraction = divmod(digits, 10**places)
    plain = f"{whole}.{fraction:0{places}d}" if places else str(whole)
    wanted = float(f"{plain}e{PREFIXES[prefix]}")
    unit = data.draw(st.sampled_from(UNITS[quantity]))
    space = data.draw(st.sampled_from(["", " ", "\u00a0"])) if prefix + unit else ""
    sign = data.draw(st.sampled_from(["", "+", "-", "\u2212"]))
    signed = -wanted if sign in ("-", "\u2212") else wanted

    assert parse(f"{sign}{plain}{space}{prefix}{unit}", quantity) == signed
    if prefix and places:
        assert parse(f"{whole}{prefix}{fraction:0{places}d}", quantity) == wanted
    assert parse(exact(wanted, quantity), quantity) == wanted


# The source of each code is named in the reference file.
@pytest.mark.parametrize(
    ("quantity", "code", "value"),
    [(quantity, code, value) for quantity in CODES for code, value in CODES[quantity].items()],
)
def test_codes_of_iec_60062(quantity: str, code: str, value: object) -> None:
    assert parse(code, quantity) == float(str(value))


@pytest.mark.parametrize(
    ("text", "quantity", "value"),
    [
        # IEC 60062, from memory: the letter stands for the point, F in capacitances.
        ("4k7", "resistance", 4700.0),
        ("0R1", "resistance", 0.1),
        ("R47", "resistance", 0.47),
        ("2u2", "capacitance", 2.2e-6),
        ("4F7", "capacitance", 4.7),
        # A code for a frequency or with its unit: common practice, no source.
        ("2k5", "frequency", 2500.0),
        ("-4k7", "resistance", -4700.0),
        ("4k7Ω", "resistance", 4700.0),
        ("4k7 ohm", "resistance", 4700.0),
        # SI prefixes as in the SI brochure (9th edition, table 7), from memory.
        ("15 nF", "capacitance", 15e-9),
        ("10MHz", "frequency", 10e6),
        ("10 mHz", "frequency", 0.01),
        ("1 THz", "frequency", 1e12),
        ("1e3", "frequency", 1000.0),
        ("2.5E-3 H", "inductance", 2.5e-3),
        (".5 s", "time", 0.5),
        # By the meaning of per cent and parts per million.
        ("1 %", "percentage", 0.01),
        ("0.1%", "percentage", 0.001),
        ("50 ppm/K", "temperature-coefficient", 50e-6),
        ("50 ppm/°C", "temperature-coefficient", 50e-6),
        ("\u22120.5 dB", "level", -0.5),
        ("0.7071", "number", 0.7071),
        # By hand: 10^(20/20), 10^(0/20), 300 / 10^-3.
        ("20 dB", "voltage-gain", 10.0),
        ("0 dB", "voltage-gain", 1.0),
        ("300 V/mV", "voltage-gain", 300e3),
        ("7 V/V", "voltage-gain", 7.0),
        ("2e5", "voltage-gain", 200000.0),
    ],
)
def test_notations(text: str, quantity: str, value: float) -> None:
    assert parse(text, quantity) == value


@pytest.mark.parametrize(
    "text",
    [
        "4k7",
        "4K7",
        "4k7Ω",
        "4k7 ohm",
        "4.7k",
        "4.7 kΩ",
        "4.7\u00a0kΩ",
        "4.7 k\u2126",
        "4.7 kohm",
        "4.7 kohms",
        "4700",
        "4700R",
        "+4.7e3",
        "4700 Ω",
        "0.0047 M",
        "0.0047 MOhm",
        "4700000 mΩ",
    ],
)
def test_one_resistance_in_many_notations(text: str) -> None:
    assert parse(text, "resistance") == 4700.0  # common practice, no source


def test_an_open_loop_gain_in_decibels() -> None:
    # By hand: 110 / 20 = 5.5, and 10^5.5 = 10^5 sqrt(10), where sqrt(10) = 3.16227766016838.
    assert parse("110 dB", "voltage-gain") == pytest.approx(316227.766016838, rel=1e-14)


@settings(max_examples=2000, deadline=None)
@given(st.integers(-99999, 99999), st.sampled_from(list(QUANTITIES)))
def test_one_rounding_only(digits: int, quantity: str) -> None:
    """The value is the float nearest to the decimal number, whatever the unit shifts."""
    shift = {"percentage": -2, "temperature-coefficient": -6}.get(quantity, 0)
    nearest = float(Fraction(digits, 1000) * Fraction(10) ** shift)
    unit = "" if quantity == "voltage-gain" else QUANTITIES[quantity].unit

    assert parse(f"{Decimal(digits) / 1000:f} {unit}".strip(), quantity) == nearest


def test_milli_and_mega_are_never_taken_for_each_other() -> None:
    for quantity in UNITS:
        assert parse("4m7", quantity) == 4.7e-3
        assert parse("4M7", quantity) == 4.7e6
        assert parse("1 m", quantity) == 1e-3
        assert parse("1 M", quantity) == 1e6


# What is refused is common practice, no source; the words are this project's own.
REFUSED = [
    # Units of something else.
    ("15 nF", "resistance", "the unit F does not fit a resistance", "write a resistance"),
    ("4k7 nF", "resistance", "the unit F does not fit a resistance", "write a resistance"),
    ("10 kHz", "capacitance", "the unit Hz does not fit a capacitance", "write a capacitance"),
    ("1 %", "resistance", "the unit % does not fit a resistance", "write a resistance"),
    ("3 dB", "number", "the unit dB does not fit a number", "write a number"),
    ("10 furlongs", "resistance", "'furlongs' is no unit of a resistance", "such as 4k7"),
    # Prefixes and units in the wrong case; m and M are never chosen between.
    ("10 mhz", "frequency", "the prefix is not clear", "mHz for milli or MHz for mega"),
    ("10 MHZ", "frequency", "the prefix is not clear", "mHz for milli or MHz for mega"),
    ("10 MOHM", "resistance", "the prefix is not clear", "mohm for milli or Mohm for mega"),
    ("10 KHZ", "frequency", "'KHZ' is no unit of a frequency", "write kHz, if"),
    ("10 NF", "capacitance", "'NF' is no unit of a capacitance", "write nF, if"),
    ("10 hz", "frequency", "'hz' is no unit of a frequency", "write Hz, if"),
    ("-3 db", "level", "'db' is no unit of a level", "write dB, if"),
    ("50 ppm", "temperature-coefficient", "'ppm' is no unit of a temperature coefficient", "ppm/K"),
    ("4N7", "capacitance", "'N' is no unit of a capacitance", "write n, if"),
    ("470r", "resistance", "'r' is no unit of a resistance", "write R, if"),
    ("10 meg", "resistance", "this is not a resistance", "write M for mega"),
    # Units and prefixes that are missing, or too many.
    ("0.5", "level", "the unit is missing", "write 0.5 dB"),
    ("5", "percentage", "the unit is missing", "write 5 %"),
    ("50", "temperature-coefficient", "the unit is missing", "write 50 ppm/K"),
    ("1 mdB", "level", "a level takes no prefix", "without a prefix"),
    ("1 m%", "percentage", "a percentage takes no prefix", "without a prefix"),
    ("1 mppm/K", "temperature-coefficient", "a temperature coefficient takes no prefix", "without"),
    ("1 k", "number", "a number takes no prefix", "write the number out"),
    ("4k7", "voltage-gain", "a voltage gain takes no prefix", "write the number out"),
    ("4k7 kΩ", "resistance", "'kΩ' has no place in a code", "write a decimal point"),
    ("4.7 k Ω", "resistance", "this is not a resistance", "without a space"),
    ("Ω", "resistance", "this is not a resistance", "begin with a number"),
    # Letters that different makers use differently.
    ("4R7", "capacitance", "the letter R is ambiguous in a capacitance", "practice differs"),
    ("4R7", "inductance", "the letter R is ambiguous in an inductance", "practice differs"),
    ("470R", "capacitance", "the letter R is ambiguous in a capacitance", "practice differs"),
    ("4L7", "resistance", "the letter L is ambiguous in a resistance", "practice differs"),
    ("470L", "resistance", "the letter L is ambiguous in a resistance", "practice differs"),
    # Numbers as they are written elsewhere.
    ("4,7k", "resistance", "a number has no comma", "write 4.7k"),
    ("1,000.5", "resistance", "a number has no comma", "write a decimal point"),
    ("1 000", "resistance", "this is not a resistance", "leave the separator out"),
    ("1'000", "resistance", "this is not a resistance", "leave the separator out"),
    ("1_000", "resistance", "this is not a resistance", "leave the underscores out"),
    ("1:30", "frequency", "this is not a frequency", "without a colon"),
    ("0x10", "resistance", "this is not a resistance", "in decimal"),
    ("0x1F", "capacitance", "this is not a capacitance", "in decimal"),
    ("٣", "resistance", "this is not a resistance", "the digits 0 to 9"),
    ("5\u202fkΩ", "resistance", "this is not a resistance", "an ordinary space"),
    ("nan", "number", "this is not a number", "a finite number"),
    ("-inf dB", "level", "this is not a level", "a finite number"),
    ("1.2.3", "number", "this is not a number", "such as 0.7071"),
    # Numbers that no float holds, and texts that are none.
    ("1e999", "resistance", "the number is too large", "smaller"),
    ("1e99999", "resistance", "the number is too large", "smaller"),
    ("20000 dB", "voltage-gain", "the number is too large", "smaller"),
    ("1e-999", "resistance", "the number is too small", "write 0"),
    ("-1e9 dB", "voltage-gain", "the number is too small", "write 0"),
    ("1" * 65, "resistance", "the text is too long", "write a number"),
    ("", "level", "the value is missing", "write -0.5 dB"),
    (" ", "level", "the value is missing", "write -0.5 dB"),
]


@pytest.mark.parametrize(("text", "quantity", "problem", "fix"), REFUSED)
def test_refusals(text: str, quantity: str, problem: str, fix: str) -> None:
    with pytest.raises(QuantityError) as raised:
        parse(text, quantity)

    assert raised.value.problem == problem
    assert fix in raised.value.fix
    assert raised.value.allowed.startswith(QUANTITIES[quantity].noun)


def test_a_unit_of_something_else_is_named() -> None:
    with pytest.raises(QuantityError) as raised:
        parse("15 nF", "resistance")

    assert raised.value.found == "15 nF, a capacitance"
    assert raised.value.allowed == "a resistance, such as 4k7"


def test_a_huge_text_is_not_repeated() -> None:
    with pytest.raises(QuantityError) as raised:
        parse("9" * 1_000_000, "resistance")

    assert len(raised.value.found) < 100


@settings(max_examples=2000, deadline=None)
@given(
    st.text(max_size=80) | st.text("0123456789.,eE+-− kKmMµRLFHΩdB%:_", max_size=12),
    st.sampled_from(list(QUANTITIES)),
)
def test_any_text_is_a_number_or_a_refusal(text: str, quantity: str) -> None:
    try:
        value = parse(text, quantity)
    except QuantityError as error:
        sound = bool(error.problem and error.fix)
    else:
        sound = math.isfinite(value)
    assert sound


# By hand: four significant digits, and a prefix that leaves one to three before the point.
@pytest.mark.parametrize(
    ("value", "quantity", "text"),
    [
        (21460.0, "resistance", "21.46 kΩ"),
        (999999.0, "resistance", "1 MΩ"),
        (1.5e-8, "capacitance", "15 nF"),
        (-0.0004, "level", "0.000 dB"),
        (-1e300, "level", "-1e300 dB"),
        (-0.0, "resistance", "0 Ω"),
        (50e-6, "temperature-coefficient", "50 ppm/K"),
        (-0.123456, "level", "-0.123 dB"),
        (0.0123, "percentage", "1.23 %"),
        (0.0, "frequency", "0 Hz"),
        (math.inf, "frequency", "infinite"),
        (-math.inf, "level", "-infinite"),
        (math.nan, "level", "none"),
    ],
)
def test_texts_to_read(value: float, quantity: str, text: str) -> None:
    assert rounded(value, quantity) == text


def test_no_text_states_infinity() -> None:
    with pytest.raises(ValueError, match="no text states"):
        exact(math.inf, "frequency")
