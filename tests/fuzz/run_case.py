"""One case, from its files to everything that is wrong with what the program makes of them."""

from __future__ import annotations

import random
import tempfile
from collections import Counter
from pathlib import Path

from tests.fuzz.cases import MAIN, SETTINGS, Case
from tests.fuzz.check_commands import Call, check_commands
from tests.fuzz.check_judging import judged, same_in_any_order, same_twice
from tests.fuzz.check_loading import check_faults, loaded
from tests.fuzz.trouble import Trouble, watched
from tidegate.lint.description.load import Loaded
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.engine import Review
from tidegate.lint.settings import Settings, load_settings


def run_case(case: Case, choose: random.Random, tally: Counter[str], *, commands: int = 2) -> list[Trouble]:
    """Everything that is wrong; what was met on the way is counted in ``tally``."""
    found: list[Trouble] = []
    with tempfile.TemporaryDirectory(prefix="fuzz") as folder:
        for name, content in case.files.items():
            (Path(folder) / name).write_bytes(content)
        _run(case, Path(folder), choose, tally, found, commands)
    tally["cases"] += 1
    tally["with trouble"] += bool(found)
    return found


def _run(
    case: Case, folder: Path, choose: random.Random, tally: Counter[str], found: list[Trouble], commands: int
) -> None:
    settings: Settings | None = None
    if SETTINGS in case.files:
        with watched("settings", found):
            settings = _settings(folder / SETTINGS, tally, found)
        if MAIN not in case.files or settings is None:
            return
    file = folder / MAIN
    said: object = None
    with watched("load", found):
        said = loaded(file, found, both_parsers=choose.random() < 0.25)
    if said is None:
        return
    result: Review | None = None
    if isinstance(said, Loaded):
        tally["loaded"] += 1
        if case.must_refuse:
            found.append(Trouble("accepted", "load", f"{case.must_refuse} was accepted in silence"))
        with watched("review", found):
            result = _review(said, case, file, settings, choose, tally, found)
        if result is None:
            return
    else:
        tally["refused"] += 1
    if choose.random() < (1.0 if result is not None else 0.1):
        with watched("commands", found, many=True):
            check_commands(Call(choose, file, result, found), most=commands)
        tally["with commands"] += 1


def _settings(file: Path, tally: Counter[str], found: list[Trouble]) -> Settings | None:
    try:
        settings = load_settings(file, shown=file.name)
    except DescriptionError as error:
        check_faults(error.faults, file, found)
        tally["settings refused"] += 1
        return None
    tally["settings read"] += 1
    return settings


def _review(
    said: Loaded, case: Case, file: Path, settings: Settings | None, choose: random.Random, tally: Counter[str],
    found: list[Trouble],
) -> Review | None:  # fmt: skip
    given, data = file.read_bytes().decode("utf-8", "replace"), case.data
    try:
        result = judged(said, given, found, settings)
    except DescriptionError as error:
        if settings is None:
            raise
        check_faults(error.faults, file, found)
        tally["settings refused"] += 1
        return None
    for kind, number in result.counts.items():
        tally[kind.value] += number
    same_twice(file, result, found)
    if data is not None and choose.random() < 0.3:
        same_in_any_order(data, file, choose, result, found)
    return result
