"""The linter, the formatter and the type checker, as tests."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent


@pytest.mark.parametrize(
    "command",
    [("ruff", "check", "."), ("ruff", "format", "--check", "."), ("mypy",)],
    ids=lambda command: " ".join(command),
)
def test_clean(command: tuple[str, ...]) -> None:
    ended = subprocess.run(
        [sys.executable, "-m", *command], cwd=ROOT, capture_output=True, text=True, check=False
    )

    assert ended.returncode == 0, ended.stdout + ended.stderr
