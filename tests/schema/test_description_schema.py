"""The schema of a description: valid, told in words with examples that fit, closed, and at one with the units."""

from __future__ import annotations

import json
import re
from collections.abc import Iterator, Mapping
from typing import Any

import jsonschema_rs
import pytest
from jsonschema import Draft202012Validator

from tidegate.lint.description.load import description_schema, schema_text
from tidegate.lint.description.model.description import POLICY
from tidegate.lint.description.names import NAMED_SECTIONS, name_fields, unique_lists
from tidegate.lint.quantity import Dimension, parse, pattern

SCHEMA = description_schema()
DEFS = SCHEMA["$defs"]
VALIDATOR = Draft202012Validator(SCHEMA)
QUICK = jsonschema_rs.validator_for(dict(SCHEMA))

# What the explaining half of the loader has words for; further keywords need further words.
EXPLAINED = {
    "type", "enum", "const", "pattern", "minimum", "exclusiveMinimum", "maximum", "exclusiveMaximum", "minLength",
    "minItems", "minProperties", "uniqueItems", "required", "properties", "patternProperties", "additionalProperties",
    "propertyNames", "items", "anyOf", "$ref",
}  # fmt: skip
SAID = {
    "$schema",
    "$id",
    "$defs",
    "title",
    "description",
    "examples",
    "x-quantity",
    "x-names",
    "x-none",
    "x-use",
    "default",
}


def below(node: Any, path: str = "#") -> Iterator[tuple[str, Mapping[str, Any]]]:
    """Every schema inside a schema, with its path; examples, and words, are none."""
    if not isinstance(node, dict):
        return
    yield path, node
    for keyword in ("properties", "$defs", "patternProperties"):
        for name, child in node.get(keyword, {}).items():
            yield from below(child, f"{path}/{keyword}/{name}")
    for keyword in ("items", "additionalProperties", "propertyNames"):
        yield from below(node.get(keyword), f"{path}/{keyword}")
    for number, child in enumerate(node.get("anyOf", ())):
        yield from below(child, f"{path}/anyOf/{number}")


NODES = tuple(below(SCHEMA))
PROPERTIES = tuple((path, node) for path, node in NODES if re.search(r"/properties/[^/]+$", path))
OBJECTS = tuple((path, node) for path, node in NODES if "properties" in node)


def test_the_schema_is_a_json_schema_of_draft_2020_12() -> None:
    assert SCHEMA["$schema"] == "https://json-schema.org/draft/2020-12/schema"
    Draft202012Validator.check_schema(SCHEMA)
    assert jsonschema_rs.meta.is_valid(dict(SCHEMA))
    assert json.loads(schema_text("description")) == SCHEMA


def test_every_keyword_is_known_to_the_words_of_faults() -> None:
    assert {keyword for _, node in NODES for keyword in node} <= EXPLAINED | SAID


@pytest.mark.parametrize(("path", "node"), PROPERTIES, ids=[path for path, _ in PROPERTIES])
def test_every_property_is_told_in_words_with_examples_that_fit(path: str, node: Mapping[str, Any]) -> None:
    assert re.match(r"[A-Z]\S", node["title"])
    assert re.fullmatch(r"[A-Z].*\.", node["description"])
    assert node["examples"]
    alone = Draft202012Validator(
        {"$ref": path, "$defs": DEFS, **({} if "$defs" in path else {"properties": SCHEMA["properties"]})}
    )
    for example in node["examples"]:
        assert [error.message for error in alone.iter_errors(example)] == []


@pytest.mark.parametrize("name", DEFS)
def test_every_definition_is_told_in_words_and_used(name: str) -> None:
    assert DEFS[name]["title"]
    assert DEFS[name]["description"].endswith(".")
    assert any(node.get("$ref") == f"#/$defs/{name}" for _, node in NODES)


def test_every_reference_leads_somewhere() -> None:
    for _, node in NODES:
        if "$ref" in node:
            assert node["$ref"].removeprefix("#/$defs/") in DEFS


@pytest.mark.parametrize(("path", "node"), OBJECTS, ids=[path for path, _ in OBJECTS])
def test_every_mapping_is_closed_but_for_the_keys_of_the_user(path: str, node: Mapping[str, Any]) -> None:
    assert node["type"] == "object", path
    assert node["additionalProperties"] is False
    assert node["patternProperties"] == {"^x-": True}
    assert not [key for key in node["properties"] if not re.fullmatch("[a-z][a-z0-9_]*", key)]
    assert set(node.get("required", ())) <= set(node["properties"])


def test_what_is_a_choice_has_no_choice_twice() -> None:
    for path, node in NODES:
        choices = node.get("enum", [])
        assert len(choices) == len(set(choices)), path


