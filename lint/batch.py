"""One description after another, in one process or many: what to judge, and what comes back of each."""

from __future__ import annotations

import datetime
from collections.abc import Callable, Iterable, Iterator, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass, field
from functools import lru_cache
from pathlib import Path
from typing import Any, Final, TypeAlias

from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Level
from tidegate.lint.packs import PackError, load_packs
from tidegate.lint.rule import Rule
from tidegate.lint.settings import Settings, load_settings, nearest_settings

Families: TypeAlias = Sequence[Sequence[Rule]]
SUFFIXES: Final = (".tidegate.yaml", ".tidegate.yml", ".tidegate.json")
"""Ends of the names by which descriptions are found in a folder."""


@dataclass(frozen=True, slots=True)
class Request:
    """How descriptions are to be judged; the same for all of them, and small enough to send to another process."""

    today: datetime.date
    families: Callable[[], Families]
    """The rules that come with the tool; a function, since rules do not travel between processes."""
    settings: str | None = None
    """A settings file for all; None where each description has its own."""
    packs: tuple[str, ...] = ()
    fail_at: str | None = None
    also: tuple[str, ...] | None = None


@dataclass(frozen=True, slots=True)
class Judged:
    """What came of one file: a review, or the faults that keep it from being used."""

    file: str
    settings: Settings
    review: Review | None
    faults: tuple[Fault, ...] = field(default=())


def judge_file(file: str, request: Request) -> Judged:
    """Judge one description under the settings that apply to it."""
    settings = Settings()
    try:
        settings = settings_for(file, request)
        rules = catalogue(request, settings)
        judged = review(load(file), rules, today=request.today, settings=settings)
    except DescriptionError as error:
        return Judged(file, settings, None, error.faults)
    except PackError as error:
        return Judged(file, settings, None, (Fault(Place(settings.file or file), "packs", str(error), ""),))
    return Judged(file, settings, judged)


def settings_for(file: str, request: Request) -> Settings:
    """The settings of a description: those named, or the nearest file; what the command line says wins.

    Raises: DescriptionError: if the settings file cannot be used.
    """
    path = Path(request.settings) if request.settings else nearest_settings(Path(file))
    return _with_options(Settings() if path is None else _settings(path), request)


@lru_cache(maxsize=64)
def _settings(path: Path) -> Settings:
    shown = path.relative_to(Path.cwd()) if path.is_relative_to(Path.cwd()) else path
    return load_settings(path, shown=str(shown))


def _with_options(settings: Settings, request: Request) -> Settings:
    changes: dict[str, Any] = {}
    if request.fail_at is not None:
        changes["fail_at"] = Level(request.fail_at)
    if request.also is not None:
        changes["also"] = request.also
    return settings if not changes else settings.with_changes(**changes)


def catalogue(request: Request, settings: Settings) -> Catalogue:
    """The rules that come with the tool and those of the packs in force.

    Raises: PackError: if a pack cannot be used.
    """
    folder = Path(settings.file).parent
    files = (*(str(folder / pack) for pack in settings.packs), *request.packs)
    return _catalogue(request.families, files, settings.packs_installed)


@lru_cache(maxsize=16)
def _catalogue(families: Callable[[], Families], files: tuple[str, ...], installed: tuple[str, ...]) -> Catalogue:
    own = families()
    names = {rule.family for family in own for rule in family}
    return Catalogue([*own, *load_packs(map(Path, files), installed, names)])


def run(work: Callable[[str], Any], files: Sequence[str], executor: Executor | None) -> Iterator[Any]:
    """What comes of each file, in the order of the files whatever finishes first."""
    return map(work, files) if executor is None else executor.map(work, files)


def found_files(names: Iterable[str]) -> tuple[list[str], list[Fault]]:
    """The files that are meant: files as named, descriptions below folders, what a pattern with ``*`` matches."""
    files: dict[str, None] = {}
    faults: list[Fault] = []
    for name in names:
        path = Path(name)
        if path.is_dir():
            below = sorted(str(p) for p in path.rglob("*") if p.name.endswith(SUFFIXES) and p.is_file())
            if not below:
                advice = f"descriptions in a folder have names that end in {', '.join(SUFFIXES)}"
                faults.append(Fault(Place(name), "", "the folder holds no description", advice))
            files |= dict.fromkeys(below)
        elif any(mark in name for mark in "*?[") and not path.exists():
            matched = sorted(map(str, Path().glob(name))) if not path.is_absolute() else []
            if not matched:
                faults.append(Fault(Place(name), "", "no file matches", "check the pattern"))
            files |= dict.fromkeys(matched)
        else:
            files[name] = None
    return list(files), faults
