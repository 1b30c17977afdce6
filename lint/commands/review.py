"""``tidegate review``: judge descriptions."""

from __future__ import annotations

import argparse
import os
from collections import Counter
from collections.abc import Iterable, Iterator, Sequence
from contextlib import AbstractContextManager, ExitStack, closing, contextmanager, nullcontext
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

import msgspec

from tidegate.lint.batch import Judged, Request, catalogue, files_read, judge_file
from tidegate.lint.batch import run as run_batch
from tidegate.lint.commands.interruption import processes, signals_held
from tidegate.lint.commands.judged_on import add_day
from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.description.place import Fault
from tidegate.lint.found_files import found_files
from tidegate.lint.judgement import Level
from tidegate.lint.reports.forms import ENDINGS, Form, Look, Part, Ran, View, Whole, form_of, part
from tidegate.lint.rule import PackError, Rule
from tidegate.lint.settings import Settings

if TYPE_CHECKING:
    from concurrent.futures import Executor

_MANY: Final = 16  # files from which more than one process pays
_AT_A_TERMINAL: Final = 4  # files from which a progress bar is shown
_MOST_CONNECTING_S: Final = 10
_MOST_DIGITS: Final = 9


def _count(text: str) -> int:
    if not text.isdecimal() or len(text) > _MOST_DIGITS or int(text) < 1:
        raise argparse.ArgumentTypeError(f"a whole number is due, at least 1 (found {text!r})")
    return int(text)


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
    add("--findings-only", action="store_true", help="in SARIF, leave out all but failures and questions")
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
    add_day(parser)
    add("--workers", type=_count, metavar="N", help="processes to work in (default: one, or one a core for many files)")
    add("--on", metavar="ADDRESS", help="a running Dask scheduler to work on, such as tcp://host:8786 (needs dask)")


class _Done(msgspec.Struct, frozen=True):
    """What came of a file, as plain data."""

    status: int
    settings: Settings | None
    """The settings in force; None where no description was meant."""
    parts: tuple[Part, ...]
    read: tuple[str, ...]
    """The files it was made from."""


def _work(item: str | Fault, request: Request, views: tuple[View, ...]) -> _Done:
    """Judge a file, in whichever process; what is wrong with a name is told like what is wrong with a file."""
    fault = item if isinstance(item, Fault) else None
    judged = judge_file(item, request) if isinstance(item, str) else Judged(item.place.file, Settings(), None, (item,))
    settings = judged.settings if fault is None else None
    return _Done(_status(judged), settings, tuple(part(view, judged) for view in views), files_read(judged))


def _status(judged: Judged) -> int:
    if judged.review is None:
        return Exit.UNUSABLE
    if judged.review.faults:
        return Exit.RULE_FAULT
    settings = judged.settings
    found = next(judged.review.findings(settings.fail_at, settings.also), None)
    return Exit.KEPT if found is None else Exit.FINDINGS


