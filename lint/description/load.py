"""A description, loaded: text to plain data, data against the schema, names, typed and frozen objects."""

from __future__ import annotations

import gc
import json
from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from functools import lru_cache
from itertools import islice
from pathlib import Path
from typing import Any, Final

import msgspec

import tidegate.schema
from tidegate.lint.description.contradictions import contradictions
from tidegate.lint.description.empty_values import fill_empty
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.names import (
    NAMED_SECTIONS,
    NameField,
    name_faults,
    name_fields,
    named_twice,
    unique_lists,
)
from tidegate.lint.description.place import DescriptionError, Fault, Place, dotted, steps
from tidegate.lint.description.reading import read_file
from tidegate.lint.description.said_none import NONE, NoneFields, none_fields, without_none
from tidegate.lint.description.scenario_points import point_faults
from tidegate.lint.description.schema_tree import Way, without_own_keys
from tidegate.lint.description.sources import Sources, read_sources
from tidegate.lint.description.yaml_nodes import PARSER, Parser
from tidegate.lint.description.yaml_text import read_yaml
from tidegate.lint.limits import MOST_FAULTS
from tidegate.lint.quantity import Span

KITS: Final = Path(__file__).parents[1] / "process_kits"
"""Folder of the process data that come with the tool."""


class Loaded(msgspec.Struct, frozen=True):
    """A description with the place of everything in it."""

    description: Description
    sources: Sources

    def place(self, path: str) -> Place:
        """Where a fact stands (path with dots), or the nearest part of the description above it."""
        return self.sources.place(steps(path))


def load(path: str | Path, *, shown: str | None = None, parser: type[Parser] = PARSER) -> Loaded:
    """Read, check and type a description.

    ``shown`` is the name under which messages speak of the file; the path itself where it is not given.
    Raises: DescriptionError: with every fault of the files that could be found, sorted by place.
    """
    with _collector_off():
        sources = _with_kit(read_sources(Path(path), shown or str(Path(path)), read_file, parser), parser)
        faults = list(sources.faults)
        description = _built(sources, faults)
        if faults or description is None:
            raise DescriptionError(faults)
        faults = [*point_faults(description, sources), *contradictions(description, sources)]
        if faults:
            raise DescriptionError(faults)
        return Loaded(description, sources)


@contextmanager
def _collector_off() -> Iterator[None]:
    """Loading makes many objects and no garbage: the collector would only walk them, again and again."""
    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            gc.enable()


@lru_cache(maxsize=1)
def description_schema() -> Mapping[str, Any]:
    """The JSON Schema of a description (draft 2020-12)."""
    schema: Mapping[str, Any] = json.loads(schema_text("description"))
    return schema


def schema_text(name: str) -> str:
    """The text of one of the schemas that come with the tool, such as ``description`` or ``report``."""
    return (Path(next(iter(tidegate.schema.__path__))) / f"{name}.schema.json").read_text("utf-8")


@lru_cache(maxsize=1)
def _validator() -> Any:
    # Loaded here alone: a description that can be built is what the schema says, and needs no other check.
    import jsonschema_rs

    return jsonschema_rs.validator_for(dict(description_schema()))


@lru_cache(maxsize=1)
def _name_fields() -> tuple[NameField, ...]:
    return name_fields(description_schema())


@lru_cache(maxsize=1)
def _unique_lists() -> tuple[Way, ...]:
    return unique_lists(description_schema())


@lru_cache(maxsize=1)
def _none_fields() -> NoneFields:
    return none_fields(description_schema())


def _built(sources: Sources, faults: list[Fault]) -> Description | None:
    """The joined data as a description; adds what is wrong, less what only follows from the faults of the files."""
    schema, data = description_schema(), sources.data
    found = fill_empty(sources, schema)
    description = description_of(data, own_keys=any(file.has_own_keys for file in sources.files))
    if description is None:
        found += _explained(sources)
    if _sections_are_whole(data):
        explained = {fault.place for fault in found}
        wrong_names = name_faults(data, _name_fields(), sources)
        found += [fault for fault in wrong_names if fault.place not in explained]
        if not found and not sources.faults and not _has_elements(data):
            place = Place(sources.files[0].name)
            found.append(Fault(place, "", "the file describes no element", "tidegate start writes a starter"))
    spoiled = {path for file in sources.files for path in file.spoiled}
    faults += [fault for fault in found if not fault.lies_in(spoiled)]
    return description


