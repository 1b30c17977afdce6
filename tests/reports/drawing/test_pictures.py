"""Pictures of the examples: to scale, in order, whole, no label on another, and nothing but text from a description."""

from __future__ import annotations

import datetime
import re
import xml.etree.ElementTree as ET
from collections.abc import Mapping
from functools import cache
from itertools import pairwise

import networkx
import pytest

from tests.reports.drawing.pictures import SVG, overlaps, pictures, texts
from tests.rules.sound import SOUND, patched
from tidegate.lint.cli import main
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.graph.dependency import build
from tidegate.lint.reports.drawing.alone import graph_svg, ladders_svg, timelines_svg
from tidegate.lint.reports.drawing.graph import draw_graph
from tidegate.lint.reports.drawing.graph_text import dot_text, graphml_text
from tidegate.lint.reports.drawing.ladder import LadderDrawing, draw_ladder
from tidegate.lint.reports.drawing.picture_graph import picture_graph
from tidegate.lint.reports.drawing.timeline import TimelineDrawing, draw_timeline
from tidegate.lint.reports.ladder import ladders
from tidegate.lint.timing.timeline import timelines
from tidegate.rules.catalogue import FAMILIES

UNHELD = "output_stages: {rst_out: {hold: none}}"
LOW = "comparators: {uv: {trip: {rising: 1.72 V, falling: 1.58 V}}}"
MANY = (
    "comparators: {"
    + ", ".join(f"uv_{n}: {{role: under_voltage, watches: avdd, domain: aon}}" for n in range(60))
    + "}"
)
PATCHES = {"sound": "", "low": LOW, "unheld": UNHELD, "many": MANY}


@cache
def ladder_drawings(patch: str) -> Mapping[str, LadderDrawing]:
    description = patched(patch).description
    found = {ladder.rail: draw_ladder(ladder) for ladder in ladders(description, build(description))}
    return {rail: drawing for rail, drawing in found.items() if drawing is not None}


@cache
def timeline_drawings(patch: str) -> Mapping[str, TimelineDrawing]:
    description = patched(patch).description
    lines = timelines(description, build(description))
    found = [draw_timeline(line, lines) for line in (*lines.starts, *lines.falls)]
    return {drawing.name: drawing for drawing in found if drawing is not None}


@cache
def graph_picture(patch: str, most: int = 300) -> str:
    result = review(patched(patch), Catalogue(FAMILIES), today=datetime.date(2026, 1, 1))
    picture = picture_graph(result.loaded.description, result.graph, result.judgements, most=most)
    drawing = draw_graph(picture, elements=len(result.graph.elements))
    assert drawing is not None
    return graph_svg("t", drawing)


@pytest.mark.parametrize("name", PATCHES)
def test_no_label_lies_on_another(name: str) -> None:
    patch = PATCHES[name]
    files = [
        ladders_svg("t", ladder_drawings(patch).values()), timelines_svg("t", timeline_drawings(patch).values()),
        graph_picture(patch), graph_picture(patch, most=10),
    ]  # fmt: skip
    for picture in (picture for file in files for picture in pictures(file)):
        assert overlaps(list(texts(picture))) == []


def test_ladder_is_to_scale() -> None:
    drawing = ladder_drawings("")["avdd"]
    assert drawing.fan is not None
    rows = {row.name: row for row in drawing.rows}
    low, high = rows["sign-off"].bar.x, rows["sign-off"].bar.x + rows["sign-off"].bar.width
    per_v = (high - low) / (1.98 - 1.6)
    service = rows["service"].bar
    assert service.x == pytest.approx(low + per_v * (1.71 - 1.6), abs=0.1)
    assert service.width == pytest.approx(per_v * (1.89 - 1.71), abs=0.1)
    assert rows["por rising"].bar.off == "left"
    assert rows["damage"].bar.off == "right"
    staff = rows["sign-off"].staff
    assert rows["por rising"].staff.x == pytest.approx(staff.x - (1.6 - 1.17) * staff.width / 0.38, abs=0.1)


def test_slack_is_drawn_as_long_as_it_is_and_marked_where_it_is_lost() -> None:
    drawing = ladder_drawings(LOW)["avdd"]
    rows = {row.name: row for row in drawing.rows}
    per_v = rows["sign-off"].bar.width / (1.98 - 1.6)
    for row in drawing.rows:
        if row.gap is None or row.bar.off:
            continue
        number, unit = row.gap.label.split()[:2]
        slack_v = float(number) * {"mV": 1e-3, "V": 1.0}[unit]
        assert abs(row.gap.x2 - row.gap.x1) == pytest.approx(abs(slack_v) * per_v, rel=0.02, abs=0.1), row.name
        assert row.gap.lost == (slack_v < 0)
    assert rows["uv rising"].gap is not None
    assert rows["uv rising"].gap.lost


@pytest.mark.parametrize("name", ["fastest ramp", "off and on again", "slowest power-down"])
def test_rows_of_a_timeline_are_whole(name: str) -> None:
    drawing = timeline_drawings("")[name]
    for row in drawing.rows:
        for lane in row.lanes:
            ends = [(piece.x, piece.x + piece.width) for piece in lane.pieces]
            assert ends[0][0] == pytest.approx(drawing.left, abs=0.2)
            assert ends[-1][1] == pytest.approx(drawing.right, abs=0.2)
            assert all(one[1] == pytest.approx(other[0], abs=0.2) for one, other in pairwise(ends))


