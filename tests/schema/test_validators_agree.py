"""Building the description and two validators say the same of any data, and what is refused the loader explains."""

from __future__ import annotations

import json
from collections.abc import Mapping
from functools import cache
from typing import Any, Final

import jsonschema_rs
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from jsonschema import Draft202012Validator

from tidegate.lint.description.load import description_of, description_schema, load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.quantity import Dimension

SCHEMA = description_schema()
DEFS = SCHEMA["$defs"]
SLOW = Draft202012Validator(SCHEMA)
QUICK = jsonschema_rs.validator_for(dict(SCHEMA))
NUMBERS = st.sampled_from(["1", "2.5", "+3", "0", "4e-1", "12E+2"])


def quantities(dimension: Dimension) -> st.SearchStrategy[str]:
    """Texts of a dimension."""
    return st.builds("{} {}".format, NUMBERS, st.sampled_from(dimension.units))


@cache
def defined(name: str) -> st.SearchStrategy[Any]:
    """Data that fit one of the definitions."""
    return fitting(DEFS[name])


def fitting(node: Mapping[str, Any]) -> st.SearchStrategy[Any]:
    """Data that fit a schema, made from the schema alone."""
    if "x-quantity" in node:
        texts = quantities(Dimension(node["x-quantity"]))
        return texts | st.fixed_dictionaries({"typ": texts}, optional={"basis": defined("basis")})
    if "anyOf" in node:
        return st.one_of([fitting(branch) for branch in node["anyOf"]])
    if "$ref" in node:
        return defined(node["$ref"].rpartition("/")[2])
    if "const" in node or "enum" in node:
        return st.sampled_from(node.get("enum", [node.get("const")]))
    if node["type"] == "array":
        return st.lists(fitting(node["items"]), min_size=node.get("minItems", 0), max_size=2, unique_by=json.dumps)
    if node["type"] == "object":
        return mappings(node) if "properties" in node else sections(fitting(node["additionalProperties"]))
    if node["type"] == "string" and "pattern" in node:
        return st.sampled_from(node["examples"])
    return PLAIN[node["type"]]


PLAIN: Final = {
    "string": st.text("abc é.", min_size=1, max_size=5),
    "number": st.sampled_from([0.25, 0.5, 1, 1.0]),
    "integer": st.integers(1, 9),
    "boolean": st.booleans(),
}


def sections(entries: st.SearchStrategy[Any]) -> st.SearchStrategy[dict[str, Any]]:
    """A section with a few entries."""
    return st.dictionaries(st.sampled_from(["avdd", "uv_core", "_a-1", "n" * 64]), entries, max_size=2)


@st.composite
def mappings(draw: st.DrawFn, node: Mapping[str, Any]) -> dict[str, Any]:
    """A mapping with what it needs and a few of the other keys."""
    needed = node.get("required", [])
    others = [key for key in node["properties"] if key not in needed]
    keys = [*needed, *(draw(st.lists(st.sampled_from(others), max_size=3, unique=True)) if others else [])]
    data = {key: draw(of_property(node["properties"], key)) for key in keys}
    if draw(st.integers(0, 9)) == 0:
        data["x-own"] = draw(odd())
    return data


STRATEGIES: Final[dict[int, st.SearchStrategy[Any]]] = {}


def of_property(properties: Mapping[str, Any], key: str) -> st.SearchStrategy[Any]:
    """Data that fit a property; each strategy is made once."""
    node = properties[key]
    if id(node) not in STRATEGIES:
        STRATEGIES[id(node)] = fitting(node)
    return STRATEGIES[id(node)]


def odd() -> st.SearchStrategy[Any]:
    """A value that fits few places."""
    return st.sampled_from(ODD).map(json.loads)


ODD: Final = [
    json.dumps(value)
    for value in (
        "", "x", "none", "1 V", "1.8", "1 V\u00a0", "-1 V", "5 %", 0, 1, -1, 2.5, 1e300, True, False, [], {}, [1],
        ["a", "a"], {"min": "1 V"}, {"min": 1}, {"zzz": 1}, {"x-a": {}}, "a" * 200, "é", {"": 1},
    )
]  # fmt: skip


@st.composite
def changed(draw: st.DrawFn) -> Any:
    """Data that fit, with a few values exchanged, keys added or taken away."""
    data = json.loads(json.dumps(draw(fitting(SCHEMA))))
    for _ in range(draw(st.integers(0, 3))):
        node = data
        for _ in range(draw(st.integers(1, 5))):
            keys = [*node, "zzz"] if isinstance(node, dict) else list(range(len(node)))
            key = draw(st.sampled_from(keys))
            inner = None if key == "zzz" else node[key]
            if inner and isinstance(inner, dict | list):
                node = inner
                continue
            if inner is not None and isinstance(node, dict) and draw(st.booleans()):
                del node[key]
            else:
                node[key] = draw(odd())
            break
    return data


@given(fitting(SCHEMA))
@settings(max_examples=60, deadline=None)
def test_data_made_from_the_schema_fit_to_both(data: Any) -> None:
    assert [error.message for error in SLOW.iter_errors(data)] == []
    assert QUICK.is_valid(data)
    assert description_of(data) is not None


@given(changed())
@settings(max_examples=150, deadline=None)
def test_both_say_the_same_of_changed_data(data: Any) -> None:
    assert SLOW.is_valid(data) == QUICK.is_valid(data) == (description_of(data) is not None)


@given(changed())
@settings(max_examples=100, deadline=None)
def test_what_the_schema_refuses_is_explained_and_nothing_else(
    tmp_path_factory: pytest.TempPathFactory, data: Any
) -> None:
    file = tmp_path_factory.getbasetemp() / "data.json"
    file.write_text(json.dumps(data), "utf-8")
    try:
        load(file, shown="data.json")
    except DescriptionError as error:
        assert error.faults
        assert all(fault.problem and fault.advice and str(fault).isprintable() for fault in error.faults)
        assert "a value that does not fit" not in str(error)
    else:
        assert QUICK.is_valid(data)


def test_a_final_line_break_is_refused_by_the_quick_validator_alone() -> None:
    # The regular expressions of Python let $ match before a final line break: a pattern is never the only guard.
    data = {"rails": {"avdd": {"nominal": "1 V\n"}}}
    assert SLOW.is_valid(data)
    assert not QUICK.is_valid(data)
