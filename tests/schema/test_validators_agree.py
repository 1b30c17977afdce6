"""The quick validator and the explaining library say the same of any data, and what one refuses the loader explains."""

from __future__ import annotations

import json
from collections.abc import Mapping
from typing import Any

import jsonschema_rs
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from jsonschema import Draft202012Validator

from tidegate.lint.description.load import description_schema, load
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


def fitting(node: Mapping[str, Any], depth: int = 0) -> st.SearchStrategy[Any]:
    """Data that fit a schema, made from the schema alone."""
    if "x-quantity" in node:
        texts = quantities(Dimension(node["x-quantity"]))
        return st.one_of(texts, st.fixed_dictionaries({"typ": texts}), fitting(node["anyOf"][1], depth))
    if "anyOf" in node:
        return st.one_of([fitting(branch, depth) for branch in node["anyOf"]])
    if "$ref" in node:
        name = node["$ref"].rpartition("/")[2]
        return st.deferred(lambda: fitting(DEFS[name], depth + 1))
    if "const" in node:
        return st.just(node["const"])
    if "enum" in node:
        return st.sampled_from(node["enum"])
    match node["type"]:
        case "string":
            examples = node.get("examples", ["1.62 V"])
            return st.sampled_from(examples) if "pattern" in node else st.text("abc é.", min_size=1, max_size=5)
        case "number":
            return st.sampled_from([0.25, 0.5, 1, 1.0])
        case "integer":
            return st.integers(1, 9)
        case "boolean":
            return st.booleans()
        case "array":
            return st.lists(fitting(node["items"], depth), max_size=2, unique_by=json.dumps)
        case _ if "properties" in node:
            return objects(node, depth)
        case _:
            names = st.sampled_from(["avdd", "uv_core", "_a-1", "x-own", "n" * 64])
            return st.dictionaries(names, fitting(node["additionalProperties"], depth), max_size=2)


@st.composite
def objects(draw: st.DrawFn, node: Mapping[str, Any], depth: int) -> dict[str, Any]:
    """A mapping with what it needs and a few of the other keys."""
    needed = node.get("required", [])
    others = [key for key in node["properties"] if key not in needed]
    most = 0 if depth > 6 else 3
    keys = [*needed, *draw(st.lists(st.sampled_from(others), max_size=most, unique=True) if others else st.just([]))]
    data = {key: draw(fitting(node["properties"][key], depth)) for key in keys}
    if draw(st.integers(0, 9)) == 0:
        data["x-own"] = draw(ODD)
    return data


ODD = st.sampled_from(
    ["", "x", "none", "1 V", "1.8", "1 V\u00a0", "-1 V", "5 %", 0, 1, -1, 2.5, 1e300, True, False, [], {}, [1], ["a", "a"],
     {"min": "1 V"}, {"min": 1}, {"zzz": 1}, {"x-a": {}}, "a" * 200, "é", {"": 1}]
)  # fmt: skip


@st.composite
def changed(draw: st.DrawFn) -> Any:
    """Data that fit, with a few values exchanged, keys added or taken away."""
    data = draw(fitting(SCHEMA))
    for _ in range(draw(st.integers(0, 3))):
        node, steps = data, draw(st.integers(1, 5))
        for _ in range(steps):
            keys = list(node) if isinstance(node, dict) else list(range(len(node)))
            key = draw(st.sampled_from([*keys, "zzz"] if isinstance(node, dict) else keys)) if keys else "zzz"
            inner = node.get(key) if isinstance(node, dict) else node[key] if keys else None
            if isinstance(inner, dict) or (isinstance(inner, list) and inner):
                node = inner
                continue
            if isinstance(node, dict) and key in node and draw(st.booleans()):
                del node[key]
            elif isinstance(node, dict) or keys:
                node[key] = draw(ODD)
            break
    return json.loads(json.dumps(data))


@given(fitting(SCHEMA))
@settings(max_examples=60, deadline=None)
def test_data_made_from_the_schema_fit_to_both(data: Any) -> None:
    assert [error.message for error in SLOW.iter_errors(data)] == []
    assert QUICK.is_valid(data)


@given(changed())
@settings(max_examples=150, deadline=None)
def test_both_say_the_same_of_changed_data(data: Any) -> None:
    assert SLOW.is_valid(data) == QUICK.is_valid(data)


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
