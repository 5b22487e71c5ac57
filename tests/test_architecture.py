"""The house is a test: who may import whom."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from pathlib import Path

import pytest

import filtercheck

HOUSE = Path(filtercheck.__file__).parent
WORDS = {"position", "wording", "errors", "quantities", "preferred"}
MAY_IMPORT = {
    "position": set(),
    "wording": set(),
    "errors": {"position", "wording"},
    "quantities": {"errors", "wording"},
    "preferred": {"errors"},
    "model": WORDS,
    "network": {"errors"},
    "circuits": {"network"},
    "tolerance": {"errors", "network"},
    "requirements": WORDS | {"model", "network", "tolerance"},
    "wiring": WORDS | {"model", "network", "circuits", "tolerance"},
    "verification": WORDS | {"model", "network", "tolerance", "wiring", "requirements"},
    "check": WORDS | {"model", "network", "wiring", "requirements", "verification"},
    "inspecting": {"model", "wiring", "check", "verification"},
    "sampling": WORDS | {"model", "network", "wiring"},
    "reading": WORDS | {"model"},
    "report": WORDS | {"model"},
    "pipeline": {"errors", "model", "reading", "check", "sampling", "inspecting"},
    "explain": WORDS | {"model", "reading", "circuits", "requirements", "verification"},
    "demo": {"errors"},
    "cli": {"errors", "quantities", "model", "pipeline", "report", "explain", "demo", "sampling"},
}
# The longest a module may be; one that grows beyond holds two ideas.
LONGEST = 250


def imports() -> Iterator[tuple[str, str, str]]:
    """Yield the importing room, the room imported and the place of every import."""
    for path in sorted(HOUSE.rglob("*.py")):
        inside = path.relative_to(HOUSE)
        room = inside.parts[0].removesuffix(".py")
        for node in ast.walk(ast.parse(path.read_text("utf-8"))):
            if isinstance(node, ast.ImportFrom):
                assert node.level == 0, f"{inside}:{node.lineno}: relative import"
                names = [f"{node.module}.{alias.name}" for alias in node.names]
            elif isinstance(node, ast.Import):
                names = [alias.name for alias in node.names]
            else:
                continue
            for name in names:
                parts = name.split(".")
                if parts[0] == "filtercheck" and len(parts) > 1:
                    yield room, parts[1], f"{inside}:{node.lineno}"


def rooms() -> set[str]:
    return {
        path.stem
        for path in HOUSE.iterdir()
        if path.suffix == ".py" or (path / "__init__.py").exists()
    } - {"__init__", "__main__"}


def test_every_room_is_in_the_table() -> None:
    assert rooms() == set(MAY_IMPORT)


def test_every_import_keeps_to_the_table() -> None:
    free = {"__init__", "__main__"}
    wrong = [
        f"{where}: {room} may import {sorted(MAY_IMPORT[room] | {room})}, not {other}"
        for room, other, where in imports()
        if room not in free and other != "__version__" and other not in MAY_IMPORT[room] | {room}
    ]

    assert wrong == []


def test_every_entry_of_the_table_is_used() -> None:
    met = {(room, other) for room, other, _ in imports()}
    spare = [
        (room, other)
        for room, others in MAY_IMPORT.items()
        for other in others - WORDS
        if (room, other) not in met
    ]

    assert spare == []


def test_only_the_command_line_prints() -> None:
    printing = [
        str(path.relative_to(HOUSE))
        for path in HOUSE.rglob("*.py")
        for node in ast.walk(ast.parse(path.read_text("utf-8")))
        if isinstance(node, ast.Call) and getattr(node.func, "id", None) == "print"
    ]

    assert set(printing) == {"cli.py"}


@pytest.mark.parametrize("module", ["time", "datetime", "socket", "platform", "random", "getpass"])
def test_nothing_reads_the_clock_the_host_or_the_network(module: str) -> None:
    reading = [
        str(path)
        for path in HOUSE.rglob("*.py")
        for node in ast.walk(ast.parse(path.read_text("utf-8")))
        if (isinstance(node, ast.Import) and module in [a.name for a in node.names])
        or (isinstance(node, ast.ImportFrom) and node.module == module)
    ]

    assert reading == []


def test_no_module_is_too_long() -> None:
    long = {
        str(path.relative_to(HOUSE)): count
        for path in HOUSE.rglob("*.py")
        if (count := len(path.read_text("utf-8").splitlines())) > LONGEST
    }

    assert long == {}