def _sections_are_whole(data: Mapping[str, Any]) -> bool:
    """Whether every element is where it can be found; if not, a wrong name may be the fault of its section."""
    known = description_schema()["properties"]
    return all(
        isinstance(data[key], dict) or (data[key] == NONE and "x-none" in known[key])
        if key in NAMED_SECTIONS
        else key in known or key.startswith("x-")
        for key in data
    )


def _has_elements(data: Mapping[str, Any]) -> bool:
    return any(data.get(section) not in (None, {}, NONE) for section in NAMED_SECTIONS)


def _explained(sources: Sources) -> Sequence[Fault]:
    """What is wrong with data that the schema, or reading its numbers, refused; never empty."""
    # Loaded here alone: a description without faults does not pay for the library that explains them.
    from tidegate.lint.description.schema_faults import schema_faults

    errors = islice(_validator().iter_errors(sources.data), MOST_FAULTS + 1)
    paths = [tuple(error.instance_path) for error in errors]
    part = _part_with(paths, sources.data) if paths else sources.data
    faults = schema_faults(part, description_schema(), sources)
    if faults:
        return faults
    path = paths[0] if paths else ()
    return [Fault(sources.place(path), dotted(path), "a value that does not fit", "write it as the schema says")]


def _part_with(paths: Sequence[tuple[Any, ...]], data: Mapping[str, Any]) -> Mapping[str, Any]:
    """The part of the data in which these paths lie; other sections and entries need no explaining."""
    part: dict[str, Any] = {}
    for path in paths:
        section = path[0] if path else None
        if section is None:
            known = description_schema()["properties"]
            part.update((key, value) for key, value in data.items() if key not in known)
        elif len(path) == 1 or not isinstance(data[section], dict):
            part[section] = data[section]
        elif part.get(section) is not data[section]:
            name = str(path[1])  # the validator takes a name of digits for a number
            if name in data[section]:
                part.setdefault(section, {})[name] = data[section][name]
            else:
                part[section] = data[section]
    return part


def _with_kit(sources: Sources, parser: type[Parser]) -> Sources:
    """The description joined with the ready-made process data it names; its own entries win."""
    process = sources.data.get("process")
    kit = process.get("kit") if isinstance(process, dict) else None
    if not isinstance(process, dict) or kit not in _kits():
        return sources  # a kit of another name is a fault that the schema explains
    shipped = read_yaml(f"process kit {kit}", (KITS / f"{kit}.yaml").read_bytes(), parser)
    offered = _mapping(shipped.data.get("process"))
    joined = {**offered, **process}
    for key, entries in offered.items():
        own = process.get(key, {})
        if isinstance(entries, dict) and isinstance(own, dict):
            joined[key] = {**entries, **own}
    files = [*sources.files, shipped.without_data()]
    return Sources(files, {**sources.data, "process": joined}, [*sources.faults, *shipped.faults])


def _kits() -> Sequence[str]:
    kits: Sequence[str] = description_schema()["$defs"]["process"]["properties"]["kit"]["enum"]
    return kits


def _mapping(value: Any) -> dict[str, Any]:
    return value if isinstance(value, dict) else {}


def description_of(data: Mapping[str, Any], *, own_keys: bool = True) -> Description | None:
    """The description that plain data are; None where they are none, by the schema or by the numbers in them.

    ``own_keys`` says whether there may be keys of the author's own (``x-``) in them.
    """
    if named_twice(data, _unique_lists()):
        return None
    given = without_none(without_own_keys(data, description_schema()) if own_keys else data, _none_fields())
    for section in NAMED_SECTIONS:
        entries = given.get(section)
        if isinstance(entries, dict):
            given[section] = {name: _with_id(name, entry) for name, entry in entries.items()}
    try:
        return msgspec.convert(given, Description, dec_hook=_read_span)
    except msgspec.ValidationError:
        return None


def _with_id(name: str, entry: Any) -> Any:
    """An entry with its name as its id; None, which nothing can be made of, where it is no entry or has its own."""
    return {**entry, "id": name} if isinstance(entry, dict) and "id" not in entry else None


def _read_span(kind: type[Span], given: object) -> Span:
    return kind.read(given)
