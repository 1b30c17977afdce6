"""The typed views of the description's parts, made from the model: each field of the model is a fact of the view."""

from __future__ import annotations

from collections.abc import Iterator
from types import ModuleType, UnionType
from typing import Annotated, Any, Literal, Union, get_args, get_origin, get_type_hints

from tidegate.lint.description.model import description, detector, process, reset_path, supply, timing
from tidegate.lint.description.model.part import Name, NameOrNone, Part
from tidegate.lint.quantity import Span

MODULES = {
    module.__name__.rpartition(".")[2]: module
    for module in (timing, supply, detector, reset_path, process, description)
}
_LEFT_OUT = {"id", "note", "section", "include", "subsystem", "revision", "invented", "waivers", "complete"}


def view_module(name: str) -> str:
    """The text of the module of views that belongs to a module of the model."""
    module = MODULES[name]
    classes = list(_classes(module))
    bodies = "\n\n\n".join(_view(part) for part in classes)
    used = sorted({word for word in ("Entries", "Named", "Names", "Number", "Word") if f": {word}" in bodies})
    lines = [
        f'"""Views of {(module.__doc__ or "").splitlines()[0][:1].lower()}{(module.__doc__ or "").splitlines()[0][1:]}',
        "",
        "Made from the model by ``python tests/record.py``: a fact is added there, not here.",
        '"""',
        "",
        "from __future__ import annotations",
        "",
    ]
    if "Literal[" in bodies:
        lines += ["from typing import Literal", ""]
    names = [part.__name__ for part in classes]
    lines += _from(f"tidegate.lint.description.model.{name}", names)
    lines += _from("tidegate.lint.facts.view", [*used, "Facts"])
    for other in sorted(MODULES):
        wanted = sorted(
            f"{part.__name__}Facts"
            for part in _classes(MODULES[other])
            if other != name and f"{part.__name__}Facts" in bodies
        )
        if wanted:
            lines += _from(f"tidegate.lint.facts.views.{other}", wanted)
    return "\n".join(lines) + "\n\n\n" + bodies + "\n"


def _from(module: str, names: list[str]) -> list[str]:
    line = f"from {module} import {', '.join(sorted(names))}"
    if len(line) <= 120:
        return [line]
    return [f"from {module} import (", *(f"    {name}," for name in sorted(names)), ")"]


def _classes(module: ModuleType) -> Iterator[type[Part]]:
    for found in vars(module).values():
        if isinstance(found, type) and issubclass(found, Part) and found.__module__ == module.__name__:
            yield found


def _view(part: type[Part]) -> str:
    hints = get_type_hints(part, include_extras=True)
    rows = [f"    {name}: {_kind(hints[name])}" for name in part.__struct_fields__ if name not in _LEFT_OUT]
    head = f"class {part.__name__}Facts(Facts[{part.__name__}], of={part.__name__}):"
    doc = f'    """{(part.__doc__ or "").splitlines()[0]}"""'
    return "\n".join([head, doc, "", *rows])


def _kind(hint: Any) -> str:
    if get_origin(hint) in (Union, UnionType):
        kinds = [kind for kind in get_args(hint) if kind is not type(None)]
        parts = [kind for kind in kinds if isinstance(kind, type) and issubclass(kind, Part)]
        return f"{parts[0].__name__}Facts" if parts else _kind(kinds[0])
    if hint in (Name, NameOrNone):
        return "Named"
    if get_origin(hint) is Annotated:
        return _kind(get_args(hint)[0])
    if get_origin(hint) is Literal:
        return f"Word[Literal[{', '.join(repr(word) for word in get_args(hint))}]]".replace("'", '"')
    if get_origin(hint) is tuple:
        inner = get_args(hint)[0]
        return f"Entries[{inner.__name__}Facts]" if isinstance(inner, type) and issubclass(inner, Part) else "Names"
    if get_origin(hint) is dict:
        return f"Entries[{get_args(hint)[1].__name__}Facts]"
    if isinstance(hint, type) and issubclass(hint, Part):
        return f"{hint.__name__}Facts"
    if isinstance(hint, type) and (issubclass(hint, Span) or hint in (float, int)):
        return "Number"
    return f"Word[{hint.__name__}]"
