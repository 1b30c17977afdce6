"""Settings: how descriptions in a folder and below are judged."""

from __future__ import annotations

import json
import os
from collections.abc import Iterator, Mapping, Sequence
from pathlib import Path, PurePath
from typing import Any, Final, Literal

import msgspec

from tidegate.lint.description.empty_values import fill_empty
from tidegate.lint.description.load import description_schema, schema_text
from tidegate.lint.description.model.description import Conditions, Waiver
from tidegate.lint.description.model.part import Part
from tidegate.lint.description.place import DescriptionError, Fault, Place, steps
from tidegate.lint.description.reading import TooMuchError, read_file
from tidegate.lint.description.schema_tree import without_own_keys
from tidegate.lint.description.sources import Sources
from tidegate.lint.description.yaml_text import read_yaml
from tidegate.lint.found import quoted
from tidegate.lint.judgement import Level
from tidegate.lint.quantity import Dimension, Span
from tidegate.lint.rule import Rule
from tidegate.lint.waivers import PlacedWaiver, margin_of, placed_waivers

FILE_NAME: Final = "tidegate.settings.yaml"
"""Name of a settings file; the nearest one at or above a description counts."""

_NAMING: Final = ("levels", "least_margins", "leave_out")  # what names rules or families
_PACKS: Final = ("packs", "packs_installed")


class Settings(Part, frozen=True, kw_only=True):
    """What the settings file says; the defaults where there is none."""

    file: str = ""
    """The file they came from; empty for the defaults."""
    levels: dict[str, Level] = {}
    least_margins: dict[str, str] = {}
    leave_out: tuple[str, ...] = ()
    fail_at: Level = Level.WARNING
    also: tuple[Literal["open", "review"], ...] = ()
    conditions: Conditions | None = None
    waivers: tuple[str, ...] = ()
    packs: tuple[str, ...] = ()
    packs_installed: tuple[str, ...] = ()
    waived: tuple[PlacedWaiver, ...] = ()
    """Waivers of the files that ``waivers`` names."""
    option_packs: tuple[str, ...] = ()
    """Rule packs that the command line names."""
    places: dict[str, Place] = {}
    """Where each rule, family or pack is named, by key and name."""

    @property
    def shown(self) -> str:
        """Where the settings come from, for a report."""
        return self.file or "defaults"

    @property
    def summary(self) -> str:
        """The settings in a few words, with what they change; empty where they are the defaults."""
        words = {
            "left out": self.leave_out,
            "levels": [f"{name} {level.value}" for name, level in self.levels.items()],
            "least margins": [f"{name} {least}" for name, least in self.least_margins.items()],
            "rule packs": (*self.packs, *self.packs_installed, *self.option_packs),
            "fails at": () if self.fail_at is Level.WARNING else (self.fail_at.value,),
            "also fails on": self.also,
            "conditions": self.conditions_given,
            "waiver files": self.waivers,
        }
        parts = [f"{label} {', '.join(names)}" for label, names in words.items() if names]
        return "; ".join([*([self.file] if self.file else []), *parts])

    @property
    def conditions_given(self) -> list[str]:
        """The conditions that are given, by name."""
        names = Conditions.__struct_fields__ if self.conditions is not None else ()
        return [name for name in names if getattr(self.conditions, name) is not None]

    def with_changes(self, **changes: Any) -> Settings:
        """The settings with what the command line says."""
        return msgspec.structs.replace(self, **changes)

    def level_of(self, rule: Rule) -> Level:
        """The level of a rule: its own setting, that of its family, or the rule's."""
        return self.levels.get(rule.id) or self.levels.get(rule.family) or rule.level

    def least_margin_of(self, rule: Rule) -> tuple[str, str] | None:
        """The least margin with which a rule must pass, and under which name; None where it only has to pass."""
        name = rule.id if rule.id in self.least_margins else rule.family
        asked = self.least_margins.get(name)
        return None if asked is None else (name, asked)

    def place(self, key: str, name: str) -> Place:
        """Where a rule, family or pack is named."""
        return self.places.get(f"{key}.{name}") or Place(self.file)

    def leaves_out(self, rule: Rule) -> bool:
        """Whether a rule is not run."""
        return rule.id in self.leave_out or rule.family in self.leave_out


def nearest_settings(description: Path, top: Path | None = None) -> Path | None:
    """The settings file beside a description or in the nearest folder above it, at most ``top``; None without one."""
    folder = Path(os.path.abspath(description)).parent  # noqa: PTH100 - '..' must not lead through other folders
    for above in (folder, *folder.parents):
        if os.path.lexists(above / FILE_NAME):  # a link that leads nowhere must not be passed over in silence
            return above / FILE_NAME
        if above == top:
            break
    return None


