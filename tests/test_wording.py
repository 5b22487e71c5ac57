"""Text from strangers' files, made safe to show; and lines that fit a terminal."""

from __future__ import annotations

import unicodedata

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from filtercheck.wording import WIDTH, listed, suggestion, visible, wrapped

# The characters that turn the reading direction: Unicode Standard Annex 9, table 1 (from
# memory), and the marks of section 2.6 there.
BIDI = "\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069\u200e\u200f\u061c"


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("plain text, {a: b}", "plain text, {a: b}"),
        ("4.7 kΩ ±1 % Größe 抵抗", "4.7 kΩ ±1 % Größe 抵抗"),
        ("two\nlines", "two\\x0alines"),
        ("back\rover", "back\\x0dover"),
        ("a\tb", "a\\x09b"),
        ("\x1b[2J\x1b[31m", "\\x1b[2J\\x1b[31m"),
        ("bell\x07", "bell\\x07"),
        ("gone\x08\x7f", "gone\\x08\\x7f"),
        ("a\x9bm", "a\\x9bm"),  # the control sequence introducer in one character
        ("next\x85line", "next\\x85line"),
        ("a\u2028b\u2029c", "a\\u2028b\\u2029c"),
        ("\u202egnp.exe", "\\u202egnp.exe"),
        ("zero\u200bwidth\ufeff", "zero\\u200bwidth\\ufeff"),
        ("soft\u00adhyphen", "soft\\xadhyphen"),
        ("half \ud800 pair", "half \\ud800 pair"),
        ("private \ue000", "private \\ue000"),
        ("tag \U000e0041", "tag \\U000e0041"),
        ("", ""),
    ],
)
def test_what_cannot_be_seen_is_shown_as_its_code(text: str, shown: str) -> None:
    assert visible(text) == shown


@pytest.mark.parametrize("mark", BIDI, ids=lambda mark: f"U+{ord(mark):04X}")
def test_every_mark_of_direction_is_shown_as_its_code(mark: str) -> None:
    assert visible(f"a{mark}b") == f"a\\u{ord(mark):04x}b"


@settings(max_examples=2000, deadline=None)
@given(st.text(st.characters(codec=None, categories=None), max_size=60))
def test_what_is_shown_is_one_line_and_can_be_written_anywhere(text: str) -> None:
    shown = visible(text)

    assert shown.encode("utf-8").decode("utf-8") == shown
    assert shown.splitlines() in ([shown], [])
    assert not any(unicodedata.category(c) in ("Cc", "Cf", "Cs") for c in shown)
    assert visible(shown) == shown


@pytest.mark.parametrize("indent", ["", "  ", "        "])
@settings(max_examples=300, deadline=None)
@given(text=st.text(st.sampled_from("abc -./:Ω"), max_size=400))
def test_wrapped_lines_fit_and_lose_nothing(indent: str, text: str) -> None:
    lines = wrapped(text, indent)

    assert all(len(line) <= WIDTH for line in lines)
    assert all(line.startswith(indent) for line in lines)
    assert "".join("".join(lines).split()) == "".join(text.split())


def test_a_word_longer_than_a_line_is_broken() -> None:
    lines = wrapped("x" * 200, "  ")

    assert [len(line) for line in lines] == [80, 80, 54]  # 78 + 74 + 48 of the 200
    assert lines[1].startswith("      x")


def test_a_name_with_hyphens_stays_whole() -> None:
    name = "vibration-antialias.filter.yaml"

    assert name in wrapped(f"{'word ' * 12}{name}")[1]


@pytest.mark.parametrize(
    ("word", "meant"),
    [
        ("resistence", "resistance"),
        ("Resistance", "resistance"),
        ("capacitanse", "capacitance"),
        ("zzz", None),
        ("", None),
    ],
)
def test_suggestion(word: str, meant: str | None) -> None:
    assert suggestion(word, ["resistance", "capacitance", "series"]) == meant


def test_nothing_is_suggested_where_nothing_is_allowed() -> None:
    assert suggestion("gain", []) is None


@pytest.mark.parametrize(
    ("words", "text"),
    [
        ([], "nothing"),
        (["a"], "a"),
        (["a", "b"], "a and b"),
        (["a", "b", "c"], "a, b and c"),
        (iter(["a", "b", "c"]), "a, b and c"),
        ({"x": 1, "y": 2}, "x and y"),
    ],
)
def test_listed(words: list[str], text: str) -> None:
    assert listed(words) == text
