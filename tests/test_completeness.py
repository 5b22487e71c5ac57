"""What must stay in step: tables, schemas, cases, packages. A failure names the missing piece."""

from __future__ import annotations

import json
import tomllib
from pathlib import Path
from typing import Any

import pytest

import filtercheck
from filtercheck.circuits import CIRCUITS
from filtercheck.circuits.circuit import Circuit
from filtercheck.network.diagnosis import check
from filtercheck.network.elements import Network
from filtercheck.preferred import SERIES
from filtercheck.quantities import QUANTITIES
from filtercheck.requirements import KINDS
from filtercheck.requirements.kind import Kind

ROOT = Path(__file__).parent.parent
CASES = ROOT / "tests" / "cases"
SCHEMA: dict[str, Any] = json.loads((ROOT / "schemas" / "filter.schema.json").read_text("utf-8"))
DEFINITIONS: dict[str, Any] = SCHEMA["definitions"]


def defined(prefix: str) -> list[str]:
    return [name.removeprefix(prefix) for name in DEFINITIONS if name.startswith(prefix)]


def branches(definition: str, key: str) -> list[str]:
    return [b["if"]["properties"][key]["const"] for b in DEFINITIONS[definition]["allOf"]]


def test_every_kind_is_in_the_schema() -> None:
    listed = DEFINITIONS["requirement"]["properties"]["kind"]["enum"]

    assert listed == list(KINDS) == defined("kind-") == branches("requirement", "kind")


def test_every_circuit_is_in_the_schema() -> None:
    listed = DEFINITIONS["section"]["properties"]["circuit"]["enum"]

    assert listed == list(CIRCUITS) == defined("circuit-") == branches("section", "circuit")


@pytest.mark.parametrize("circuit", CIRCUITS.values(), ids=lambda circuit: circuit.name)
def test_roles_of_the_schema_are_those_of_the_circuit(circuit: Circuit) -> None:
    rule = DEFINITIONS[f"circuit-{circuit.name}"]

    assert list(rule["properties"]) == list(circuit.roles)
    assert rule["required"] == [r for r in circuit.roles if r not in circuit.optional]


@pytest.mark.parametrize("circuit", CIRCUITS.values(), ids=lambda circuit: circuit.name)
def test_a_circuit_documents_itself(circuit: Circuit) -> None:
    for role in circuit.roles:
        assert role in circuit.manual
    assert f"circuit: {circuit.name}\n" in circuit.manual
    fit = circuit.manual.partition("fit: {")[2].partition("}")[0]
    for role in circuit.roles:
        assert (f"{role}: " in fit) == (role not in circuit.optional), role
    assert "Source: " in circuit.manual
    for output in circuit.outputs:
        assert f"{output} = " in circuit.manual or f"{output}  = " in circuit.manual


@pytest.mark.parametrize("circuit", CIRCUITS.values(), ids=lambda circuit: circuit.name)
@pytest.mark.parametrize("bare", [True, False])
def test_a_circuit_is_sound_with_and_without_optional_parts(circuit: Circuit, bare: bool) -> None:
    given = [r for r in circuit.roles if not (bare and r in circuit.optional)]
    network = Network(circuit.fitted(given))

    check(network, frozenset(circuit.outputs.values()))
    assert set(circuit.outputs.values()) <= set(network.nodes)


@pytest.mark.parametrize("name", [*KINDS, *CIRCUITS])
def test_module_and_name_are_the_same_word(name: str) -> None:
    room = "requirements" if name in KINDS else "circuits"
    module = Path(filtercheck.__file__).parent / room / f"{name.replace('-', '_')}.py"

    assert module.exists()


@pytest.mark.parametrize("kind", KINDS.values(), ids=lambda kind: kind.name)
def test_a_kind_documents_its_own_yaml(kind: Kind) -> None:
    assert f"kind: {kind.name}" in kind.manual
    for key in DEFINITIONS[f"kind-{kind.name}"]["properties"]:
        assert f"{key}:" in kind.manual or f"`{key}`" in kind.manual


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("outcome", ["pass", "fail", "undecided"])
def test_every_kind_has_a_case_of_each_outcome(kind: str, outcome: str) -> None:
    assert list((CASES / kind / outcome).glob("*.filter.yaml"))


def test_every_case_is_of_a_known_kind() -> None:
    assert {path.name for path in CASES.iterdir()} == set(KINDS)


def test_quantities_and_series_of_the_schema_are_known() -> None:
    used: set[str] = set()

    def walk(rule: Any) -> None:
        if isinstance(rule, dict):
            if isinstance(rule.get("quantity"), str):
                used.add(rule["quantity"])
            for value in rule.values():
                walk(value)
        elif isinstance(rule, list):
            for value in rule:
                walk(value)

    walk(SCHEMA)
    assert used <= set(QUANTITIES)
    assert DEFINITIONS["part"]["properties"]["series"]["enum"] == list(SERIES)


@pytest.mark.parametrize("path", sorted((ROOT / "schemas").glob("*.json")), ids=lambda p: p.name)
def test_schemas_are_draft_07_and_complete_in_themselves(path: Path) -> None:
    from jsonschema import Draft7Validator

    rules = json.loads(path.read_text("utf-8"))
    Draft7Validator.check_schema(rules)

    assert rules["$schema"] == "http://json-schema.org/draft-07/schema#"
    assert '"oneOf"' not in path.read_text("utf-8")
    assert all(ref.startswith("#/definitions/") for ref in references(rules))


def references(rule: Any) -> list[str]:
    if isinstance(rule, dict):
        own = [rule["$ref"]] if isinstance(rule.get("$ref"), str) else []
        return own + [ref for value in rule.values() for ref in references(value)]
    if isinstance(rule, list):
        return [ref for value in rule for ref in references(value)]
    return []


def test_every_package_is_shipped() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))
    house = Path(filtercheck.__file__).parent
    packages = {
        ".".join(path.parent.relative_to(house.parent).parts) for path in house.rglob("__init__.py")
    }

    assert set(project["tool"]["setuptools"]["packages"]) == packages | {"filtercheck.schemas"}
