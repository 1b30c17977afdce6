"""Published descriptions as they stand, or with a supposition laid over them, judged by some families of rules."""

from __future__ import annotations

import datetime
import json
from collections.abc import Mapping, Sequence
from functools import cache
from pathlib import Path
from typing import Any, Final, TypeAlias

import yaml

from tidegate.lint.description.load import Loaded, load
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement
from tidegate.lint.rule import Rule
from tidegate.rules import hysteresis

NAMES: Final = (
    "mspm0l1306_por_bor", "nrf54lm20a_power_fail", "rp2350_core_supply", "sky130_brownout", "stm1403_supervisor",
    "stm32f031_por_pdr",
)  # fmt: skip
HERE: Final = Path(__file__).parent
TODAY: Final = datetime.date(2026, 1, 1)
ROUNDING_V: Final = 1e-9
"""Sums of a few voltages of at most seven digits, each rounded to a float, differ by far less."""

Patch: TypeAlias = Mapping[str, Any]
Answers: TypeAlias = Mapping[tuple[str, str], Judgement]


def as_published(name: str) -> Loaded:
    """A published description as it stands."""
    return load(HERE / f"{name}.yaml", shown=f"{name}.yaml")


def plain(name: str) -> Any:
    """Its plain data."""
    return yaml.safe_load((HERE / f"{name}.yaml").read_text("utf-8"))


def supposed(name: str, folder: Path, *patches: Patch) -> Loaded:
    """A published description with suppositions laid over it: mappings are merged, ``None`` removes a key."""
    data = plain(name)
    for patch in patches:
        data = laid_over(data, patch)
    file = folder / f"{name}.json"
    file.write_text(json.dumps(data), "utf-8")
    return load(file, shown=file.name)


def laid_over(data: Any, patch: Any) -> Any:
    """Data with a patch laid over them: mappings are merged, ``None`` removes a key, a quantity is replaced."""
    if not isinstance(patch, Mapping):
        return patch
    is_quantity = isinstance(data, dict) and {"min", "typ", "max"} & data.keys()
    joined = dict(data) if isinstance(data, dict) and not is_quantity else {}
    for key, value in patch.items():
        joined[key] = laid_over(joined.get(key), value)
    return {key: value for key, value in joined.items() if value is not None}


def judged(loaded: Loaded, families: Sequence[Sequence[Rule]] = (hysteresis.RULES,)) -> Answers:
    """What the rules of some families say, by rule and element; no rule may raise."""
    result = review(loaded, Catalogue(families), today=TODAY)
    assert result.faults == ()
    ours = {rule.id for family in families for rule in family}
    return {(answer.rule, answer.subject): answer for answer in result.judgements if answer.rule in ours}


@cache
def published(name: str) -> Answers:
    """What the rules about hysteresis say of a published description as it stands."""
    return judged(as_published(name))
