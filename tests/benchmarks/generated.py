"""Descriptions of any size: copies of the invented sound example, each with names of its own.

What is no element grows with the elements: each copy brings its modes and its scenarios, as it brings its overrides and
neighbours. So the modes of all copies are held against the loads of all copies, which a real chip asks of nobody.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import yaml

ROOT = Path(__file__).resolve().parents[2]
SECTIONS = (
    "rails", "domains", "references", "biases", "comparators", "output_stages", "resets", "loads", "bypasses",
    "neighbours",
)  # fmt: skip
BESIDES = ("modes", "scenarios")
"""Sections whose entries are no elements."""


def generated(elements: int) -> str:
    """A description of at most about so many elements, as JSON with one value a line; of ten, a part of one copy."""
    text = (ROOT / "examples" / "sound.yaml").read_text("utf-8")
    base: dict[str, Any] = yaml.load(text, Loader=yaml.BaseLoader)
    base |= yaml.load((ROOT / "examples" / "process.yaml").read_text("utf-8"), Loader=yaml.BaseLoader)
    names = {name for section in SECTIONS for name in base[section]}
    whole: dict[str, Any] = {key: base[key] for key in ("conditions", "process")}
    if elements < len(names):
        whole |= _first_elements(base, elements)
    for number in range(elements // len(names)):
        for section in (*SECTIONS, *BESIDES):
            entries = {f"{name}_{number}": _renamed(entry, names, number) for name, entry in base[section].items()}
            whole.setdefault(section, {}).update(entries)
    return json.dumps(_typed(whole), indent=1)


def _first_elements(base: dict[str, Any], elements: int) -> dict[str, Any]:
    """So many elements, rails and domains first, that name none of those that are left out."""
    kept: dict[str, dict[str, Any]] = {}
    left = elements
    for section in SECTIONS:
        gone = {name for other in SECTIONS for name in base[other] if name not in kept.get(other, {})}
        for name, entry in base[section].items():
            if left and not gone & _texts(entry):
                kept.setdefault(section, {})[name] = entry
                gone.discard(name)
                left -= 1
    return kept


def _texts(node: Any) -> set[str]:
    if isinstance(node, dict):
        return set().union(*map(_texts, node.values()))
    if isinstance(node, list):
        return set().union(*map(_texts, node))
    return {node}


def _renamed(node: Any, names: set[str], number: int) -> Any:
    if isinstance(node, dict):
        return {key: _renamed(child, names, number) for key, child in node.items()}
    if isinstance(node, list):
        return [_renamed(child, names, number) for child in node]
    return f"{node}_{number}" if node in names else node


def _typed(node: Any) -> Any:
    """Flags and plain numbers were read as text."""
    if isinstance(node, dict):
        return {key: _typed(child) for key, child in node.items()}
    if isinstance(node, list):
        return [_typed(child) for child in node]
    if node in ("true", "false"):
        return node == "true"
    try:
        return json.loads(node)
    except ValueError:
        return node
