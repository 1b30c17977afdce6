"""Typed views of the parts of a description: attributes are facts, and a fact that is read notes what it lacks.

    rail = case.of(avdd)
    rail.delivered.least()            # a float, in the kept unit of the dimension
    rail.ripple.peak_to_peak.most()   # where it is not given: 0 V at the best corner, no end at the sure one
    rail.made_by.given                # what is written, or None
    detector.output.must()            # a word; where it is missing, each word that it may be is tried

Which way a missing end would help follows from the end that is read, since a rule reads the end that is worst for it:
a least value helps by being more, a greatest one by being less; for an ability (what a part stands or works with) the
other way round.  Where a rule wants it otherwise it says so.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from typing import TYPE_CHECKING, Any, ClassVar, Final, Generic, NoReturn, TypeVar, cast

from tidegate.lint.description.model.part import Part
from tidegate.lint.facts.bounds import bounds_of, options_of
from tidegate.lint.facts.reading import Better, MissingFactsError, Reading, Wait
from tidegate.lint.quantity import Span

if TYPE_CHECKING:
    from tidegate.lint.graph.dependency import Element

_A = TypeVar("_A")
_P = TypeVar("_P", bound=Part)
_V = TypeVar("_V", bound="Facts[Any]")


class Asked:
    """What all facts of one question share: the reading, the elements by id, and what is missing altogether."""

    __slots__ = ("elements", "missing", "reading")

    def __init__(self, reading: Reading, elements: Mapping[str, Element]) -> None:
        self.reading = reading
        self.elements = elements
        self.missing: list[str] = []

    def settle(self) -> None:
        """End the question if something is missing without which there is nothing to compute.

        Raises: MissingFactsError: with all that is missing.
        """
        if self.missing:
            raise MissingFactsError(self.missing)


class Facts(Generic[_P]):
    """The facts of one part of the description; each subclass is of one class of the model."""

    __slots__ = ("_above", "_name", "asked", "part", "said_none")
    model: ClassVar[type[Part]]

    def __init__(
        self, asked: Asked, part: _P | None, name: str, above: Facts[Any] | Entries[Any] | None = None
    ) -> None:
        self.asked = asked
        self.part = part
        """What is written of it; None where nothing is."""
        self.said_none = False
        """Whether the description says that there is none."""
        self._name = name
        self._above = above

    def __init_subclass__(cls, *, of: type[Part] | None = None, **more: Any) -> None:
        super().__init_subclass__(**more)
        if of is None:
            return
        cls.model = of
        for name, hint in cls.__annotations__.items():
            if name != "model":
                setattr(cls, name, property(_reader(cls, name, hint)))

    @property
    def path(self) -> str:
        """Its path in the description, such as ``rails.avdd.ripple``."""
        if self._above is None or not self._above.path:
            return self._name
        return f"{self._above.path}.{self._name}"

    def lacks(self, fact: str) -> None:
        """Note that a fact is missing without which there is nothing to compute."""
        self.asked.missing.append(f"{self.path}.{fact}" if self.path else fact)

    def must(self) -> _P | str:
        """What is written of it, or ``none``.

        Raises: MissingFactsError: where nothing is.
        """
        if self.said_none:
            return "none"
        if self.part is None:
            self.asked.missing.append(self.path)
            raise MissingFactsError(self.asked.missing)
        return self.part


def _reader(view: type[Facts[Any]], name: str, hint: str) -> Callable[[Facts[Any]], Any]:
    """How a fact of a view is read, by what its annotation says it is."""
    field = "is_" if name == "is_" else name
    head, _, rest = hint.partition("[")
    fact = _FACTS.get(head)
    if fact is not None:
        return lambda facts: fact(facts, field, None if facts.part is None else getattr(facts.part, field))
    inner = rest.removesuffix("]")
    module = view.__module__
    if head in ("Entries", "Items"):
        return lambda facts: Entries(
            facts, name, _view_class(module, inner), None if facts.part is None else getattr(facts.part, field)
        )

    def nested(facts: Facts[Any]) -> Facts[Any]:
        part = None if facts.part is None else getattr(facts.part, field)
        found = _view_class(module, hint)(facts.asked, None if isinstance(part, str) else part, name, facts)
        found.said_none = isinstance(part, str)
        return found

    return nested


def _view_class(module: str, name: str) -> type[Facts[Any]]:
    import sys

    return cast(type[Facts[Any]], getattr(sys.modules[module], name))


class Fact:
    """A fact of a part: what is written, and where it would stand."""

    __slots__ = ("_facts", "_field", "_value")

    def __init__(self, facts: Facts[Any], field: str, value: Any) -> None:
        self._facts = facts
        self._field = field
        self._value = value

    @property
    def path(self) -> str:
        """Its path in the description."""
        above, name = self._facts.path, self._field.rstrip("_")
        return f"{above}.{name}" if above else name

    def lacking(self) -> NoReturn:
        """End the question here: without this fact there is nothing to compute.

        Raises: MissingFactsError: with it, and what was missing before.
        """
        asked = self._facts.asked
        asked.missing.append(self.path)
        raise MissingFactsError(asked.missing)


class Number(Fact):
    """A quantity, or a plain number."""

    __slots__ = ()
    _value: Span | float | None

    @property
    def given(self) -> Span | None:
        """What is written; None where nothing is."""
        value = self._value
        return Span(value, value, value) if isinstance(value, float | int) else value

    def least(self, better: Better | None = None) -> float:
        """The least value, in the kept unit; where it is not exactly known, its value at the corner of the reading."""
        value = self._value
        if value is None:
            return self._end("", better, Better.MORE)
        if isinstance(value, float | int):
            return self._taken(float(value))
        if value.least is not None:
            return self._taken(value.least)
        return self._end("min", better, Better.MORE, None, value.typical, value.most)

    def most(self, better: Better | None = None) -> float:
        """The greatest value, as ``least``."""
        value = self._value
        if value is None:
            return self._end("", better, Better.LESS)
        if isinstance(value, float | int):
            return self._taken(float(value))
        if value.most is not None:
            return self._taken(value.most)
        return self._end("max", better, Better.LESS, value.least, value.typical)

    def typical(self, better: Better = Better.LESS) -> float:
        """The typical value: as stated, or anywhere between the ends; as ``least``."""
        value = self._value
        if value is None:
            return self._end("", better, better)
        if isinstance(value, float | int):
            return self._taken(float(value))
        if value.typical is not None:
            return self._taken(value.typical)
        return self._end("typ", better, better, value.least, None, value.most)

    def _taken(self, value: float) -> float:
        """A value that is given, or what this reading takes it for instead."""
        instead = self._facts.asked.reading.instead
        if not instead:
            return value
        path = self.path
        change = instead.get(path)
        if change is None:
            return value
        self._facts.asked.reading.replaced.add(path)
        return change(value)

    def number(self, better: Better = Better.MORE) -> float:
        """A plain number, which has no ends; as ``least``."""
        return self.least(better)

    def _end(  # noqa: PLR0917
        self, side: str, better: Better | None, usual: Better,
        least: float | None = None, typical: float | None = None, most: float | None = None,
    ) -> float:  # fmt: skip
        """The value of an end that is not given, from what is given of the quantity and what it allows at all."""
        bounds = bounds_of(self._facts.model, self._field)
        if better is None:
            better = usual if not bounds.ability else Better.LESS if usual is Better.MORE else Better.MORE
        lo, hi = bounds.floor, bounds.ceiling
        # what is taken for something else takes along what is known of its other end
        if side == "max":
            known = least if typical is None else typical
            lo = lo if known is None else self._taken(known)
        elif side == "min":
            known = most if typical is None else typical
            hi = hi if known is None else self._taken(known)
        elif side == "typ":
            lo = lo if least is None else self._taken(least)
            hi = hi if most is None else self._taken(most)
        if lo == hi:
            return lo
        path = f"{self.path}.{side}" if side else self.path
        return self._facts.asked.reading.end(Wait(path, lo, hi, better))


def factors(first: Number, second: Number) -> tuple[float, float]:
    """The greatest values of two factors; of what is multiplied by nothing, nothing is asked."""
    for sure, other in ((first, second), (second, first)):
        if sure.given is not None and sure.given.most == 0.0:
            return (0.0, 0.0) if other.given is None or other.given.most is None else (first.most(), second.most())
    return first.most(), second.most()


class Word(Fact, Generic[_A]):
    """A word, a flag or a text."""

    __slots__ = ()
    _value: _A | None

    @property
    def given(self) -> _A | None:
        """What is written; None where nothing is."""
        return self._value

    def must(self) -> _A:
        """The word; where it is missing, what it is taken for in this reading: every word that it may be is tried.

        Raises: MissingFactsError: where it is missing and may be any text.
        """
        if self._value is not None:
            return self._value
        options = options_of(self._facts.model, self._field)
        if not options:
            self.lacking()
        return cast(_A, self._facts.asked.reading.pick(self.path, options))


class Named(Fact):
    """The id of an element."""

    __slots__ = ()
    _value: str | None

    @property
    def given(self) -> str | None:
        """What is written; None where nothing is."""
        return self._value

    def must(self) -> str:
        """The id.

        Raises: MissingFactsError: where it is not given.
        """
        if self._value is None:
            self.lacking()
        return self._value

    def element(self) -> Any:
        """The element that it names.

        Raises: MissingFactsError: where it is not given.
        """
        return self._facts.asked.elements[self.must()]


class Names(Fact):
    """Ids of elements."""

    __slots__ = ()
    _value: tuple[str, ...] | None

    @property
    def given(self) -> tuple[str, ...] | None:
        """What is written; None where nothing is."""
        return self._value

    def must(self) -> tuple[str, ...]:
        """The ids.

        Raises: MissingFactsError: where they are not given.
        """
        if self._value is None:
            self.lacking()
        return self._value


class Entries(Generic[_V]):
    """Parts by name or by number."""

    __slots__ = ("_facts", "_name", "_parts", "_view")

    def __init__(self, facts: Facts[Any], name: str, view: type[_V], parts: Any) -> None:
        self._facts = facts
        self._name = name
        self._view = view
        self._parts = parts

    @property
    def path(self) -> str:
        """Its path in the description."""
        return f"{self._facts.path}.{self._name}" if self._facts.path else self._name

    def __getitem__(self, key: str | int) -> _V:
        return self._view(self._facts.asked, self._parts[key], str(key), self)

    def __iter__(self) -> Iterator[_V]:
        parts = self._parts or ()
        for key in parts if isinstance(parts, dict) else range(len(parts)):
            yield self[key]

    def __len__(self) -> int:
        return len(self._parts or ())


_FACTS: Final[Mapping[str, Callable[[Facts[Any], str, Any], Fact]]] = {
    "Number": Number, "Word": Word, "Named": Named, "Names": Names,
}  # fmt: skip
