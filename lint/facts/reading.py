"""One reading of a description: every number that is not known stands at one corner, and what was read is noted.

A rule is a plain function of facts.  Where facts are missing it is run twice: with all that is missing at its *sure*
corner (as unfavourable as the description allows) and at its *best* corner (as favourable).  A word that is missing is
a choice, and every choice is tried.  What holds at the sure corner holds whatever the missing facts turn out to be;
what fails at the best corner fails whatever they are.  (Interval arithmetic by monotone evaluation at the ends, IEEE
1788-2015; for words, Kleene's strong three-valued logic.)
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from enum import Enum
from typing import Final, TypeVar

import msgspec

_A = TypeVar("_A")


class Corner(Enum):
    """Where the numbers that are not known stand."""

    SURE = "sure"
    BEST = "best"


class Better(Enum):
    """Which way a number that is not known would help what is judged."""

    MORE = "more"
    LESS = "less"

    @property
    def other(self) -> Better:
        """The other way."""
        return Better.LESS if self is Better.MORE else Better.MORE


class Wait(msgspec.Struct, frozen=True):
    """An end of a quantity that is read and not exactly known: its path, what is known of it, which way helps."""

    path: str
    lo: float
    hi: float
    better: Better

    @property
    def best(self) -> float:
        """Its most favourable value."""
        return self.hi if self.better is Better.MORE else self.lo

    @property
    def worst(self) -> float:
        """Its least favourable value."""
        return self.lo if self.better is Better.MORE else self.hi


class MissingFactsError(Exception):
    """Facts are missing without which there is nothing to compute: a name, or a word that cannot be tried."""

    def __init__(self, missing: Iterable[str]) -> None:
        self.missing = tuple(dict.fromkeys(missing))
        super().__init__(", ".join(self.missing))


MOST_CHOICES: Final = 48
"""How many combinations of missing words are tried; beyond, what they lead to counts as not known."""


class Reading:
    """Where the missing stands, and what has been read: ends that are not known, and words that were chosen."""

    __slots__ = (
        "_logs",
        "blocked",
        "chosen",
        "corner",
        "instead",
        "key",
        "options",
        "others",
        "replaced",
        "tried",
        "waits",
    )

    def __init__(
        self,
        corner: Corner = Corner.SURE,
        *,
        chosen: Mapping[str, object] | None = None,
        tried: Mapping[str, float] | None = None,
        instead: Mapping[str, Callable[[float], float]] | None = None,
    ) -> None:
        self.corner = corner
        self.chosen: dict[str, object] = dict(chosen or {})
        self.tried: Mapping[str, float] = tried or {}
        """Values that ends which are not known take in place of those of the corner, by path."""
        self.instead: Mapping[str, Callable[[float], float]] = instead or {}
        """What facts that are known are taken for instead, by path: so a placement asks what another value would do."""
        self.others = frozenset(self.instead)
        """The facts that are taken for something else."""
        self.replaced: set[str] = set()
        """Those of them that were read."""
        self.waits: dict[str, Wait] = {}
        self.options: dict[str, tuple[object, ...]] = {}
        """The words that were missing and had to be chosen, with all that they may be."""
        self.blocked: dict[str, None] = {}
        """Facts without which a part could not be computed and was bounded instead."""
        self._logs: list[list[str]] = []
        self.key: tuple[object, ...] = (corner, *self.chosen.items(), *self.tried.items())
        """What tells this reading from another one of the same facts."""

    @property
    def exact(self) -> bool:
        """Whether everything that was read is known."""
        return not (self.waits or self.options or self.blocked)

    @property
    def lacking(self) -> tuple[str, ...]:
        """The paths of everything that was read and is not exactly known."""
        return (*self.waits, *self.options, *self.blocked)

    def again(self) -> Reading:
        """The same reading with nothing noted yet, for a question of its own."""
        inner = Reading(self.corner, chosen=self.chosen, tried=self.tried, instead=self.instead)
        inner.key = self.key
        inner.replaced = self.replaced
        return inner

    def listen(self) -> list[str]:
        """A list that takes the path of everything not known that is read from now on."""
        log: list[str] = []
        self._logs.append(log)
        return log

    def unlisten(self) -> None:
        """End what the last ``listen`` began."""
        self._logs.pop()

    def block(self, facts: Iterable[str]) -> None:
        """Note facts without which a part could not be computed and was bounded instead."""
        self.blocked.update(dict.fromkeys(facts))
        for log in self._logs:
            log.extend(facts)

    def end(self, wait: Wait) -> float:
        """The value of an end that is not exactly known, in this reading."""
        for log in self._logs:
            log.append(wait.path)
        before = self.waits.get(wait.path)
        if before is None:
            self.waits[wait.path] = wait
        elif before is not wait and (before.lo > wait.lo or before.hi < wait.hi):
            self.waits[wait.path] = Wait(wait.path, min(before.lo, wait.lo), max(before.hi, wait.hi), before.better)
        value = self.tried.get(wait.path)
        if value is not None:
            return min(max(value, wait.lo), wait.hi)
        return wait.worst if self.corner is Corner.SURE else wait.best

    def pick(self, path: str, options: tuple[_A, ...]) -> _A:
        """What a missing word is taken for in this reading; the first option, where nothing is chosen yet."""
        for log in self._logs:
            log.append(path)
        self.options.setdefault(path, options)
        return self.chosen.setdefault(path, options[0])  # type: ignore[return-value]  # it is one of the options

    def replay(self, waits: Mapping[str, Wait], options: Mapping[str, tuple[object, ...]]) -> None:
        """Note what an answer that was kept had read."""
        for log in self._logs:
            log.extend((*waits, *options))
        for wait in waits.values():
            self.waits.setdefault(wait.path, wait)
        for path, words in options.items():
            self.options.setdefault(path, words)
            self.chosen.setdefault(path, words[0])


def other_choices(reading: Reading, chosen: Mapping[str, object]) -> Iterator[tuple[Corner, dict[str, object]]]:
    """The choices that a reading did not make: of each word that it was the first to choose, all the others.

    ``chosen`` are the words that it was given; each choice comes with the corner of the reading.
    """
    before = dict(chosen)
    for path, words in reading.options.items():
        if path in chosen:
            continue
        for word in words[1:]:
            yield reading.corner, {**before, path: word}
        before[path] = words[0]
