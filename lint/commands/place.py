"""``tidegate place``: where the trip levels of a detector may lie, what limits them, and what would buy room."""

from __future__ import annotations

import argparse
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from difflib import get_close_matches
from typing import TYPE_CHECKING, Final

from tidegate.lint.batch import Request, judge_file
from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.derived.asking import Unknown, ask
from tidegate.lint.derived.levels.detector_placement import DetectorPlacement, detector_placement
from tidegate.lint.derived.levels.placed_roles import PLACED_ROLES
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.place import Fault
from tidegate.lint.engine import Review
from tidegate.lint.reports.placement_text import all_levers, placement_lines, row
from tidegate.lint.reports.plain_text import plain

if TYPE_CHECKING:
    from tidegate.lint.derived.crossover.crossover_sweep import CrossoverSweep
    from tidegate.lint.physics.yield_estimate import YieldEstimate

_SAMPLES: Final = 1_000_000
_MOST_SAMPLES: Final = 10_000_000
_SEED: Final = 1
_MOST_DIGITS: Final = 9
_COVERAGE_95: Final = 1.959963984540054
"""Standard deviations to either side that hold 95 % of a normal distribution."""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    add = parser.add_argument
    add("file", metavar="FILE", help="description (YAML or JSON)")
    add("detector", nargs="?", metavar="DETECTOR", help="id of the detector; all of them if left out")
    add("--as", dest="form", choices=("terminal", "json"), default="terminal", help="form of the answer")
    add("--apply", action="store_true", help="write the middle of the interval into the file, and nothing else")
    add("--yield", dest="estimate", action="store_true", help="draw parts, and count those that miss a limit")
    add("--samples", type=_samples, metavar="N", help=f"parts to draw (usual: {_SAMPLES}, most: {_MOST_SAMPLES})")
    add("--seed", type=_seed, metavar="N", help=f"seed of the draws (usual: {_SEED})")
    add("--settings", metavar="FILE", help="settings, in place of the nearest tidegate.settings.yaml")


def _samples(text: str) -> int:
    digits = text.replace("_", "")
    if not digits.isdecimal() or len(digits) > _MOST_DIGITS or not 1 <= int(digits) <= _MOST_SAMPLES:
        raise argparse.ArgumentTypeError(f"from 1 to {_MOST_SAMPLES} parts can be drawn (found {text!r})")
    return int(digits)


