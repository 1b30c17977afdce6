"""A description, loaded: text to plain data, data against the schema, names, typed and frozen objects."""

from __future__ import annotations

import json
from collections.abc import Mapping
from functools import lru_cache
from pathlib import Path
from typing import Any, Final

import jsonschema_rs
import msgspec

import tidegate.schema
from tidegate.lint.description.empty_values import fill_empty
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.names import NAMED_SECTIONS, NameField, name_faults, name_fields
from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.description.sources import Sources, read_sources
from tidegate.lint.description.yaml_text import Step, YamlFile, read_yaml
from tidegate.lint.quantity import Span

KITS: Final = Path(__file__).parents[1] / "process_kits"
"""Folder of the process data that come with the tool."""


class Loaded(msgspec.Struct, frozen=True):
    """A description with the place of everything in it."""

    description: Description
    sources: Sources

    def place(self, path: str) -> Place:
        """Where a fact stands (path with dots), or the nearest part of the description above it."""
        steps: list[Step] = [int(step) if step.isdigit() else step for step in path.split(".")]
        return self.sources.place(steps)


def load(path: str | Path, *, shown: str | None = None) -> Loaded:
    """Read, check and type a description.

    ``shown`` is the name under which messages speak of the file; the path itself where it is not given.
    Raises: DescriptionError: with every fault of the files that could be found, sorted by place.
    """
    sources = read_sources(Path(path), shown or str(path), Path.read_bytes)
    sources = _with_kit(sources)
    data = sources.data
    unknown = fill_empty(sources, description_schema())
    faults = unknown if _validator().is_valid(data) else [*unknown, *_explained(sources)]
    faults = faults or name_faults(data, _name_fields(), sources) or _empty_faults(data, sources)
    if faults:
        raise DescriptionError(faults)
    return Loaded(_typed(sources), sources)


@lru_cache(maxsize=1)
def description_schema() -> Mapping[str, Any]:
    """The JSON Schema of a description (draft 2020-12)."""
    schema: Mapping[str, Any] = json.loads(schema_text("description"))
    return schema


def schema_text(name: str) -> str:
    """The text of one of the schemas that come with the tool: ``description`` or ``report``."""
    return (Path(next(iter(tidegate.schema.__path__))) / f"{name}.schema.json").read_text("utf-8")


@lru_cache(maxsize=1)
def _validator() -> Any:
    return jsonschema_rs.validator_for(dict(description_schema()))


@lru_cache(maxsize=1)
def _name_fields() -> tuple[NameField, ...]:
    return name_fields(description_schema())


def _explained(sources: Sources) -> list[Fault]:
    """What is wrong with data that the validator refused; never empty."""
    # Loaded here alone: a description without faults does not pay for the library that explains them.
    from tidegate.lint.description.schema_faults import schema_faults

    faults = schema_faults(sources.data, description_schema(), sources)
    if faults:
        return faults
    error = next(_validator().iter_errors(sources.data))
    return [Fault(sources.place(tuple(error.instance_path)), "", error.message, "write it as the schema says")]


def _with_kit(sources: Sources) -> Sources:
    """The description joined with the ready-made process data it names; its own entries win."""
    process = sources.data.get("process")
    kit = process.get("kit") if isinstance(process, dict) else None
    file = KITS / f"{kit}.yaml" if isinstance(kit, str) and kit.replace("-", "").isalnum() else None
    if not isinstance(process, dict) or file is None or not file.is_file():
        return sources  # a kit of another name is a fault that the schema explains
    shipped = read_yaml(f"process kit {kit}", file.read_bytes())
    joined = {**_mapping(shipped.data.get("process")), **process}
    for key, entries in _mapping(shipped.data.get("process")).items():
        if isinstance(entries, dict) and isinstance(process.get(key, {}), dict):
            joined[key] = {**entries, **_mapping(process.get(key))}
    return Sources([*sources.files, YamlFile(shipped.name, shipped.root, {})], {**sources.data, "process": joined})


def _mapping(value: Any) -> dict[str, Any]:
    return value if isinstance(value, dict) else {}


def _empty_faults(data: Mapping[str, Any], sources: Sources) -> list[Fault]:
    if any(data.get(section) for section in NAMED_SECTIONS):
        return []
    place = Place(sources.files[0].name)
    return [Fault(place, "", "the file describes no element", "tidegate start writes a starter")]


def _typed(sources: Sources) -> Description:
    data = dict(sources.data)
    for section in NAMED_SECTIONS:
        entries = data.get(section)
        if isinstance(entries, dict):
            data[section] = {name: {**_mapping(entry), "id": name} for name, entry in entries.items()}
    try:
        return msgspec.convert(data, Description, dec_hook=_read_span)
    except msgspec.ValidationError:
        raise DescriptionError(_explained(sources)) from None


def _read_span(kind: type[Span], given: object) -> Span:
    return kind.read(given)
