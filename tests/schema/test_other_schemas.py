"""The schemas of settings, report and comparison: valid, told in words with examples that fit, closed."""

from __future__ import annotations

import json
import re
from collections.abc import Iterator, Mapping
from typing import Any

import pytest
from jsonschema import Draft202012Validator

from tidegate.lint.commands.schema import WHICH
from tidegate.lint.description.load import description_schema, schema_text
from tidegate.lint.reports.comparison_report import COMPARISON_SCHEMA
from tidegate.lint.reports.json_report import REPORT_SCHEMA
from tidegate.lint.settings import Settings

SCHEMAS: Mapping[str, Any] = {name: json.loads(schema_text(name)) for name in WHICH if name != "description"}


def properties(node: Any, path: str = "#") -> Iterator[tuple[str, Mapping[str, Any]]]:
    """Every property of a schema, with its path."""
    if not isinstance(node, dict):
        return
    for keyword in ("properties", "$defs"):
        for name, child in node.get(keyword, {}).items():
            if keyword == "properties":
                yield f"{path}/properties/{name}", child
            yield from properties(child, f"{path}/{keyword}/{name}")
    for keyword in ("items", "additionalProperties"):
        yield from properties(node.get(keyword), f"{path}/{keyword}")


ALL = [(name, path, node) for name, schema in SCHEMAS.items() for path, node in properties(schema)]


@pytest.mark.parametrize("name", SCHEMAS)
def test_a_schema_is_a_json_schema_of_draft_2020_12(name: str) -> None:
    Draft202012Validator.check_schema(SCHEMAS[name])
    version = {"report": REPORT_SCHEMA, "comparison": COMPARISON_SCHEMA}.get(name, f"urn:tidegate:{name}:1")
    assert SCHEMAS[name]["$id"] == version
    assert SCHEMAS[name]["additionalProperties"] is False


@pytest.mark.parametrize(("name", "path", "node"), ALL, ids=[f"{name} {path}" for name, path, _ in ALL])
def test_every_property_is_told_in_words_with_examples_that_fit(name: str, path: str, node: Mapping[str, Any]) -> None:
    assert re.match(r"[A-Z]\S", node["title"])
    assert re.fullmatch(r"[A-Z].*\.", node["description"])
    assert node["examples"]
    alone = Draft202012Validator({"$ref": path, **_parts(name)})
    for example in node["examples"]:
        assert [error.message for error in alone.iter_errors(example)] == []


def _parts(name: str) -> dict[str, Any]:
    """The schema's parts where references look for them, and none of its demands on the whole."""
    schema = SCHEMAS[name]
    return {"$defs": {**schema["$defs"]}, "properties": schema["properties"]}


def test_settings_are_what_their_schema_says() -> None:
    ours = {"file", "waived", "option_packs", "places"}  # what loading adds
    assert set(SCHEMAS["settings"]["properties"]) == set(Settings.__struct_fields__) - ours


def test_conditions_are_those_of_a_description() -> None:
    offered = SCHEMAS["settings"]["$defs"]["conditions"]["properties"]
    own = description_schema()["$defs"]["conditions"]["properties"]
    assert set(offered) == set(own) - {"note"} or set(offered) == set(own)
    for key, node in offered.items():
        assert node.get("description") == own[key].get("description"), key


@pytest.mark.parametrize("part", ["settings", "number"])
def test_report_and_comparison_share_their_parts(part: str) -> None:
    assert SCHEMAS["report"]["$defs"][part] == SCHEMAS["comparison"]["$defs"][part]
