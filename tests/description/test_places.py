"""Places: line and column of every fact, counted by hand, in block and flow style, across files, lists and aliases."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.description.test_messages import PARSERS, faults_of
from tidegate.lint.description.load import Loaded, load
from tidegate.lint.description.place import Place
from tidegate.lint.description.yaml_nodes import Parser

# The demo data are invented. Lines and columns below were counted in an editor.
MAIN = """\
# supervisor
subsystem: tide gauge
include: [parts/more.yaml]
rails:
  avdd:
    nominal: 1.8 V
    delivered: {min: 1.7 V, max: 1.9 V}
    note: 'µ🙂 text', # not part of it
    ripple:
        {peak_to_peak: 10 mV,
         frequency: 2 MHz}
  "bvdd": {note: "µ🙂", nominal: 1.2 V}
comparators:
  uv:
    role: under_voltage
    watches: avdd
    trip:
      rising: &level
        min: 1.6 V
        max: 1.65 V
      falling: *level
    errors:
      offset:
    settling:
process:
  kit: gf180mcu
  devices:
    own: {polarity: nmos}
    nmos_3v3: {polarity: nmos}
waivers:
  - rule: a/b
    element: uv
    why: agreed
    agreed_by: board
    until: 2027-06-30
"""
MORE = """\
output_stages:
  out:
    driven_by:
      - uv
      - ov
comparators:
  ov: {role: over_voltage, watches: bvdd}
waivers:
  - {rule: c/d, element: ov, why: agreed, agreed_by: board, until: 2027-06-30}
  - {rule: e/f, element: ov, why: agreed, agreed_by: board, until: 2027-06-30}
