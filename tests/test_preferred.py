"""Preferred values against the tables of IEC 60063 and against brute force."""

from __future__ import annotations

import math
import sys
from collections.abc import Callable
from pathlib import Path

import pytest
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from filtercheck.preferred import SERIES, is_member, members, nearest, neighbours
from filtercheck.quantities import parse

TABLES = yaml.safe_load((Path(__file__).parent / "reference" / "iec60063.yaml").read_text("utf-8"))[
    "series"
]


@pytest.mark.parametrize("series", SERIES)
def test_members_are_those_of_the_standard(series: str) -> None:
    assert list(members(series)) == TABLES[series]["values"]


def test_all_series_of_the_standard_are_there() -> None:
    assert set(TABLES) == set(SERIES)


@pytest.mark.parametrize("series", SERIES)
@pytest.mark.parametrize("exponent", [-15, -12, -3, 0, 1, 4, 9])
def test_members_are_members_in_every_decade(series: str, exponent: int) -> None:
    for member in TABLES[series]["values"]:
        assert is_member(float(f"{member}e{exponent}"), series)
        assert nearest(float(f"{member}e{exponent}"), series) == float(f"{member}e{exponent}")
        assert not is_member(float(f"{member}.0001e{exponent}"), series)


def test_irregular_members() -> None:
    # The rule would give 26, 29, 32, 35, 38, 42, 46, 83 and 919; the standard does not.
    assert {27, 30, 33, 36, 39, 43, 47, 82} <= set(members("E24"))
    assert not {26, 29, 32, 35, 38, 42, 46, 83} & set(members("E24"))
    assert 920 in members("E192")
    assert 919 not in members("E192")


@pytest.mark.parametrize("text", ["4k7", "4.7 kΩ", "4700", "R47", "47", "4M7", "0R47"])
def test_texts_state_exact_members(text: str) -> None:
    assert is_member(parse(text, "resistance"), "E3")


@settings(max_examples=1000, deadline=None)
@given(st.floats(1e-13, 1e9), st.sampled_from(SERIES))
def test_nearest_is_nearest_by_ratio(value: float, series: str) -> None:
    decades = range(-17, 12)
    near = [float(f"{m}e{e}") for e in decades for m in TABLES[series]["values"]]
    best = min(abs(math.log(member / value)) for member in near)

    chosen = nearest(value, series)
    assert is_member(chosen, series)
    assert abs(math.log(chosen / value)) <= best + 1e-15
    if not is_member(value, series):
        below, above = neighbours(value, series)
        assert below < value < above
        assert below == max(m for m in near if m < value)
        assert above == min(m for m in near if m > value)


def test_a_value_a_hair_below_a_decade_has_neighbours_in_both() -> None:
    # Read off the table of E24: 9.1 is its last member, 10 the first of the next decade.
    assert neighbours(9.9999999999, "E24") == (9.1, 10.0)
    assert neighbours(10.0, "E24") == (9.1, 11.0)


@pytest.mark.parametrize("series", SERIES)
def test_the_ends_of_the_floats(series: str) -> None:
    """No member above the largest floats is a float; the smallest float is itself a member."""
    decade = TABLES[series]["values"]
    inside = [float(f"{member}e{309 - len(str(decade[0]))}") for member in decade]
    top = max(member for member in inside if math.isfinite(member))

    assert neighbours(sys.float_info.max, series) == (top, math.inf)
    assert nearest(sys.float_info.max, series) == top
    for steps in range(1, 200):
        value = steps * 5e-324
        below, above = neighbours(value, series)
        assert below < value < above
        assert is_member(nearest(value, series), series)


@pytest.mark.parametrize("value", [0.0, -1.0, math.inf, -math.inf, math.nan])
@pytest.mark.parametrize("asked", [is_member, neighbours, nearest])
def test_values_that_cannot_be_preferred(
    asked: Callable[[float, str], object], value: float
) -> None:
    with pytest.raises(ValueError, match="positive"):
        asked(value, "E96")


def test_a_series_that_is_none() -> None:
    with pytest.raises(ValueError, match="no series E95"):
        members("E95")
    with pytest.raises(ValueError, match="no series E95"):
        nearest(1.0, "E95")
