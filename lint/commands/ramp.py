"""``tidegate ramp``: timelines of start-up, power-down and dips."""

from __future__ import annotations

import argparse
from collections.abc import Callable, Mapping, Sequence
from difflib import get_close_matches
from typing import Final

from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.description.load import load
from tidegate.lint.description.model.reset_path import Bypass
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.graph.bounded import bounded_graph
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.timing.timeline import Timeline, Timelines, timelines

_WIDTH: Final = 80


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument("file", metavar="FILE", help="description (YAML or JSON)")
    parser.add_argument(
        "--scenario", metavar="NAME",
        help="one scenario; without it, start-ups and power-downs are drawn, and the others named at the end",
    )  # fmt: skip
    parser.add_argument("--override", metavar="BYPASS", help="draw them with this override active all the time")
    parser.add_argument(
        "--as", dest="form", choices=("terminal", "json"), default="terminal",
        help="form of the timelines (default: terminal)",
    )  # fmt: skip


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Draw the timelines of a description, or write them as JSON."""
    try:
        loaded = load(options.file)
        graph = bounded_graph(loaded)
    except DescriptionError as error:
        streams.tell(error.faults)
        return Exit.UNUSABLE
    lines = timelines(loaded.description, graph)
    groups = _groups(lines)
    try:
        shown, others = _chosen(groups, options.scenario)
    except DomainError as error:
        streams.say(f"{options.file}: the waveform given lies outside the range of the formula: {error}")
        return Exit.UNUSABLE
    if not shown and options.scenario is not None:
        near = get_close_matches(options.scenario, others, 1)
        hint = f"did you mean {near[0]!r}?" if near else f"known: {', '.join(others) or 'none'}"
        streams.say(f"{options.file}: no scenario is called {options.scenario!r}; {hint}")
        return Exit.UNUSABLE
    if options.override is not None:
        bypass = loaded.description.bypasses.get(options.override)
        if bypass is None or bypass.overrides is None:
            streams.say(f"{options.file}: {_no_override(options.override, loaded.description.bypasses)}")
            return Exit.UNUSABLE
        shown = [lines.with_override(line, bypass) for line in shown]
    if options.form == "json":
        from tidegate.lint.reports.timeline_json import timelines_text

        streams.out.fix_encoding()
        streams.out.write(timelines_text(lines, shown, file=options.file))
        return Exit.KEPT
    _draw(lines, shown, others, streams)
    return Exit.KEPT


def _no_override(name: str, bypasses: Mapping[str, Bypass]) -> str:
    """Why there is no override to draw with, and which there are."""
    if name in bypasses:
        return f"bypasses.{name}.overrides is not given"
    near = get_close_matches(name, bypasses, 1)
    hint = f"did you mean {near[0]}?" if near else f"known: {', '.join(bypasses) or 'none'}"
    return f"no override is called {name!r}; {hint}"


def _groups(lines: Timelines) -> Sequence[Callable[[], Sequence[Timeline]]]:
    """Groups of timelines: what is drawn unasked first, the rest only where it is named."""
    rails = lines.description.rails
    return (
        lambda: [*lines.starts, *lines.falls],
        lambda: [line for rail in rails if (line := lines.alone(rail)) is not None],
        lambda: [line for rail in rails for line in lines.dips(rail)],
        lambda: lines.published,
    )


def _chosen(
    groups: Sequence[Callable[[], Sequence[Timeline]]], wanted: str | None
) -> tuple[Sequence[Timeline], Sequence[str]]:
    """The timelines to show, and the names of the others."""
    every = [list(group()) for group in groups]
    shown = every[0] if wanted is None else [line for group in every for line in group if line.scenario.name == wanted]
    names = [line.scenario.name for group in every for line in group]
    taken = {line.scenario.name for line in shown}
    return shown, [name for name in dict.fromkeys(names) if name not in taken]


def _draw(lines: Timelines, shown: Sequence[Timeline], others: Sequence[str], streams: Streams) -> None:
    from tidegate.lint.reports.plain_text import plain
    from tidegate.lint.reports.timeline import legend, signs_for, timeline_lines

    signs = signs_for(getattr(streams.out, "encoding", None))
    out = streams.out
    out.write(f"{legend(signs)}\n")
    for line in shown:
        out.write("\n")
        for row in timeline_lines(lines, line, width=_WIDTH, signs=signs):
            out.write(f"{row}\n")
    if not shown:
        lacks = [path for paths in lines.ramps.lacks.values() for path in paths]
        lacks += [path for ramp in lines.ramps.by_rail.values() for path in ramp.start_lacks]
        without = f" without {', '.join(lacks)}" if lacks else ""
        out.write(f"\nno ramp can be drawn{without}\n")
    if others and len(shown) > 1:
        out.write("\nbeside these, to be asked for with --scenario:\n")
        for name in others:
            out.write(f"  {plain(name)}\n")