def load_settings(path: Path, *, shown: str | None = None) -> Settings:
    """Read and check a settings file and the waiver files it names.

    Raises: DescriptionError: with every fault of the files.
    """
    name = shown or str(path)
    sources = _read(path, name, "a key, such as fail_at")
    faults = _faults(sources, "settings")
    if faults:
        raise DescriptionError(faults)
    data = without_own_keys(sources.data, _schema("settings"))
    settings: Settings = _typed({**data, "file": name}, Settings, sources)
    faults = [*_margin_faults(settings, sources), *_waiver_file_faults(settings, path.parent, sources)]
    if faults:
        raise DescriptionError(faults)
    waived: list[PlacedWaiver] = []
    for file in settings.waivers:
        waived += _waivers(path.parent / file, str(PurePath(name).parent / file))
    return msgspec.structs.replace(settings, waived=tuple(waived), places=_places(sources))


def _margin_faults(settings: Settings, sources: Sources) -> Iterator[Fault]:
    """Least margins that are none, whatever number they are held against."""
    for name, asked in settings.least_margins.items():
        if all(margin_of(asked, dimension) is None for dimension in Dimension):
            place = sources.place(("least_margins", name))
            problem = f"{quoted(asked)} is no margin"
            advice = "write a quantity, such as 5 mV, or a share of the need, such as 2 %"
            yield Fault(place, f"least_margins.{name}", problem, advice)
        elif asked.startswith("-"):
            place = sources.place(("least_margins", name))
            problem = f"{quoted(asked)} is less than a rule asks for by itself"
            yield Fault(place, f"least_margins.{name}", problem, "write zero or more, or leave it out")


def _waiver_file_faults(settings: Settings, folder: Path, sources: Sources) -> Iterator[Fault]:
    for index, file in enumerate(settings.waivers):
        path = folder / file
        if not path.is_file():
            what = "a folder" if path.is_dir() else "no such file"
            place = sources.place(("waivers", index))
            yield Fault(
                place, f"waivers[{index}]", f"{what} (found {quoted(file)})", "name a file with a section waivers"
            )


def _places(sources: Sources) -> dict[str, Place]:
    """Where rules, families and packs are named."""
    places: dict[str, Place] = {}
    for key in (*_NAMING, *_PACKS):
        named = sources.data.get(key, {})
        assert isinstance(named, (dict, list))
        for index, name in enumerate(named):
            in_list = isinstance(named, list)
            place = sources.place((key, index)) if in_list else sources.place((key, str(name)), key=True)
            places[f"{key}.{name}"] = place
    return places


def _waivers(path: Path, name: str) -> Sequence[PlacedWaiver]:
    sources = _read(path, name, "waivers")
    faults = _faults(sources, "description")
    for key in sources.data.keys() & description_schema()["properties"].keys() - {"waivers"}:
        place = sources.place((key,), key=True)
        faults.append(Fault(place, key, "a file of waivers holds nothing else", "keep the section waivers only"))
    if faults:
        raise DescriptionError(faults)
    data = without_own_keys(sources.data, description_schema())
    waivers = _typed(data.get("waivers", []), tuple[Waiver, ...], sources)
    return placed_waivers(waivers, lambda i: f"waivers[{i}]", lambda i: sources.place(("waivers", i)))


def _read(path: Path, name: str, first: str) -> Sources:
    try:
        file = read_yaml(name, read_file(path), first=first)
    except TooMuchError as error:
        raise DescriptionError([Fault(Place(name), "", error.problem, error.advice)]) from None
    except OSError as error:
        raise DescriptionError([Fault(Place(name), "", f"cannot be read ({error.strerror})", "name a file")]) from None
    return Sources([file], file.data, file.faults)


def _schema(name: str) -> Mapping[str, Any]:
    schema: Mapping[str, Any] = json.loads(schema_text(name))
    return schema


def _faults(sources: Sources, schema_name: str) -> list[Fault]:
    schema = _schema(schema_name)
    faults = fill_empty(sources, schema)
    import jsonschema_rs

    if not jsonschema_rs.validator_for(dict(schema)).is_valid(sources.data):
        from tidegate.lint.description.schema_faults import schema_faults

        faults += schema_faults(sources.data, schema, sources)
    spoiled = {path for file in sources.files for path in file.spoiled}
    return [*sources.faults, *(fault for fault in faults if not fault.lies_in(spoiled))]


def _typed(data: Any, kind: Any, sources: Sources) -> Any:
    try:
        return msgspec.convert(data, kind, dec_hook=_read_span)
    except msgspec.ValidationError as error:  # a range whose ends are the wrong way round, which no schema can say
        problem, _, path = str(error).partition(" - at `$.")
        where = path.removesuffix("`").removesuffix("[...]")
        said, _, advice = problem.partition("; ")
        raise DescriptionError([Fault(sources.place(steps(where)), where, said, advice or "correct it")]) from None


def _read_span(kind: type[Span], given: object) -> Span:
    return kind.read(given)


def name_faults(settings: Settings, rules: Mapping[str, Rule]) -> list[Fault]:
    """Rules and families that the settings name and nobody has."""
    known = [*rules, *sorted({rule.family for rule in rules.values()})]
    faults = []
    for key in _NAMING:
        for name in getattr(settings, key):
            if name not in known:
                from difflib import get_close_matches

                near = get_close_matches(name, known, 1)
                advice = f"did you mean {near[0]}?" if near else "tidegate rules lists them"
                problem = f"no rule or family is called {quoted(name)}"
                faults.append(Fault(settings.place(key, name), key, problem, advice))
    return faults
