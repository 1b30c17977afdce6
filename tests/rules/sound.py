"""The sound example with a patch laid over it, judged by one family of rules: what the tests of all families share."""

from __future__ import annotations

import datetime
import json
import re
import tempfile
from collections.abc import Mapping, Sequence
from functools import cache
from pathlib import Path
from typing import Any, Final

import yaml

from tidegate.lint.case import Case
from tidegate.lint.description.load import Loaded, load
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.graph.dependency import build
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.rule import Rule

SOUND: Final = Path(__file__).parents[2] / "examples" / "sound.yaml"
TODAY: Final = datetime.date(2026, 1, 1)
_SPAN: Final = frozenset({"min", "typ", "max", "basis"})

Judgements = Mapping[tuple[str, str], Judgement]
"""Judgements by rule and subject."""


class _Loader(yaml.SafeLoader):
    """YAML in which ``true`` and ``false`` alone are booleans: ``off`` is a key of modes."""

    yaml_implicit_resolvers = {
        sign: [(tag, pattern) for tag, pattern in resolvers if not tag.endswith(":bool")]
        for sign, resolvers in yaml.SafeLoader.yaml_implicit_resolvers.items()
    }


_Loader.add_implicit_resolver("tag:yaml.org,2002:bool", re.compile("^(?:true|false)$"), list("tf"))


@cache
def _sound() -> dict[str, Any]:
    """The sound example with what it includes."""
    data: dict[str, Any] = yaml.load(SOUND.read_text("utf-8"), _Loader)
    for name in data.pop("include"):
        data |= yaml.load((SOUND.parent / name).read_text("utf-8"), _Loader)
    return data


def patched(patch_yaml: str) -> Loaded:
    """The sound example with a patch laid over it: mappings are merged, ``null`` removes a key.

    A range of a quantity (min, typ, max) is replaced whole, unless the patch removes an end of it. A list is replaced,
    or patched by index: ``needs: {0: {works: null}}``.
    """
    data = _laid_over(_sound(), yaml.load(patch_yaml, _Loader) or {})
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder) / "patched.yaml"
        file.write_text(json.dumps(data), "utf-8")
        return load(file, shown="patched.yaml")


@cache
def judged(patch_yaml: str, family: tuple[Rule, ...]) -> Judgements:
    """What a family says about the sound example with a patch laid over it; no rule may raise."""
    result = review(patched(patch_yaml), Catalogue([family]), today=TODAY)
    assert result.faults == ()
    ours = {rule.id for rule in family}  # what the engine says about waivers is left out
    return {(said.rule, said.subject): said for said in result.judgements if said.rule in ours}


def changed(patch_yaml: str, family: tuple[Rule, ...]) -> dict[tuple[str, str], Kind]:
    """The judgements that a patch gives another kind than they have on the sound example; new elements count too."""
    before = judged("", family)
    after = judged(patch_yaml, family)
    return {key: new.kind for key, new in after.items() if key not in before or before[key].kind is not new.kind}


def case_of(patch_yaml: str, element: str) -> Case:
    """A case on one element of the sound example with a patch laid over it, for what rules derive."""
    description = patched(patch_yaml).description
    graph = build(description)
    return Case(subject=graph.elements[element], rule="", level=Level.NOTE, description=description, graph=graph)


def both(*patches: str) -> str:
    """One patch out of several, the later over the earlier; what a patch removes stays removed."""
    joined: dict[str, Any] = {}
    for patch in patches:
        _join(joined, yaml.load(patch, _Loader) or {})
    return json.dumps(joined)


def _join(joined: dict[str, Any], patch: dict[str, Any]) -> None:
    for key, value in patch.items():
        if isinstance(value, dict) and isinstance(joined.get(key), dict) and not value.keys() <= _SPAN:
            _join(joined[key], value)
        else:
            joined[key] = value


def without(*facts: str) -> str:
    """A patch that removes facts, named by their paths with dots."""
    patch: dict[str, Any] = {}
    for fact in facts:
        *above, last = fact.split(".")
        place = patch
        for step in above:
            place = place.setdefault(step, {})
        place[last] = None
    return json.dumps(patch)


def of_kind(judgements: Judgements, *kinds: Kind) -> Sequence[tuple[str, str]]:
    """Rule and subject of the judgements of some kinds."""
    return [key for key, judgement in judgements.items() if judgement.kind in kinds]


def _laid_over(data: Any, patch: Any) -> Any:
    """The data with a patch laid over them; the keys of a patch of a list are its indices."""
    if not isinstance(patch, dict) or (patch and patch.keys() <= _SPAN and None not in patch.values()):
        return patch
    joined = dict(enumerate(data)) if isinstance(data, list) else dict(data) if isinstance(data, dict) else {}
    for name, value in patch.items():
        key = int(name) if isinstance(data, list) else name
        joined[key] = _laid_over(joined.get(key), value)
    kept = {key: value for key, value in joined.items() if value is not None}
    return list(kept.values()) if isinstance(data, list) else kept
