"""The typed description is the schema, field by field: names, order, kinds, choices, bounds, and what must be given.

A description that can be built is therefore not held against the schema once more.
"""

from __future__ import annotations

import types
import typing
from collections.abc import Mapping
from typing import Any, Literal, get_args, get_origin

import msgspec
import pytest

from tidegate.lint.description.load import description_schema
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.part import Element, Name, Part, use_of
from tidegate.lint.quantity import Basis, Span

SCHEMA = description_schema()
DEFS = SCHEMA["$defs"]
PLAIN = {"string": str, "number": float, "integer": int, "boolean": bool}


def structs(kind: type[msgspec.Struct], known: dict[str, type[msgspec.Struct]]) -> dict[str, type[msgspec.Struct]]:
    """Every struct that a struct is made of, by name."""
    known[kind.__name__] = kind
    for field in msgspec.structs.fields(kind):
        for part in parts(field.type):
            if isinstance(part, type) and issubclass(part, msgspec.Struct) and part.__name__ not in known:
                structs(part, known)
    return known


def parts(kind: Any) -> list[Any]:
    return [kind, *(inner for part in get_args(kind) for inner in parts(part))]


STRUCTS = structs(Description, {})
MADE = {name: node for name, node in DEFS.items() if "properties" in node and name != "basis"}


def struct_of(name: str) -> type[msgspec.Struct]:
    """The struct of a definition: ``output_stage`` is ``OutputStage``."""
    return STRUCTS["".join(word.capitalize() for word in name.split("_"))]


def without_none(kind: Any) -> tuple[Any, ...]:
    """The members of a union, None and the marks of what a fact is for left out."""
    members = get_args(kind) if get_origin(kind) in (types.UnionType, typing.Union) else (kind,)
    members = tuple(unmarked(member) for member in members if member is not types.NoneType)
    return without_none(members[0]) if members != (kind,) and len(members) == 1 else members


def unmarked(kind: Any) -> Any:
    """A type without the mark of what a fact is for."""
    if get_origin(kind) is not typing.Annotated:
        return kind
    plain, *metas = get_args(kind)
    kept = tuple(meta for meta in metas if not meta.extra)
    return typing.Annotated[(plain, *kept)] if kept else plain


BOUNDS = {
    "minLength": "min_length", "minItems": "min_length", "minimum": "ge", "exclusiveMinimum": "gt", "maximum": "le",
    "pattern": "pattern",
}  # fmt: skip


def bounded(kind: Any) -> tuple[Any, dict[str, Any]]:
    """A type without its bounds, and the bounds."""
    if get_origin(kind) is not typing.Annotated:
        return kind, {}
    plain, *metas = get_args(kind)
    names = set(BOUNDS.values())
    return plain, {name: getattr(meta, name) for meta in metas for name in names if getattr(meta, name) is not None}


def bounds_of(node: Mapping[str, Any]) -> dict[str, Any]:
    """The bounds of the schema, as the model names them; a dollar sign in a pattern means the very end of the text."""
    bounds = {ours: node[theirs] for theirs, ours in BOUNDS.items() if theirs in node}
    if "pattern" in bounds:
        assert bounds["pattern"].endswith("$")
        bounds["pattern"] = bounds["pattern"].removesuffix("$") + r"\Z"
    return bounds


def agrees(kind: Any, node: Mapping[str, Any]) -> bool:
    """Whether a type of the model is what the schema says, with every bound."""
    members = without_none(kind)
    if "anyOf" in node and "x-quantity" not in node:
        const, inner = node["anyOf"]
        if "x-names" in node:  # a name, or none
            assert (const, inner) == ({"const": "none"}, {"$ref": "#/$defs/id"})
            pattern = bounds_of(DEFS["id"])["pattern"].replace(r"|none$", "")
            return bounded(members[0]) == (str, {"pattern": pattern})
        return set(members) == {Literal[const["const"]], struct_of(inner["$ref"].rpartition("/")[2])}
    (member,) = members
    plain, bounds = bounded(member)
    if "$ref" in node:
        name = node["$ref"].rpartition("/")[2]
        if name == "id":
            pattern = bounds_of(DEFS["id"])["pattern"].replace("none$", r"none\Z")
            return (plain, bounds) == (str, {"pattern": pattern})
        if "x-quantity" in DEFS[name]:
            return bool(issubclass(member, Span) and member.dimension.value == name)
        return member is struct_of(name)
    if "enum" in node:
        # Types that differ in the order of their choices alone are one type to Python.
        return get_origin(member) is Literal and set(get_args(member)) == set(node["enum"])
    if bounds != bounds_of(node):
        return False
    if node["type"] == "array":
        item, more = get_args(plain)
        return get_origin(plain) is tuple and more is Ellipsis and agrees(item, node["items"])
    if node["type"] == "object":
        key, value = get_args(plain)
        return (
            get_origin(plain) in (dict, Mapping)
            and agrees(key, node["propertyNames"])
            and agrees(value, node["additionalProperties"])
        )
    return plain is PLAIN[node["type"]]


