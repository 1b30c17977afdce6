"""Settings: how descriptions in a folder and below are judged."""

from __future__ import annotations

import json
from collections.abc import Mapping, Sequence
from difflib import get_close_matches
from pathlib import Path
from typing import Any, Final, Literal

import jsonschema_rs
import msgspec

from tidegate.lint.description.load import schema_text
from tidegate.lint.description.model.description import Conditions, Waiver
from tidegate.lint.description.model.part import Part
from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.description.sources import Sources, read_file
from tidegate.lint.description.yaml_text import read_yaml
from tidegate.lint.judgement import Level
from tidegate.lint.quantity import Span
from tidegate.lint.rule import Rule
from tidegate.lint.waivers import PlacedWaiver, placed_waivers

FILE_NAME: Final = "tidegate.settings.yaml"
"""Name of a settings file; the nearest one at or above a description counts."""


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

    @property
    def shown(self) -> str:
        """The settings in a few words, for a report."""
        return self.file or "defaults"

    def with_changes(self, **changes: Any) -> Settings:
        """The settings with what the command line says."""
        return msgspec.structs.replace(self, **changes)

    def level_of(self, rule: Rule) -> Level:
        """The level of a rule: its own setting, that of its family, or the rule's."""
        return self.levels.get(rule.id) or self.levels.get(rule.family) or rule.level

    def least_margin_of(self, rule: Rule) -> str | None:
        """The least margin with which a rule must pass; None where it only has to pass."""
        return self.least_margins.get(rule.id) or self.least_margins.get(rule.family)

    def leaves_out(self, rule: Rule) -> bool:
        """Whether a rule is not run."""
        return rule.id in self.leave_out or rule.family in self.leave_out


def nearest_settings(description: Path) -> Path | None:
    """The settings file beside a description or in the nearest folder above it; None if there is none."""
    folder = description.absolute().parent
    return next((path for above in (folder, *folder.parents) if (path := above / FILE_NAME).is_file()), None)


def load_settings(path: Path, *, shown: str | None = None) -> Settings:
    """Read and check a settings file and the waiver files it names.

    Raises: DescriptionError: with every fault of the files.
    """
    name = shown or str(path)
    sources = _read(path, name)
    faults = _faults(sources, "settings")
    if faults:
        raise DescriptionError(faults)
    settings: Settings = _typed({**sources.data, "file": name}, Settings)
    waived: list[PlacedWaiver] = []
    for index, file in enumerate(settings.waivers):
        waived += _waivers(path.parent / file, file, sources.place(("waivers", index)))
    return msgspec.structs.replace(settings, waived=tuple(waived))


def _waivers(path: Path, name: str, place: Place) -> Sequence[PlacedWaiver]:
    if not path.is_file():
        raise DescriptionError([Fault(place, "waivers", f"no such file (found {name!r})", "name an existing file")])
    sources = _read(path, name)
    others = [key for key in sources.data if key != "waivers" and not key.startswith("x-")]
    faults = _faults(sources, "description")
    if others:
        faults.append(Fault(Place(name), "", "holds more than waivers", "keep the section waivers only"))
    if faults:
        raise DescriptionError(faults)
    waivers = _typed(sources.data.get("waivers", []), tuple[Waiver, ...])
    return placed_waivers(waivers, lambda i: f"{name}: waivers[{i}]", lambda i: sources.place(("waivers", i)))


def _read(path: Path, name: str) -> Sources:
    try:
        file = read_yaml(name, read_file(path))
    except OSError as error:
        raise DescriptionError([Fault(Place(name), "", f"cannot be read ({error.strerror})", "name a file")]) from None
    return Sources([file], file.data, file.faults)


def _faults(sources: Sources, schema_name: str) -> list[Fault]:
    schema: Mapping[str, Any] = json.loads(schema_text(schema_name))
    if jsonschema_rs.validator_for(dict(schema)).is_valid(sources.data):
        return list(sources.faults)
    from tidegate.lint.description.schema_faults import schema_faults

    return [*sources.faults, *schema_faults(sources.data, schema, sources)]


def _typed(data: Any, kind: Any) -> Any:
    return msgspec.convert(data, kind, dec_hook=_read_span)


def _read_span(kind: type[Span], given: object) -> Span:
    return kind.read(given)


def name_faults(settings: Settings, rules: Mapping[str, Rule]) -> list[Fault]:
    """Rules and families that the settings name and nobody has."""
    known = [*rules, *sorted({rule.family for rule in rules.values()})]
    faults = []
    for key in ("levels", "least_margins", "leave_out"):
        for name in getattr(settings, key):
            if name not in known:
                near = get_close_matches(name, known, 1)
                advice = f"did you mean {near[0]}?" if near else "tidegate rules lists them"
                faults.append(Fault(Place(settings.file), key, f"no rule or family is called {name!r}", advice))
    return faults