class _StoppedError(Exception):
    """The work cannot be done, or not to its end; the message says why."""


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Judge every file; the exit status is the worst of all."""
    form = Form(options.form)
    shown = _view(form, Look(streams.width, streams.colour, options.every), options)
    saved: dict[str, View] = {}
    met: dict[str, str] = {}
    for path in options.save:
        first = met.setdefault(os.path.realpath(path), path)
        if first in saved:
            streams.say(f"--save {path}: named twice{f' (as {first})' if first != path else ''}; name each file once")
            return Exit.UNUSABLE
        told = form_of(path)
        if told is None:
            streams.say(f"--save {path}: the form is told by the ending: {', '.join(ENDINGS)}")
            return Exit.UNUSABLE
        saved[path] = _view(told, Look(every=options.every), options)
    request = Request(
        options.today or streams.today, streams.families, options.settings, tuple(options.pack), options.fail_at,
        None if options.also is None else tuple(options.also),
    )  # fmt: skip
    try:
        return _judge_all(list(found_files(options.files)), _Order(request, shown, saved), options, streams)
    except _StoppedError as error:
        streams.say(str(error))
        return Exit.UNUSABLE


def _view(form: Form, look: Look, options: argparse.Namespace) -> View:
    """A form with what of its looks can make a difference: two that are alike are made once."""
    if form is Form.TERMINAL:
        return View(form, look)
    return View(form, findings_only=options.findings_only and form is Form.SARIF)


class _Order(msgspec.Struct, frozen=True):
    """What is wanted: how to judge, what to show on the output, what to save."""

    request: Request
    shown: View
    saved: dict[str, View]


def _judge_all(items: Sequence[str | Fault], order: _Order, options: argparse.Namespace, streams: Streams) -> int:
    request, shown, saved = order.request, order.shown, order.saved
    views = tuple(dict.fromkeys((shown, *saved.values())))
    to_print = shown.form is Form.TERMINAL
    statuses: Counter[int] = Counter()
    used: dict[str, Settings] = {}
    read: set[str] = set()
    with ExitStack() as stack:
        wholes = {view: Whole(view.form) for view in views}
        for whole in wholes.values():
            stack.enter_context(closing(whole))
        executor = stack.enter_context(_executor(options, len(items)))
        with signals_held():  # processes are started when the first work is handed out
            results = run_batch(partial(_work, request=request, views=views), items, executor)
        for result in _with_progress(_unless_stopped(results, executor), len(items), streams, to_print=to_print):
            if to_print:
                _show(result, streams, first=not statuses)
            for view, new in zip(views, result.parts, strict=True):
                if not to_print or view in saved.values():
                    wholes[view].add(new)
            statuses[result.status] += 1
            read.update(result.read)
            if result.settings is not None:
                used.setdefault(result.settings.shown, result.settings)
        summary = _summary(statuses) if len(items) > 1 else ""
        if to_print:
            streams.out.write(summary)
        for view in set(saved.values()):
            if view.form is Form.TERMINAL and summary:
                wholes[view].add(Part(summary.removeprefix("\n")))
        ran = Ran(max(statuses, default=Exit.KEPT), list(used.values()), _rules(request, used.values()))
        if not to_print:
            streams.out.fix_encoding()
            streams.out.writelines(wholes[shown].pieces(ran))
        return max(ran.status, _save_all(saved, wholes, ran, read, streams))


def _show(result: _Done, streams: Streams, *, first: bool) -> None:
    """Show the text of one description; what is wrong with a file goes to the error stream."""
    text = result.parts[0].text
    if result.status == Exit.UNUSABLE:
        streams.err.write(text)
    else:
        streams.out.write(text if first else f"\n{text}")


def _summary(statuses: Counter[int]) -> str:
    words = {
        Exit.KEPT: "kept",
        Exit.FINDINGS: "with findings",
        Exit.UNUSABLE: "unusable",
        Exit.RULE_FAULT: "with rule faults",
    }
    counts = ", ".join(f"{statuses[status]} {word}" for status, word in words.items() if statuses[status])
    return f"\n{statuses.total()} descriptions: {counts}\n"


def _rules(request: Request, used: Iterable[Settings]) -> list[Rule]:
    """Every rule that was in force for some description."""
    rules: dict[str, Rule] = {}
    for settings in used:
        try:
            rules |= catalogue(request, settings).rules
        except PackError:  # said already, as the fault of each file it concerns
            continue
    return list(rules.values())


def _save_all(
    saved: dict[str, View], wholes: dict[View, Whole], ran: Ran, read: Iterable[str], streams: Streams
) -> int:
    from tidegate.lint.reports.saving import save

    status = Exit.KEPT
    for path, view in saved.items():
        try:
            save(Path(path), wholes[view].pieces(ran), read=read)
        except OSError as error:
            streams.say(f"{path}: cannot be written ({error.strerror or error})")
            status = Exit.UNUSABLE
    return status


def _executor(options: argparse.Namespace, files: int) -> AbstractContextManager[Executor | None]:
    """Where the work is done: here, in processes beside this one, or on a cluster."""
    if options.on:
        return _cluster(options.on)
    workers = options.workers or (min(os.cpu_count() or 1, files) if files >= _MANY else 1)
    if workers <= 1 or files <= 1:
        return nullcontext(None)
    return processes(min(workers, files))


@contextmanager
def _cluster(address: str) -> Iterator[Executor]:
    """A Dask cluster that runs already, as an executor; a worker that dies has its work done by another."""
    try:
        from distributed import Client
    except ImportError:
        raise _StoppedError("--on needs Dask: install tidegate[cluster]") from None
    connect: Any = Client
    try:
        client = connect(address, timeout=_MOST_CONNECTING_S)
    except (OSError, ValueError) as error:
        raise _StoppedError(f"--on {address}: no scheduler answers ({error})") from None
    with client:
        yield client.get_executor(retries=3)


def _unless_stopped(results: Iterator[_Done], executor: Executor | None) -> Iterator[_Done]:
    """The results, unless the processes that should bring them die."""
    try:
        yield from results
    except Exception as error:
        from concurrent.futures import BrokenExecutor

        if isinstance(error, BrokenExecutor):
            raise _StoppedError("a process that judges descriptions died; --workers 1 does without them") from None
        if executor is None or not type(error).__module__.startswith("distributed"):
            raise
        raise _StoppedError(f"the cluster gave up ({type(error).__name__}: {error})") from None


def _with_progress(results: Iterator[_Done], total: int, streams: Streams, *, to_print: bool) -> Iterator[_Done]:
    """The results, with a bar on a terminal where there are many and no text rolls by on it."""
    if total < _AT_A_TERMINAL or not streams.err.isatty() or (to_print and streams.out.isatty()):
        yield from results
        return
    from rich.progress import Progress

    with Progress(console=streams.console(), transient=True) as bar:
        task = bar.add_task("judged", total=total)
        for result in results:
            bar.advance(task)
            yield result
