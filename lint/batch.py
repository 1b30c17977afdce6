"""One description after another, in one process or many: what to judge, and what comes back of each."""

from __future__ import annotations

import datetime
import os
import uuid
from collections import deque
from collections.abc import Callable, Iterable, Iterator, Sequence
from functools import lru_cache
from itertools import islice
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final, TypeAlias, TypeVar

import msgspec

from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Level
from tidegate.lint.rule import PackError, Rule
from tidegate.lint.settings import Settings, load_settings, nearest_settings

if TYPE_CHECKING:
    from concurrent.futures import Executor, Future

Families: TypeAlias = Sequence[Sequence[Rule]]

_A = TypeVar("_A")
_B = TypeVar("_B")
_AHEAD: Final = 256  # items handed out before their turn: enough to keep a cluster busy, few enough to hold in memory


class Request(msgspec.Struct, frozen=True):
    """How descriptions are to be judged; the same for all of them, and small enough to send to another process."""

    today: datetime.date
    families: Callable[[], Families]
    """The rules that come with the tool; a function, since rules do not travel between processes."""
    settings: str | None = None
    """A settings file for all; None where each description has its own."""
    packs: tuple[str, ...] = ()
    fail_at: str | None = None
    also: tuple[str, ...] | None = None
    folder: str = msgspec.field(default_factory=lambda: str(Path.cwd()))
    """Where names of files count from: a worker may have been started elsewhere."""
    top: str | None = None
    """The folder above which no settings are looked for."""
    run: str = msgspec.field(default_factory=lambda: uuid.uuid4().hex)
    """Tells one run from the next: a worker that outlives a run must read settings and packs again."""


class Judged(msgspec.Struct, frozen=True):
    """What came of one file: a review, or the faults that keep it from being used."""

    file: str
    settings: Settings
    review: Review | None
    faults: tuple[Fault, ...] = msgspec.field(default=())


def judge_file(file: str, request: Request) -> Judged:
    """Judge one description under the settings that apply to it."""
    settings = Settings()
    try:
        settings = settings_for(file, request)
        rules = catalogue(request, settings)
        loaded = load(Path(request.folder, file), shown=file)
        judged = review(loaded, rules, today=request.today, settings=settings)
    except DescriptionError as error:
        return Judged(file, settings, None, error.faults)
    except PackError as error:
        return Judged(file, settings, None, (pack_fault(str(error), settings, file),))
    return Judged(file, settings, judged)


def pack_fault(said: str, settings: Settings, file: str) -> Fault:
    """What is wrong with a pack, at the place where it is named."""
    advice = "correct the pack, or do not name it"
    beside = Path(settings.file).parent
    for key, packs in (("packs", settings.packs), ("packs_installed", settings.packs_installed)):
        for index, pack in enumerate(packs):
            if said.startswith(f"rule pack {beside / pack if key == 'packs' else pack}: "):
                return Fault(settings.place(key, pack), f"{key}[{index}]", said, advice)
    return Fault(Place(file), "--pack", said, advice)


def files_read(judged: Judged) -> tuple[str, ...]:
    """The names of the files that a review was made from, as far as they are known."""
    settings = judged.settings
    beside = Path(settings.file).parent
    named = [str(beside / each) for each in (*settings.waivers, *settings.packs)]
    described = () if judged.review is None else judged.review.loaded.sources.files
    own = [judged.file, *(file.name for file in described), *([settings.file] if settings.file else [])]
    return tuple(dict.fromkeys([*own, *named, *settings.option_packs]))


def settings_for(file: str, request: Request) -> Settings:
    """The settings of a description: those named, or the nearest file; what the command line says wins.

    Raises: DescriptionError: if the settings file cannot be used.
    """
    folder = Path(request.folder)
    top = None if request.top is None else Path(request.top)
    path = folder / request.settings if request.settings else nearest_settings(folder / file, top)
    return _with_options(Settings() if path is None else _settings(path, folder, request.run), request)


@lru_cache(maxsize=64)
def _settings(path: Path, folder: Path, _run: str) -> Settings:
    try:
        shown = os.path.relpath(path, folder)
    except ValueError:  # on another drive
        shown = str(path)
    return load_settings(path, shown=shown)


def _with_options(settings: Settings, request: Request) -> Settings:
    changes: dict[str, Any] = {}
    if request.fail_at is not None:
        changes["fail_at"] = Level(request.fail_at)
    if request.also is not None:
        changes["also"] = request.also
    if request.packs:
        changes["option_packs"] = request.packs
    return settings if not changes else settings.with_changes(**changes)


def catalogue(request: Request, settings: Settings) -> Catalogue:
    """The rules that come with the tool and those of the packs in force.

    Raises: PackError: if a pack cannot be used.
    """
    beside = Path(settings.file).parent
    files = (*(str(beside / pack) for pack in settings.packs), *request.packs)
    return _catalogue(request.families, request.folder, files, settings.packs_installed, request.run)


@lru_cache(maxsize=16)
def _catalogue(
    families: Callable[[], Families], folder: str, files: tuple[str, ...], installed: tuple[str, ...], _run: str
) -> Catalogue:
    own = families()
    if not files and not installed:
        return Catalogue(own)
    from tidegate.lint.packs import load_packs

    names = {"waiver", *(rule.family for family in own for rule in family)}
    return Catalogue([*own, *load_packs(files, installed, names, folder=Path(folder))])


def run(work: Callable[[_A], _B], items: Iterable[_A], executor: Executor | None) -> Iterator[_B]:
    """What comes of each item, in the order of the items whatever finishes first; work begins at once."""
    if executor is None:
        return map(work, items)
    waiting = iter(items)
    ahead = deque(executor.submit(work, item) for item in islice(waiting, _AHEAD))
    return _in_turn(work, waiting, ahead, executor)


def _in_turn(
    work: Callable[[_A], _B], waiting: Iterator[_A], ahead: deque[Future[_B]], executor: Executor
) -> Iterator[_B]:
    try:
        while ahead:
            yield ahead.popleft().result()
            ahead.extend(executor.submit(work, item) for item in islice(waiting, 1))
    except (Exception, GeneratorExit):  # a run that is told to stop ends the executor itself
        for future in ahead:
            future.cancel()
        raise