"""
WRONG_KEY = "    settling:\n"


@pytest.fixture(params=PARSERS)
def loaded(request: pytest.FixtureRequest, tmp_path: Path) -> Loaded:
    return described(tmp_path, MAIN.replace(WRONG_KEY, "").replace("text', #", "text' #"), request.param)


def described(folder: Path, main: str, parser: type[Parser]) -> Loaded:
    (folder / "parts").mkdir()
    (folder / "parts" / "more.yaml").write_text(MORE, "utf-8")
    (folder / "main.yaml").write_text(main, "utf-8")
    return load(folder / "main.yaml", shown="main.yaml", parser=parser)


COUNTED = (
    ("subsystem", "main.yaml", 2, 12),
    ("include[0]", "main.yaml", 3, 11),
    ("rails", "main.yaml", 5, 3),
    ("rails.avdd", "main.yaml", 6, 5),
    ("rails.avdd.nominal", "main.yaml", 6, 14),
    ("rails.avdd.delivered", "main.yaml", 7, 16),
    ("rails.avdd.delivered.min", "main.yaml", 7, 22),
    ("rails.avdd.delivered.max", "main.yaml", 7, 34),
    ("rails.avdd.note", "main.yaml", 8, 11),
    ("rails.avdd.ripple", "main.yaml", 10, 9),
    ("rails.avdd.ripple.peak_to_peak", "main.yaml", 10, 24),
    ("rails.avdd.ripple.frequency", "main.yaml", 11, 21),
    ("rails.bvdd", "main.yaml", 12, 11),
    ("rails.bvdd.note", "main.yaml", 12, 18),
    ("rails.bvdd.nominal", "main.yaml", 12, 33),  # columns count code points: the smiling face is one
    ("comparators.uv.trip.rising", "main.yaml", 18, 15),
    ("comparators.uv.trip.rising.max", "main.yaml", 20, 14),
    ("comparators.uv.trip.falling.max", "main.yaml", 20, 14),  # an alias stands where its anchor does
    ("process.kit", "main.yaml", 25, 8),
    ("process.devices.own.polarity", "main.yaml", 27, 21),
    ("waivers[0].rule", "main.yaml", 30, 11),
    ("waivers.0.rule", "main.yaml", 30, 11),
    ("waivers[0]", "main.yaml", 30, 5),
    ("waivers[1].rule", "parts/more.yaml", 9, 12),
    ("waivers[2].element", "parts/more.yaml", 10, 26),
    ("comparators.ov", "parts/more.yaml", 7, 7),
    ("comparators.ov.watches", "parts/more.yaml", 7, 37),
    ("output_stages.out.driven_by", "parts/more.yaml", 4, 7),
    ("output_stages.out.driven_by[1]", "parts/more.yaml", 5, 9),
    # What is not there is looked for at the key of the nearest part above it.
    ("rails.avdd.damage", "main.yaml", 5, 3),
    ("rails.avdd.ripple.phase", "main.yaml", 9, 5),
    ("comparators.uv.errors.offset.amount", "main.yaml", 23, 7),
    ("comparators.ov.trip.rising", "parts/more.yaml", 7, 3),
    ("comparators.none", "main.yaml", 13, 1),
    ("waivers[7].rule", "main.yaml", 29, 1),
    ("loads.core", "main.yaml", 1, 1),
    # An entry of the description hides that of the kit as a whole.
    ("process.devices.nmos_3v3.threshold", "main.yaml", 28, 5),
)


@pytest.mark.parametrize(("path", "file", "line", "column"), COUNTED, ids=[path for path, *_ in COUNTED])
def test_a_fact_stands_where_it_was_counted(loaded: Loaded, path: str, file: str, line: int, column: int) -> None:
    assert loaded.place(path) == Place(file, line, column)


def test_a_fact_of_a_kit_stands_in_the_kit(loaded: Loaded) -> None:
    place = loaded.place("process.devices.pmos_3v3.threshold")
    assert place.file == "process kit gf180mcu"
    assert place.line > 1


def test_the_place_of_a_key_without_value_is_that_of_the_key(tmp_path: Path) -> None:
    (tmp_path / "parts").mkdir()
    (tmp_path / "parts" / "more.yaml").write_text(MORE, "utf-8")
    (fault,) = faults_of(tmp_path, MAIN.replace("text', #", "text' #"))
    assert str(fault.place) == "main.yaml:24:5"
    assert fault.problem == "unknown key 'settling'"


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"], ids=["LF", "CRLF", "CR"])
@pytest.mark.parametrize("mark", ["", "\ufeff"], ids=["plain", "BOM"])
@pytest.mark.parametrize("parser", PARSERS)
def test_line_ends_and_a_byte_order_mark_move_nothing(
    end: str, mark: str, parser: type[Parser], tmp_path: Path
) -> None:
    text = mark + "rails:\n  avdd:\n\n    # a comment\n    nominal: 1.8\n".replace("\n", end)
    (fault,) = faults_of(tmp_path, text, parser)
    assert str(fault) == ("main.yaml:5:14: rails.avdd.nominal: 1.8 has no unit; write its unit, such as 1.8 V")


@pytest.mark.parametrize("parser", PARSERS)
def test_json_has_places_too(parser: type[Parser], tmp_path: Path) -> None:
    text = '{\n\t"rails": {\n\t\t"avdd": {"nominal": "1.8 V", "damage": "2.3"}\n\t}\n}\n'
    (fault,) = faults_of(tmp_path, text, parser)
    assert str(fault) == "main.yaml:3:42: rails.avdd.damage: '2.3' has no unit; write its unit, such as 2.3 V"


def test_places_are_ordered_and_named() -> None:
    assert str(Place("a.yaml")) == "a.yaml"
    assert str(Place("a.yaml", 3, 7)) == "a.yaml:3:7"
    places = [Place("b", 1, 1), Place("a", 10, 1), Place("a", 9, 80), Place("a", 9, 3), Place("a")]
    assert sorted(places) == [Place("a"), Place("a", 9, 3), Place("a", 9, 80), Place("a", 10, 1), Place("b", 1, 1)]
