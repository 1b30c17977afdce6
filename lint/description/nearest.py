"""The nearest of the words that would have been right."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import get_close_matches


def nearest(word: str, known: Iterable[str], *, most: int = 1) -> list[str]:
    """The known words most like this one, best first; capitals, hyphens and underscores make no difference."""
    by_shape: dict[str, str] = {}
    for each in known:
        by_shape.setdefault(_shape(each), each)
    return [by_shape[shape] for shape in get_close_matches(_shape(word[:64]), by_shape, most)]


def _shape(word: str) -> str:
    return word.casefold().replace("-", "").replace("_", "").replace(" ", "")