QUANTITIES = {name: node for name, node in DEFS.items() if "x-quantity" in node}


def test_every_dimension_has_its_definition() -> None:
    assert list(QUANTITIES) == [each.value for each in Dimension if each is not Dimension.COUNT]


@pytest.mark.parametrize("name", QUANTITIES)
def test_a_quantity_is_the_one_of_the_units(name: str) -> None:
    dimension, node = Dimension(name), QUANTITIES[name]
    assert node["x-quantity"] == name
    text, span = node["anyOf"]
    assert text == {"type": "string", "pattern": pattern(dimension)}
    assert list(span["properties"]) == ["min", "typ", "max", "basis"]
    for part in ("min", "typ", "max"):
        assert span["properties"][part]["pattern"] == pattern(dimension)
    assert f"({', '.join(dimension.units)})" in node["description"]
    assert ("zero or more" in node["description"]) != dimension.signed
    for example in node["examples"]:
        parse(example, dimension)


@pytest.mark.parametrize("name", QUANTITIES)
def test_every_unit_is_accepted_by_both_validators_and_read(name: str) -> None:
    dimension = Dimension(name)
    schema = {"$ref": f"#/$defs/{name}", "$defs": DEFS}
    slow, quick = Draft202012Validator(schema), jsonschema_rs.validator_for(schema)
    for unit in dimension.units:
        for given in (f"1 {unit}", f"2.5e-3 {unit}", {"min": f"1 {unit}", "max": f"2 {unit}"}):
            assert slow.is_valid(given)
            assert quick.is_valid(given)
        parse(f"1 {unit}", dimension)
        for wrong in (f"1 {unit}x", f"1  {unit}", f"{unit}", f"1,5 {unit}", f"1 {unit} ", f" 1 {unit}", 1, {}, []):
            assert not slow.is_valid(wrong), wrong
            assert not quick.is_valid(wrong), wrong
    below_zero = f"-1 {dimension.units[-1]}"
    assert slow.is_valid(below_zero) == quick.is_valid(below_zero) == dimension.signed


def test_names_lead_into_sections_that_exist() -> None:
    fields = name_fields(SCHEMA)
    assert {section for field in fields for section in field.sections} <= set(NAMED_SECTIONS)
    assert set(NAMED_SECTIONS) <= set(SCHEMA["properties"])
    ways = [field.way for field in fields]
    assert len(ways) == len(set(ways))
    assert ("comparators", "*", "watches") in ways
    assert ("output_stages", "*", "driven_by", "*") in ways
    assert ("scenarios", "*", "waveforms", "*", "rail") in ways


def test_every_reference_to_a_name_says_what_it_names() -> None:
    for path, node in PROPERTIES:
        branches = (node, node.get("items", {}), *node.get("anyOf", ()))
        names = any(branch.get("$ref") == "#/$defs/id" for branch in branches)
        assert names == ("x-names" in node), path


def test_none_is_said_where_the_schema_tells_what_it_reads_as_and_nowhere_else() -> None:
    for path, node in NODES:
        choices = [branch for branch in node.get("anyOf", ()) if "const" in branch]
        assert ("x-none" in node) == (choices == [{"const": "none"}]), path
        if "x-none" in node:
            assert node["anyOf"][0] == {"const": "none"}, path
            assert re.search(r"\bnone\b", node["description"]), path
        if node.get("x-none", "none") != "none":  # else the word itself is what rules ask for
            reads_as = Draft202012Validator({**node["anyOf"][1], "$defs": DEFS})
            assert [error.message for error in reads_as.iter_errors(node["x-none"])] == [], path


def test_policy_has_a_default_and_the_model_holds_the_same() -> None:
    assert [path for path, node in NODES if node.get("x-use") == "policy"] == [
        f"#/$defs/conditions/properties/{key}" for key in POLICY
    ]
    policy = {key: node["default"] for key, node in DEFS["conditions"]["properties"].items() if "default" in node}
    assert policy == POLICY
    assert [path for path, node in NODES if "default" in node] == [
        f"#/$defs/conditions/properties/{key}" for key in POLICY
    ]
    for key, value in policy.items():
        assert Draft202012Validator(DEFS["conditions"]).is_valid({key: value})


def test_what_can_be_complete_is_every_section_of_elements_and_the_modes() -> None:
    assert set(SCHEMA["properties"]["complete"]["items"]["enum"]) == {*NAMED_SECTIONS, "modes"}
    none = {key for key, node in SCHEMA["properties"].items() if "x-none" in node}
    assert none == {"loads", "modes", "bypasses", "neighbours"}


def test_no_list_of_names_holds_a_name_twice() -> None:
    named = {way[:-1] for field in name_fields(SCHEMA) if (way := field.way)[-1] == "*"}
    assert named < set(unique_lists(SCHEMA))
