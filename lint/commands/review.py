"""``tidegate review``: judge descriptions."""

from __future__ import annotations

import argparse
import os
from collections.abc import Iterable, Iterator
from concurrent.futures import Executor
from contextlib import AbstractContextManager, contextmanager, nullcontext
from dataclasses import dataclass
from functools import partial
from pathlib import Path
from typing import Any, Final

from tidegate.lint.batch import Judged, Request, catalogue, found_files, judge_file
from tidegate.lint.batch import run as run_batch
from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.judgement import Level
from tidegate.lint.reports.forms import ENDINGS, Form, Look, form_of, part, whole
from tidegate.lint.reports.plain_text import plain
from tidegate.lint.rule import Rule
from tidegate.lint.settings import Settings

_MANY: Final = 16  # files from which more than one process pays
_AT_A_TERMINAL: Final = 4  # files from which a progress bar is shown


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    add = parser.add_argument
    add("files", nargs="+", metavar="FILE", help="description (YAML or JSON), folder of them, or pattern with *")
    add(
        "--as", dest="form", choices=[form.value for form in Form], default=Form.TERMINAL.value,
        help="form of the report on the output (default: terminal)",
    )  # fmt: skip
    add(
        "--save", action="append", default=[], metavar="PATH",
        help=f"write the report to a file too, in the form its ending says ({', '.join(ENDINGS)}); may be given again",
    )  # fmt: skip
    add("--every", action="store_true", help="show in text every judgement, those that pass as well")
    add(
        "--fail-at", choices=[level.value for level in Level], metavar="LEVEL",
        help="least level of a failure that makes the exit status 1: error, warning (usual) or note",
    )  # fmt: skip
    add(
        "--also", action="append", choices=("open", "review"), metavar="KIND",
        help="let judgements of this kind, open or review, make the exit status 1 too; may be given twice",
    )  # fmt: skip
    add("--settings", metavar="FILE", help="settings for all files, in place of the nearest tidegate.settings.yaml")
    add("--pack", action="append", default=[], metavar="FILE", help="Python file with rules of your own")
    add("--workers", type=int, metavar="N", help="processes to work in (default: one, or one a core for many files)")
    add("--on", metavar="ADDRESS", help="a running Dask scheduler to work on, such as tcp://host:8786 (needs dask)")


@dataclass(frozen=True, slots=True)
class _Wanted:
    """What each worker makes of a file."""

    request: Request
    forms: tuple[Form, ...]
    look: Look


@dataclass(frozen=True, slots=True)
class _Done:
    """What came of a file, as plain data."""

    status: int
    settings: Settings
    parts: tuple[Any, ...]


def _work(file: str, wanted: _Wanted) -> _Done:
    judged = judge_file(file, wanted.request)
    parts = tuple(part(form, judged, wanted.look) for form in wanted.forms)
    return _Done(_status(judged), judged.settings, parts)