def as_read(node: Mapping[str, Any]) -> Mapping[str, Any]:
    """What the model holds of a value: where ``none`` is read as another, never the word."""
    inner: Mapping[str, Any] = node if node.get("x-none", "none") == "none" else node["anyOf"][1]
    return inner


def check(kind: type[msgspec.Struct], node: Mapping[str, Any]) -> None:
    """Compare a struct with the object of the schema that it stands for."""
    fields = {field.encode_name: field for field in msgspec.structs.fields(kind)}
    if issubclass(kind, Element):
        assert fields.pop("id").required
    assert list(fields) == list(node["properties"])
    for name, field in fields.items():
        assert agrees(field.type, as_read(node["properties"][name])), name
        if issubclass(kind, Part):
            assert use_of(kind, field.name) == node["properties"][name].get("x-use", "varies"), name
        assert field.required == (name in node.get("required", ())), name
        if not field.required:
            lists_or_sections = without_none(field.type) == (field.type,)
            assert lists_or_sections or field.default is None, name


def test_the_whole_description_is_the_schema() -> None:
    check(Description, SCHEMA)


@pytest.mark.parametrize("name", MADE)
def test_a_part_of_the_description_is_its_definition(name: str) -> None:
    kind = struct_of(name)
    assert issubclass(kind, Part)
    check(kind, MADE[name])


def test_the_basis_of_a_number_is_its_definition() -> None:
    check(Basis, DEFS["basis"])


def test_no_part_stands_alone() -> None:
    assert len(STRUCTS) == len(MADE) + 1


@pytest.mark.parametrize("kind", STRUCTS.values(), ids=STRUCTS)
def test_every_part_is_frozen(kind: type[msgspec.Struct]) -> None:
    assert kind.__struct_config__.frozen


@pytest.mark.parametrize("kind", [*STRUCTS.values(), Basis], ids=[*STRUCTS, "Basis"])
def test_no_part_takes_keys_that_the_schema_does_not_know(kind: type[msgspec.Struct]) -> None:
    assert kind.__struct_config__.forbid_unknown_fields


def test_an_element_knows_its_section() -> None:
    elements = {kind for kind in STRUCTS.values() if issubclass(kind, Element)}
    by_section = {kind.section: kind for kind in elements}
    assert len(by_section) == len(elements)
    for section, kind in by_section.items():
        (member,) = without_none({f.name: f.type for f in msgspec.structs.fields(Description)}[section])
        assert get_args(member) == (Name, kind)
    uv = struct_of("comparator")
    assert issubclass(uv, Element)
    assert msgspec.convert({"id": "uv", "role": "power_on", "watches": "a"}, uv).fact("trip") == "comparators.uv.trip"


def test_what_each_fact_is_for_is_marked_once_where_its_field_is_defined() -> None:
    marked = {
        f"{kind.__name__}.{field.name}": use
        for kind in STRUCTS.values()
        if issubclass(kind, Part)
        for field in msgspec.structs.fields(kind)
        if (use := use_of(kind, field.name)) != "varies"
    }
    assert marked == {
        "Rail.guaranteed": "ability", "Need.works": "ability", "OutputStage.release_delay": "promise",
        "Comparator.undecided": "promise", "OutputStage.hold": "promise", "OutputStage.power_up": "promise",
        "OutputStage.discharge": "promise", "Reference.start_up": "promise", "Bias.start_up": "promise",
        "Bypass.hold": "promise", "Bypass.locked_outside_test": "promise", "Bypass.readable": "promise",
        "Bypass.reset_by": "promise", "Load.synchronised": "promise", "Neighbour.mutual": "promise",
        "Conditions.combine": "policy", "Conditions.coverage": "policy", "Conditions.false_trips": "policy",
    }  # fmt: skip
    with pytest.raises(KeyError):
        use_of(Part, "nothing")
