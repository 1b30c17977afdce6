"""``tidegate draw``: one picture alone, for slides and papers, or the graph for other programs."""

from __future__ import annotations

import argparse
from collections.abc import Iterable
from difflib import get_close_matches
from pathlib import Path
from typing import Final

from tidegate.lint.batch import Request, files_read, judge_file
from tidegate.lint.commands.judged_on import add_day
from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.engine import Review

_PICTURES: Final = ("ladder", "timeline", "graph")
_FORMS: Final = ("svg", "dot", "graphml")


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    add = parser.add_argument
    add("file", metavar="FILE", help="description (YAML or JSON)")
    add("picture", choices=_PICTURES, metavar="PICTURE", help="ladder, timeline or graph")
    add("--of", metavar="NAME", help="one rail (of a ladder) or one scenario (of a timeline); all of them by default")
    add(
        "--as", dest="form", choices=_FORMS, default="svg", metavar="FORM",
        help="svg (usual); of a graph also dot or graphml, for other programs",
    )  # fmt: skip
    add("--save", metavar="PATH", help="write to a file instead of the output")
    add("--settings", metavar="FILE", help="settings, in place of the nearest tidegate.settings.yaml")
    add("--pack", action="append", default=[], metavar="FILE", help="Python file with rules of your own")
    add_day(parser)


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Write the picture; the exit status says whether it could be drawn, not what was judged."""
    if options.form != "svg" and options.picture != "graph":
        streams.say(f"--as {options.form}: only the graph can be written so; a {options.picture} is drawn as svg")
        return Exit.UNUSABLE
    request = Request(options.today or streams.today, streams.families, options.settings, tuple(options.pack))
    judged = judge_file(options.file, request)
    for fault in judged.faults:
        streams.say(str(fault))
    if judged.review is None:
        return Exit.UNUSABLE
    text = _text(judged.review, options, streams)
    if text is None:
        return Exit.UNUSABLE
    if options.save is None:
        streams.out.fix_encoding()
        streams.out.write(text)
        return Exit.KEPT
    return _save(Path(options.save), text, files_read(judged), streams)


def _save(path: Path, text: str, read: Iterable[str], streams: Streams) -> int:
    from tidegate.lint.reports.saving import save

    try:
        save(path, [text], read=read)
    except OSError as error:
        streams.say(f"{path}: cannot be written ({error.strerror or error})")
        return Exit.UNUSABLE
    return Exit.KEPT


def _text(review: Review, options: argparse.Namespace, streams: Streams) -> str | None:
    """The picture; None where there is nothing to draw, which is then said."""
    if options.picture == "ladder":
        return _ladders(review, options.of, streams)
    if options.picture == "timeline":
        return _timelines(review, options.of, streams)
    if options.of is not None:
        streams.say("--of: a graph is drawn whole; it names a rail of a ladder or a scenario of a timeline")
        return None
    return _graph(review, options.form, streams)


def _title(review: Review) -> str:
    description = review.loaded.description
    name = description.subsystem or "unnamed subsystem"
    return f"{name}, revision {description.revision}" if description.revision else name


def _ladders(review: Review, of: str | None, streams: Streams) -> str | None:
    from tidegate.lint.reports.drawing.alone import ladders_svg
    from tidegate.lint.reports.drawing.ladder import draw_ladder
    from tidegate.lint.reports.ladder import ladders

    drawn = {ladder.rail: draw_ladder(ladder) for ladder in ladders(review.loaded.description, review.graph)}
    found = {rail: drawing for rail, drawing in drawn.items() if drawing is not None}
    if not _named(of, found, "rail with a ladder", streams):
        return None
    return ladders_svg(_title(review), [drawing for rail, drawing in found.items() if of in (None, rail)])


def _timelines(review: Review, of: str | None, streams: Streams) -> str | None:
    from tidegate.lint.reports.drawing.alone import timelines_svg
    from tidegate.lint.reports.drawing.timeline import draw_timeline
    from tidegate.lint.timing.timeline import timelines

    lines = timelines(review.loaded.description, review.graph)
    courses = {line.scenario.name: line for line in (*lines.starts, *lines.falls)}
    if not _named(of, courses, "scenario", streams):
        return None
    drawn = [draw_timeline(line, lines) for name, line in courses.items() if of in (None, name)]
    return timelines_svg(_title(review), [drawing for drawing in drawn if drawing is not None])


def _graph(review: Review, form: str, streams: Streams) -> str | None:
    if form != "svg":
        from tidegate.lint.reports.drawing.graph_text import dot_text, graphml_text

        make = dot_text if form == "dot" else graphml_text
        return make(review.graph, name=_title(review))
    from tidegate.lint.reports.drawing.alone import graph_svg
    from tidegate.lint.reports.drawing.graph import draw_graph
    from tidegate.lint.reports.drawing.picture_graph import elements_shown, picture_graph

    picture = picture_graph(review.loaded.description, review.graph, review.judgements)
    drawing = draw_graph(picture, elements=elements_shown(review.graph))
    if drawing is None:
        streams.say("the description has no element that a graph could show")
        return None
    return graph_svg(_title(review), drawing)


def _named(of: str | None, known: Iterable[str], noun: str, streams: Streams) -> bool:
    """Whether there is something to draw by that name; if not, it is said."""
    names = list(known)
    if of is None and names:
        return True
    if of in names:
        return True
    near = get_close_matches(of or "", names, 1)
    hint = f"did you mean {near[0]}?" if near else f"known: {', '.join(names[:12]) or 'none'}"
    what = f"no {noun} is called {of!r}" if of is not None else f"no {noun} to draw"
    streams.say(f"{what}; {hint}")
    return False