def test_reset_follows_the_timing() -> None:
    row = next(row for row in timeline_drawings("")["fastest ramp"].rows if row.element == "por_n")
    assert [piece.kind for piece in row.lanes[0].pieces] == ["held", "asserted", "either", "released"]


def test_every_element_and_edge_is_drawn_once() -> None:
    loaded = patched("")
    graph = build(loaded.description)
    (root,) = pictures(graph_picture(""))
    drawn = [node.get("data-element") for node in root.iter(f"{SVG}g") if node.get("data-element")]
    assert sorted(drawn) == sorted(name for name, e in graph.elements.items() if e.section != "neighbours")
    titles = [node.text for node in root.iter(f"{SVG}title") if " " in (node.text or "")]
    said = [f"{edge.tail} {edge.kind.forwards} {edge.head}" for edge in graph.edges()]
    assert set(titles) <= set(said)
    left_out = [text for text in said if text not in titles]
    assert left_out
    assert all(text.split(" supplied by ")[1] in loaded.description.domains for text in left_out)


def test_boxes_do_not_touch_and_stay_in_their_region() -> None:
    for patch in PATCHES.values():
        (root,) = pictures(graph_picture(patch))
        boxes = [_rect(node) for node in root.iter(f"{SVG}rect") if node.get("class", "").startswith("box")]
        regions = [_rect(node) for node in root.iter(f"{SVG}rect") if node.get("class", "").startswith("region")]
        for number, (x, y, w, h) in enumerate(boxes):
            assert any(rx <= x and x + w <= rx + rw and ry <= y and y + h <= ry + rh for rx, ry, rw, rh in regions)
            for ox, oy, ow, oh in boxes[number + 1 :]:
                assert x + w <= ox or ox + ow <= x or y + h <= oy or oy + oh <= y


def _rect(node: ET.Element) -> tuple[float, float, float, float]:
    x, y, width, height = (float(node.get(name, "nan")) for name in ("x", "y", "width", "height"))
    return x, y, width, height


def test_the_path_of_a_failure_is_told_apart() -> None:
    (root,) = pictures(graph_picture(UNHELD))
    failing = [
        node[0].text for node in root.iter(f"{SVG}g")
        if node.get("class") == "edge" and "link-failing" in node[1].get("class", "")
    ]  # fmt: skip
    assert "rst_out drives por_n" in failing
    assert "por drives por_out" not in failing
    assert "link-failing" not in graph_picture("").partition("<svg x=")[2]


def test_overrides_have_a_line_of_their_own() -> None:
    (root,) = pictures(graph_picture(""))
    lines = [node for node in root.iter(f"{SVG}path") if "link-overrides" in node.get("class", "")]
    assert len(lines) == 3  # two in the example, one in the legend
    assert all(node.get("marker-end") == "url(#head-ask)" for node in lines)


def test_above_the_limit_elements_of_a_kind_are_drawn_as_one() -> None:
    svg = graph_picture(MANY, most=50)
    assert "64 comparators" in svg
    assert len(pictures(svg)[0].findall(f".//{SVG}g[@data-element]")) < 20


def test_an_svg_stands_alone() -> None:
    svg = graph_picture(UNHELD)
    assert "var(" not in svg
    assert not re.search(r"(?:href|src)=\"(?!#)", svg)
    ids = set(re.findall(r' id="([^"]+)"', svg))
    assert set(re.findall(r"url\(#([^)]+)\)", svg)) <= ids
    assert set(re.findall(r'href="#([^"]+)"', svg)) <= ids


def test_graphml_is_read_back_whole() -> None:
    # Reference: networkx reads it.
    graph = build(patched("").description)
    read = networkx.parse_graphml(graphml_text(graph, name="a & <b>"))
    assert set(read.nodes) == set(graph.elements)
    edges = sorted((edge.tail, edge.head, edge.kind.forwards) for edge in graph.edges())
    assert sorted((tail, head, data["relation"]) for tail, head, data in read.edges(data=True)) == edges


def test_dot_quotes_what_it_is_given() -> None:
    graph = build(patched("").description)
    text = dot_text(graph, name='a "b" \\ </x>\n\u202e')
    assert text.startswith('digraph "a \\"b\\" \\\\ </x>\\\\u000a\\\\u202e" {\n')
    assert text.count(" -> ") == len(list(graph.edges()))
    assert '  "uv" -> "avdd" [label="watches"];\n' in text


@pytest.mark.parametrize(
    ("arguments", "status", "said"),
    [
        (["ladder", "--of", "avd"], 2, "no rail with a ladder is called 'avd'; did you mean avdd?\n"),
        (["timeline", "--of", "slow ramp"], 2, "no scenario is called 'slow ramp'; did you mean slowest ramp?\n"),
        (["ladder", "--as", "dot"], 2, "--as dot: only the graph can be written so; a ladder is drawn as svg\n"),
        (
            ["graph", "--of", "avdd"], 2,
            "--of: a graph is drawn whole; it names a rail of a ladder or a scenario of a timeline\n",
        ),
        (["ladder", "--of", "vcore"], 0, ""),
    ],
)  # fmt: skip
def test_draw(arguments: list[str], status: int, said: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["draw", str(SOUND), *arguments]) == status
    written = capsys.readouterr()
    assert written.err == said
    assert (len(pictures(written.out)) == 1) if status == 0 else not written.out


def test_pictures_are_the_same_every_time() -> None:
    first = graph_picture(UNHELD)
    graph_picture.cache_clear()
    assert graph_picture(UNHELD) == first