def _status(judged: Judged) -> int:
    if judged.review is None:
        return Exit.UNUSABLE
    if judged.review.faults:
        return Exit.RULE_FAULT
    settings = judged.settings
    found = next(judged.review.findings(settings.fail_at, settings.also), None)
    return Exit.KEPT if found is None else Exit.FINDINGS


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Judge every file; the exit status is the worst of all."""
    saved = _saved(options.save, streams)
    if saved is None:
        return Exit.UNUSABLE
    files, faults = found_files(options.files)
    for fault in faults:
        streams.err.write(plain(str(fault)) + "\n")
    form = Form(options.form)
    forms = tuple(dict.fromkeys((form, *saved.values())))
    request = Request(
        streams.today, streams.families, options.settings, tuple(options.pack), options.fail_at,
        None if options.also is None else tuple(options.also),
    )  # fmt: skip
    wanted = _Wanted(request, forms, Look(streams.width, streams.colour and form is Form.TERMINAL, options.every))
    done: list[_Done] = []
    with _executor(options, len(files)) as executor:
        results = run_batch(partial(_work, wanted=wanted), files, executor)
        for result in _with_progress(results, len(files), streams):
            if form is Form.TERMINAL:
                _print_text(result, number=len(done), streams=streams)
            done.append(result)
    status = max([Exit.UNUSABLE if faults else Exit.KEPT, *(result.status for result in done)])
    if form is Form.TERMINAL and len(files) > 1:
        streams.out.write(_summary(done))
    reports = _Reports(done, forms, request, status)
    if form is not Form.TERMINAL:
        streams.out.write(reports.text(form))
    return max(status, _save_all(saved, reports, streams))


def _saved(paths: Iterable[str], streams: Streams) -> dict[str, Form] | None:
    """The form of each file to write; None if one cannot be told."""
    saved: dict[str, Form] = {}
    for path in paths:
        form = form_of(path)
        if form is None:
            streams.err.write(f"--save {plain(path)}: the form is told by the ending: {', '.join(ENDINGS)}\n")
            return None
        saved[path] = form
    return saved


def _print_text(result: _Done, *, number: int, streams: Streams) -> None:
    text: str = result.parts[0]
    if result.status == Exit.UNUSABLE:
        streams.err.write(text)
    else:
        streams.out.write(("\n" if number else "") + text)


def _summary(done: list[_Done]) -> str:
    words = {
        Exit.KEPT: "kept",
        Exit.FINDINGS: "with findings",
        Exit.UNUSABLE: "unusable",
        Exit.RULE_FAULT: "with rule faults",
    }
    counts = [(sum(result.status == status for result in done), word) for status, word in words.items()]
    return f"\n{len(done)} descriptions: {', '.join(f'{count} {word}' for count, word in counts if count)}\n"


class _Reports:
    """The whole reports, each made when it is asked for."""

    def __init__(self, done: list[_Done], forms: tuple[Form, ...], request: Request, status: int) -> None:
        self._done, self._forms, self._request, self._status = done, forms, request, status

    def text(self, form: Form) -> str:
        """The report in one form."""
        number = self._forms.index(form)
        used = list(dict.fromkeys(result.settings.shown for result in self._done))
        levels = {result.settings.fail_at.value for result in self._done} or {Level.WARNING.value}
        rules: dict[str, Rule] = {}
        for settings in {result.settings.shown: result.settings for result in self._done}.values():
            rules |= _rules(self._request, settings)
        return whole(
            form, [result.parts[number] for result in self._done], rules.values(), status=self._status,
            settings=", ".join(used), fail_at=min(levels),
        )  # fmt: skip


def _rules(request: Request, settings: Settings) -> dict[str, Rule]:
    from tidegate.lint.packs import PackError

    try:
        return catalogue(request, settings).rules
    except PackError:  # said already, as the fault of each file it concerns
        return {}


def _save_all(saved: dict[str, Form], reports: _Reports, streams: Streams) -> int:
    from tidegate.lint.reports.saving import save

    for path, form in saved.items():
        try:
            save(Path(path), reports.text(form))
        except OSError as error:
            streams.err.write(f"{plain(path)}: cannot be written ({error.strerror or error})\n")
            return Exit.UNUSABLE
    return Exit.KEPT


def _executor(options: argparse.Namespace, files: int) -> AbstractContextManager[Executor | None]:
    """Where the work is done: here, in processes beside this one, or on a cluster."""
    if options.on:
        return _cluster(options.on)
    workers = options.workers or (min(os.cpu_count() or 1, files) if files >= _MANY else 1)
    if workers <= 1 or files <= 1:
        return nullcontext(None)
    from concurrent.futures import ProcessPoolExecutor

    return ProcessPoolExecutor(workers)


@contextmanager
def _cluster(address: str) -> Iterator[Executor]:
    """A Dask cluster that runs already, as an executor; a worker that dies has its work done by another."""
    from distributed import Client

    connect: Any = Client
    with connect(address) as client:
        yield client.get_executor(retries=3)


def _with_progress(results: Iterator[_Done], total: int, streams: Streams) -> Iterator[_Done]:
    """The results, with a bar on a terminal where there are many and the output goes elsewhere."""
    if total < _AT_A_TERMINAL or not streams.err.isatty() or streams.out.isatty():
        yield from results
        return
    from rich.progress import Progress

    with Progress(console=streams.console(error=True), transient=True) as bar:
        task = bar.add_task("judged", total=total)
        for result in results:
            bar.advance(task)
            yield result