def _seed(text: str) -> int:
    if not text.isdecimal() or len(text) > _MOST_DIGITS:
        raise argparse.ArgumentTypeError(f"a whole number of at most {_MOST_DIGITS} digits is due (found {text!r})")
    return int(text)


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Answer for the detectors asked for; the exit status is 1 where one of them stands outside its interval."""
    if (options.samples is not None or options.seed is not None) and not options.estimate:
        streams.say("--samples and --seed belong to --yield")
        return Exit.UNUSABLE
    review = _review(options, streams)
    detectors = None if review is None else _asked_for(review, options, streams)
    if review is None or detectors is None:
        return Exit.UNUSABLE
    placed = _placed(review, detectors)
    status, written = Exit.KEPT, list[str]()
    if options.apply:
        status, written = _apply(review, placed, options, streams)
        review = _review(options, streams)
        if review is None:
            return Exit.UNUSABLE
        placed = _placed(review, [review.loaded.description.comparators[each.id] for each in detectors])
    estimates = _estimates(review, placed, options, streams) if options.estimate else None
    if options.form == "json":
        streams.out.fix_encoding()
    streams.out.write(
        _answer(review, placed, estimates, _components(review, placed, options), written=written, options=options)
    )
    outside = any(each.found.stands is False or each.found.best.is_empty for each in placed)
    return max(status, Exit.FINDINGS if outside else Exit.KEPT)


def _review(options: argparse.Namespace, streams: Streams) -> Review | None:
    """The description under its settings; None, with its faults said, where it cannot be used."""
    judged = judge_file(options.file, Request(streams.today, streams.families, options.settings))
    _say(judged.faults, streams)
    return judged.review


def _say(faults: Sequence[Fault], streams: Streams) -> None:
    for fault in faults:
        streams.say(str(fault))


def _asked_for(review: Review, options: argparse.Namespace, streams: Streams) -> list[Comparator] | None:
    """The detectors to answer for; None, with the reason said, where there is none."""
    comparators = review.loaded.description.comparators
    can = {name: comparator for name, comparator in comparators.items() if comparator.role in PLACED_ROLES}
    if options.detector is None:
        if not can:
            streams.say(f"{options.file}: describes no detector whose levels could be placed")
        return list(can.values()) or None
    if options.detector in can:
        return [can[options.detector]]
    near = get_close_matches(options.detector, can, 1)
    hint = f"did you mean {near[0]}?" if near else f"known: {', '.join(list(can)[:12]) or 'none'}"
    what = f"no power-on, under- or over-voltage detector is called {options.detector!r}"
    streams.say(f"{options.file}: {what}; {hint}")
    return None


def _placed(review: Review, detectors: Sequence[Comparator]) -> list[DetectorPlacement]:
    return [detector_placement(review.loaded.description, review.graph, each) for each in detectors]


def _apply(
    review: Review, placed: Sequence[DetectorPlacement], options: argparse.Namespace, streams: Streams
) -> tuple[Exit, list[str]]:
    """Write the levels; what could not be written is said, and fails where it was asked for by name."""
    from tidegate.lint.commands.applied_levels import write_levels

    written, faults = write_levels(review.loaded, placed)
    _say(faults, streams)
    failed = faults and (options.detector is not None or not written)
    return Exit.UNUSABLE if failed else Exit.KEPT, written


def _components(
    review: Review, placed: Sequence[DetectorPlacement], options: argparse.Namespace
) -> CrossoverSweep | None:
    """What the components of a crossover make, where one detector is asked for: NumPy is loaded for it alone."""
    if options.detector is None or placed[0].comparator.crossover is None:
        return None
    from tidegate.lint.derived.crossover.crossover_sweep import crossover_sweep

    return crossover_sweep(review.loaded.description, review.graph, placed[0].comparator)


def _answer(
    review: Review,
    placed: Sequence[DetectorPlacement],
    estimates: Sequence[YieldEstimate | Unknown] | None,
    components: CrossoverSweep | None,
    *,
    written: Sequence[str],
    options: argparse.Namespace,
) -> str:
    drawn: Sequence[YieldEstimate | Unknown | None] = estimates or [None] * len(placed)
    places = [review.loaded.sources.place(("comparators", each.comparator.id), key=True) for each in placed]
    if options.form == "json":
        from tidegate.lint.reports.placement_json import placement_entry, placement_text_json

        entries = [placement_entry(*each) for each in zip(placed, places, drawn, strict=True)]
        if components is not None:
            from tidegate.lint.reports.crossover_json import crossover_entry

            entries[0]["components"] = crossover_entry(components)
        return placement_text_json(options.file, written, entries)
    blocks = ["".join(plain(text) + "\n" for text in written)] if written else []
    for each, place, estimate in zip(placed, places, drawn, strict=True):
        lines = list(placement_lines(each, f"{place.file}:{place.line}", most_levers=all_levers(placed)))
        if components is not None:
            from tidegate.lint.reports.crossover_text import crossover_rows

            lines += crossover_rows(components)
        if estimate is not None:
            from tidegate.lint.reports.yield_text import yield_rows

            for number, text in enumerate(yield_rows(estimate)):
                lines += row("missed by" if number == 0 else "", text)
        blocks.append("\n".join(lines) + "\n")
    return "\n".join(blocks)


def _estimates(
    review: Review, placed: Sequence[DetectorPlacement], options: argparse.Namespace, streams: Streams
) -> list[YieldEstimate | Unknown]:
    """Draw parts of each detector by itself: nothing says which errors two detectors have in common."""
    samples = options.samples or _SAMPLES
    seed = _SEED if options.seed is None else options.seed
    found: list[YieldEstimate | Unknown] = []
    with _progress(streams, samples * len(placed)) as advance:
        for each in placed:
            found.append(_estimate(review, each, samples=samples, seed=seed, advance=advance))
    return found


def _estimate(
    review: Review, placed: DetectorPlacement, *, samples: int, seed: int, advance: Callable[[int], None] | None
) -> YieldEstimate | Unknown:
    from tidegate.lint.derived.levels.drawn_detector import drawn_detector
    from tidegate.lint.physics.yield_estimate import yield_estimate

    drawn = ask(
        review.loaded.description, review.graph, placed.comparator, lambda case: drawn_detector(case, placed.placing)
    )
    if isinstance(drawn, Unknown):
        return drawn
    detector, coverage = drawn
    before = 0

    def progress(done: int, _: int) -> None:
        nonlocal before
        if advance is not None:
            advance(done - before)
        before = done

    return yield_estimate(
        [detector], shared=(), samples=samples, seed=seed, coverage=coverage, interval_coverage=_COVERAGE_95,
        progress=progress,
    )  # fmt: skip


@contextmanager
def _progress(streams: Streams, total: int) -> Iterator[Callable[[int], None] | None]:
    """A bar on a terminal, nothing elsewhere."""
    if not streams.err.isatty():
        yield None
        return
    from rich.progress import Progress

    with Progress(console=streams.console(), transient=True) as bar:
        task = bar.add_task("drawn", total=total)
        yield lambda parts: bar.advance(task, parts)
