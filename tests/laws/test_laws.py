"""The five laws of what may be said from what is known, over every key of every published description.

With TIDEGATE_EVERY_LAW=1 the examples too, which takes minutes.

They are laws of interval arithmetic (IEEE 1788-2015, inclusion) and of Kleene's three values; nothing of the rules'
own code is used to say what must come out.
"""

from __future__ import annotations

import math
import os
import sys
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any, Final

import pytest

from tidegate.lint.graph.dependency import SECTIONS
from tidegate.lint.judgement import Judgement, Kind

sys.path.insert(0, str(Path(__file__).parent))
from knowledge import (
    EXAMPLES,
    PUBLISHED,
    Way,
    broken,
    is_ability,
    is_excused,
    is_policy,
    judged,
    loaded,
    margin_of,
    narrowed,
    renamed,
    reordered,
    status,
    ways,
    without,
)

_EVERY: Final = bool(os.environ.get("TIDEGATE_EVERY_LAW"))
"""Whether the examples are held against the laws too: minutes, and not every family keeps them yet."""
_FILES: Final = (
    *(EXAMPLES / name for name in ("sound.yaml", "faulty.yaml") if _EVERY), *sorted(PUBLISHED.glob("*.yaml")),
)  # fmt: skip
_PARTS: Final = 8
_CHUNKS: Final = [(path, part) for path in _FILES for part in range(_PARTS if path.parent == EXAMPLES else 1)]
_BY_CHUNK: Final = pytest.mark.parametrize(
    ("path", "part"), _CHUNKS, ids=[f"{path.stem}-{part}" for path, part in _CHUNKS]
)
_BY_FILE: Final = pytest.mark.parametrize("path", _FILES, ids=[path.stem for path in _FILES])
_MOST_TOLD: Final = 12
_LINKS: Final = frozenset({"made_by", "driven_by", "needs", "codes"})
"""What names other elements; some families still take one that is left out for "there is none".  So they do codes."""
_CLAIMS: Final = frozenset({"trip_window/crossover_level", "description/rails", "description/loads"})
"""Rules that hold a stated range against another one."""

Judgements = Mapping[tuple[str, str], Judgement]


def _is_lawful(rule: str) -> bool:
    """Whether the first two laws are for a rule.

    Not those that ask for a review of a number (without the number there is nothing to review), and not yet
    claims/hysteresis, which takes the typical levels where there are some.
    """
    return _EVERY or not (rule.startswith("evidence/") or rule == "claims/hysteresis")


def _in_part(path: Path, part: int) -> Iterator[Way]:
    parts = _PARTS if path.parent == EXAMPLES else 1
    for number, way in enumerate(ways(loaded(path).sources.data)):
        if number % parts == part:
            yield way


def _base(path: Path) -> Judgements:
    found = judged(loaded(path).sources.data, loaded(path))
    assert found is not None
    return found


def _told(faults: list[str]) -> str:
    return "\n".join([*faults[:_MOST_TOLD], f"... {len(faults) - _MOST_TOLD} more"][: _MOST_TOLD + 1])


@_BY_CHUNK
def test_leaving_a_fact_out_settles_nothing(path: Path, part: int) -> None:
    """Laws 1 and 2: with less known, what was certain stays or becomes open, and margins become intervals."""
    base, faults = _base(path), []
    for way in _in_part(path, part):
        if is_policy(way) or (way[-1] in _LINKS and not _EVERY):
            continue
        less = judged(without(loaded(path).sources.data, way), loaded(path))
        if less is None:
            continue  # what is left is no description
        excused = is_excused(way)
        for key, more in base.items():
            if _is_lawful(key[0]) and key in less and (law := broken(more, less[key], excused=excused)):
                faults.append(f"{'.'.join(map(str, way))}: {key[0]} on {key[1]}: {law}")
    assert not faults, _told(faults)


@_BY_CHUNK
def test_a_narrower_range_is_another_part(path: Path, part: int) -> None:
    """Law 3: of what varies it is never a worse one, of an ability never a better one."""
    base, faults = _base(path), []
    for way in _in_part(path, part):
        for data in narrowed(loaded(path).sources.data, way):
            other = judged(data, loaded(path))
            assert other is not None
            worse, better = (base, other) if not is_ability(way) else (other, base)
            for key in base.keys() & other.keys():
                if key[0] in _CLAIMS or key[0].startswith("claims/"):
                    continue  # a claim may be narrower than what makes it: the laws are not for contradictions
                law = _worse(worse[key], better[key])
                if law:
                    faults.append(f"{'.'.join(map(str, way))}: {key[0]} on {key[1]}: {law}")
    assert not faults, _told(faults)


def _worse(wide: Judgement, narrow: Judgement) -> str:
    """How what should be no worse is worse; empty where it is not."""
    if status(wide) is Kind.PASS and status(narrow) is Kind.FAIL:
        return "a pass becomes a failure"
    before, now = margin_of(wide), margin_of(narrow)
    if before is None or now is None or not math.isfinite(before.sure):
        return ""
    if now.sure < before.sure - 1e-9 * max(abs(before.sure), abs(now.sure)):
        return f"the sure end falls from {before.sure} to {now.sure}"
    return ""


@_BY_FILE
def test_what_shares_nothing_changes_nothing(path: Path) -> None:
    """Law 4: beside a copy of itself under other names, every judgement is as it was."""
    data = loaded(path).sources.data
    together = judged(_beside(data, renamed(data)), loaded(path))
    assert together is not None
    faults = [f"{key}: {_said(before)} becomes {_said(together[key])}" for key, before in _base(path).items()
              if _said(before) != _said(together[key])]  # fmt: skip
    assert not faults, _told(faults)


def _beside(data: Mapping[str, Any], copy: Mapping[str, Any]) -> dict[str, Any]:
    joined = dict(data)
    for key, value in copy.items():
        if key in (*SECTIONS, "modes", "scenarios") and isinstance(value, dict):
            joined[key] = {**joined.get(key, {}), **value}
    return joined


@_BY_FILE
def test_the_order_of_the_file_changes_nothing(path: Path) -> None:
    """Law 5."""
    other = judged(reordered(loaded(path).sources.data), loaded(path))
    assert other is not None
    base = _base(path)
    assert base.keys() == other.keys()
    faults = [f"{key}: {_said(before)} becomes {_said(other[key])}" for key, before in base.items()
              if _said(before) != _said(other[key])]  # fmt: skip
    assert not faults, _told(faults)


def _said(judgement: Judgement) -> tuple[Kind, str, str, str]:
    """What must not change: what is said, under what, and both ends of the margin to nine digits."""
    margin = margin_of(judgement)
    ends = ("", "") if margin is None else (f"{margin.sure:.9g}", f"{margin.best:.9g}")
    return judgement.kind, judgement.under, *ends
