"""Texts of quantities: every notation, every refusal, and the way back."""

from __future__ import annotations

import math
from pathlib import Path

import pytest
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from filtercheck.errors import QuantityError
from filtercheck.quantities import QUANTITIES, exact, parse, rounded

CODES = yaml.safe_load((Path(__file__).parent / "reference" / "iec60062.yaml").read_text("utf-8"))
PREFIXES = {"p": -12, "n": -9, "u": -6, "µ": -6, "μ": -6, "m": -3, "": 0, "k": 3, "M": 6, "G": 9}
UNITS = {
    "resistance": ["", "Ω", "\u2126", "ohm"],
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


@pytest.mark.parametrize("quantity", ["resistance", "capacitance"])
def test_codes_of_iec_60062(quantity: str) -> None:
    for code, value in CODES[quantity].items():
        assert parse(code, quantity) == float(value), code


@pytest.mark.parametrize(
    ("text", "quantity", "value"),
    [
        ("4k7", "resistance", 4700.0),
        ("0R1", "resistance", 0.1),
        ("2u2", "capacitance", 2.2e-6),
        ("15 nF", "capacitance", 15e-9),
        ("10MHz", "frequency", 10e6),
        ("10 mHz", "frequency", 0.01),
        ("1e3", "frequency", 1000.0),
        ("2.5E-3 H", "inductance", 2.5e-3),
        ("4k7 ohm", "resistance", 4700.0),
        ("1 %", "percentage", 0.01),
        ("0.1%", "percentage", 0.001),
        ("50 ppm/K", "temperature-coefficient", 50e-6),
        ("50 ppm/°C", "temperature-coefficient", 50e-6),
        ("\u22120.5 dB", "level", -0.5),
        ("20 dB", "voltage-gain", 10.0),
        ("300 V/mV", "voltage-gain", 300e3),
        ("0.7071", "number", 0.7071),
    ],
)
def test_notations(text: str, quantity: str, value: float) -> None:
    assert parse(text, quantity) == value


def test_milli_and_mega_are_never_taken_for_each_other() -> None:
    for quantity in UNITS:
        assert parse("4m7", quantity) == 4.7e-3
        assert parse("4M7", quantity) == 4.7e6
        assert parse("1 m", quantity) == 1e-3
        assert parse("1 M", quantity) == 1e6


REFUSED = [
    ("15 nF", "resistance", "the unit F does not fit a resistance", "write a resistance"),
    ("10 kHz", "capacitance", "the unit Hz does not fit a capacitance", "write a capacitance"),
    ("1 %", "resistance", "the unit % does not fit a resistance", "write a resistance"),
    ("10 mhz", "frequency", "the prefix is not clear", "mHz for milli or MHz for mega"),
    ("10 MHZ", "frequency", "the prefix is not clear", "mHz for milli or MHz for mega"),
    ("4,7k", "resistance", "a number has no comma", "write 4.7k"),
    ("1:30", "frequency", "this is not a frequency", "without a colon"),
    ("0x10", "resistance", "'x' is no unit of a resistance", "such as"),
    ("1_000", "resistance", "this is not a resistance", "underscores"),
    ("٣", "resistance", "this is not a resistance", "such as"),
    ("nan", "number", "this is not a number", "finite"),
    ("inf", "number", "this is not a number", "finite"),
    ("1 000", "resistance", "this is not a resistance", "such as"),
    ("", "level", "the value is missing", "write -0.5 dB"),
    ("0.5", "level", "the unit is missing", "write 0.5 dB"),
    ("5", "percentage", "the unit is missing", "write 5 %"),
    ("50", "temperature-coefficient", "the unit is missing", "write 50 ppm/K"),
    ("1 mdB", "level", "a level takes no prefix", "without a prefix"),
    ("1 k", "number", "a number takes no prefix", "write the number out"),
    ("4R7", "capacitance", "the letter R is ambiguous in a capacitance", "practice differs"),
    ("4R7", "inductance", "the letter R is ambiguous in an inductance", "practice differs"),
    ("4L7", "resistance", "the letter L is ambiguous in a resistance", "practice differs"),
    ("1e999", "resistance", "the number is too large", "smaller"),
    ("20000 dB", "voltage-gain", "the number is too large", "smaller"),
    ("1" * 100, "resistance", "the text is too long", "write a number"),
    ("10 furlongs", "resistance", "'furlongs' is no unit of a resistance", "such as 4k7"),
]


@pytest.mark.parametrize(("text", "quantity", "problem", "fix"), REFUSED)
def test_refusals(text: str, quantity: str, problem: str, fix: str) -> None:
    with pytest.raises(QuantityError) as raised:
        parse(text, quantity)

    assert raised.value.problem == problem
    assert fix in raised.value.fix
    assert raised.value.allowed.startswith(QUANTITIES[quantity].noun)


@settings(max_examples=2000, deadline=None)
@given(st.text(max_size=80), st.sampled_from(list(QUANTITIES)))
def test_any_text_is_a_number_or_a_refusal(text: str, quantity: str) -> None:
    try:
        value = parse(text, quantity)
    except QuantityError as error:
        sound = bool(error.problem and error.fix)
    else:
        sound = math.isfinite(value)
    assert sound


@pytest.mark.parametrize(
    ("value", "quantity", "text"),
    [
        (21460.0, "resistance", "21.46 kΩ"),
        (999999.0, "resistance", "1 MΩ"),
        (1.5e-8, "capacitance", "15 nF"),
        (-0.0004, "level", "0.000 dB"),
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
