"""Which files a command judges, and in which order."""

from __future__ import annotations

from pathlib import Path

import pytest

from filtercheck.errors import InputErrors, UsageError
from filtercheck.reading.discovery import find

BOARD = "format: filtercheck-board/1\nboard: logger\n"


@pytest.fixture(autouse=True)
def tree(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    for name in ("b/two", "a/one", ".hidden/three", "b/deep/er/four"):
        place = tmp_path / f"{name}.filter.yaml"
        place.parent.mkdir(parents=True, exist_ok=True)
        place.write_text("", "utf-8")
    monkeypatch.chdir(tmp_path)


def names(*paths: str) -> list[str]:
    return [file.name for file in find(paths).files]


def test_all_below_the_current_folder_in_order_of_their_names() -> None:
    assert names() == ["a/one.filter.yaml", "b/deep/er/four.filter.yaml", "b/two.filter.yaml"]
    assert find([]).board == ""


def test_a_folder_and_a_file_in_it_are_judged_once() -> None:
    assert names("b", "b/two.filter.yaml", "./b") == [
        "b/deep/er/four.filter.yaml",
        "b/two.filter.yaml",
    ]


def test_the_board_is_found_upwards(monkeypatch: pytest.MonkeyPatch) -> None:
    Path("filtercheck.yaml").write_text(f"{BOARD}filters: [b/*.filter.yaml]\n", "utf-8")
    monkeypatch.chdir("b/deep")

    assert names() == ["../../b/two.filter.yaml"]
    assert find([]).board == "logger"


def test_a_board_without_patterns_has_all_files_below_it() -> None:
    Path("filtercheck.yaml").write_text(BOARD, "utf-8")

    assert len(names()) == 3


def test_a_pattern_that_matches_nothing_is_an_error() -> None:
    Path("filtercheck.yaml").write_text(f"{BOARD}filters: [c/*.filter.yaml]\n", "utf-8")
    with pytest.raises(InputErrors) as raised:
        find([])

    assert str(raised.value.errors[0].at) == "filtercheck.yaml:3:11"
    assert raised.value.errors[0].problem == "the pattern matches no file"


def test_a_board_file_is_held_against_its_schema() -> None:
    Path("filtercheck.yaml").write_text(f"{BOARD}filtres: [b]\n", "utf-8")
    with pytest.raises(InputErrors) as raised:
        find([])

    assert raised.value.errors[0].problem == "unknown key 'filtres'"
    assert raised.value.errors[0].fix == "write filters"


def test_nothing_to_judge_is_an_error() -> None:
    Path("empty").mkdir()
    with pytest.raises(UsageError, match=r"no \*\.filter\.yaml file in empty"):
        find(["empty"])
    with pytest.raises(UsageError, match="nowhere does not exist"):
        find(["nowhere"])
