"""The README's commands and files do what it says."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path

import pytest
import yaml

from filtercheck import cli, demo, explain

ROOT = Path(__file__).parent.parent
README = (ROOT / "README.md").read_text("utf-8")


def blocks(language: str) -> list[str]:
    return re.findall(rf"```{language}\n(.*?)```", README, re.DOTALL)


def shell() -> list[str]:
    return [line for block in blocks("sh") for line in block.splitlines()]


def run(command: str, folder: Path) -> subprocess.CompletedProcess[str]:
    """Run a command of the README with the environment that runs the tests."""
    ours = command.replace(".venv/bin/filtercheck", f"{sys.executable} -m filtercheck")
    return subprocess.run(
        ["bash", "-c", ours], cwd=folder, capture_output=True, text=True, check=False
    )


def test_first_command_judges_the_demo_board_and_the_edit_breaks_it(tmp_path: Path) -> None:
    first, edit, again = shell()[0], shell()[1], shell()[2]
    install, _, judge = first.rpartition(" && ")

    assert install == "python3 -m venv .venv && .venv/bin/pip install -q -e '.[test]'"
    good = run(judge, tmp_path)
    assert (good.returncode, good.stderr) == (0, "")
    assert (tmp_path / "filtercheck-demo/results/junit.xml").exists()
    assert (tmp_path / "filtercheck-demo/results/evidence.json").exists()

    assert run(edit, tmp_path).returncode == 0
    spoiled = run(again, tmp_path)
    assert spoiled.returncode == 1
    (shown,) = blocks("text")
    assert shown in spoiled.stdout


def test_second_command_is_what_ci_runs() -> None:
    second = shell()[3]

    assert second.endswith(".venv/bin/python -m pytest")
    assert second in (ROOT / ".ci" / "run").read_text("utf-8").splitlines()


def test_the_demo_itself_tells_the_same_edit() -> None:
    assert f"R312: {{resistance: {demo.GOOD}" in README
    assert f"R312: {{resistance: {demo.BAD}" in README
    assert demo.SPOILED in README


def test_the_first_filter_passes(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (own,) = (block for block in blocks("yaml") if block.startswith("format:"))
    (tmp_path / "hum.filter.yaml").write_text(own, "utf-8")
    monkeypatch.chdir(tmp_path)

    assert cli.main(["check", "hum.filter.yaml"]) == 0


@pytest.mark.parametrize("command", re.findall(r"`filtercheck (response [^`]*)`", README))
def test_commands_in_the_text_run(
    command: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (own,) = (block for block in blocks("yaml") if block.startswith("format:"))
    (tmp_path / "hum.filter.yaml").write_text(own, "utf-8")
    monkeypatch.chdir(tmp_path)

    assert cli.main(command.split()) == 0


def test_topics_in_the_text_exist() -> None:
    topics = re.findall(r"filtercheck explain ([a-z-]+)", README)

    assert topics
    assert all(explain.manual(topic) for topic in topics)


def test_the_pipeline_snippet_uses_options_that_exist(tmp_path: Path) -> None:
    steps = next(yaml.safe_load(block) for block in blocks("yaml") if block.startswith("- run"))
    command = next(step["run"] for step in steps if "--junit" in step["run"])
    demo.write(tmp_path)

    ours = command.replace("filtercheck", f"{sys.executable} -m filtercheck", 1)
    assert run(ours, tmp_path).returncode == 0
    assert (tmp_path / "results" / "junit.xml").exists()


def test_links_lead_somewhere() -> None:
    links = re.findall(r"\]\(([^)]+)\)", README)

    assert links
    assert [link for link in links if not (ROOT / link).exists()] == []


def test_the_caution_is_there() -> None:
    assert "A computed check is no certificate." in README
