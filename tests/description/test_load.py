"""A loaded description: typed, frozen, with kits and empty values as documented, and quick to come by."""

from __future__ import annotations

import gc
import subprocess
import sys
from pathlib import Path

import msgspec
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.description.test_messages import PARSERS, faults_of
from tidegate.lint.description.load import KITS, load
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.nearest import nearest
from tidegate.lint.description.place import DescriptionError, Fault, Place, dotted, steps
from tidegate.lint.description.written import written
from tidegate.lint.description.yaml_nodes import PARSER, Parser
from tidegate.lint.found import escaped, found, quoted
from tidegate.lint.quantity import Voltage

# The demo data are invented.
TEXT = """\
rails:
  avdd:
    nominal: 1.8 V
    delivered: {min: 1.71 V, max: 1.89 V, basis: {by: simulated, x-run: 7}}
    x-mine: {anything: [goes, {here: 1}]}
  bvdd:
domains:
  aon: {rail: avdd, kind: always_on}
comparators:
  uv:
    role: under_voltage
    watches: avdd
    domain: aon
    hysteresis: none
    errors: {offset: {amount: 3 mV, is: sigma}, drift: }
    divider: {ratio: 1}
    delay: {min: , max: }
waivers:
  - {rule: a/b, element: uv, why: agreed, agreed_by: board, until: 2027-06-30}
"""


def read(folder: Path, text: str, parser: type[Parser] = PARSER) -> Description:
    (folder / "main.yaml").write_text(text, "utf-8")
    return load(folder / "main.yaml", parser=parser).description


@pytest.mark.parametrize("parser", PARSERS)
def test_a_description_is_typed(parser: type[Parser], tmp_path: Path) -> None:
    description = read(tmp_path, TEXT, parser)
    assert description.rails["avdd"].id == "avdd"
    delivered = description.rails["avdd"].delivered
    assert isinstance(delivered, Voltage)
    assert (delivered.least, delivered.typical, delivered.most) == (1.71, None, 1.89)
    assert delivered.basis is not None
    assert delivered.basis.by == "simulated"
    uv = description.comparators["uv"]
    assert uv.hysteresis == "none"
    assert uv.errors["offset"].is_ == "sigma"
    assert uv.divider is not None
    assert uv.divider.ratio == 1.0
    assert description.waivers[0].until == "2027-06-30"


def test_an_empty_value_is_not_given_and_an_empty_element_is_there(tmp_path: Path) -> None:
    description = read(tmp_path, TEXT)
    assert description.rails["bvdd"].nominal is None
    assert description.comparators["uv"].errors["drift"].amount is None
    assert description.comparators["uv"].delay is None


def test_a_description_cannot_be_changed(tmp_path: Path) -> None:
    (tmp_path / "main.yaml").write_text(TEXT, "utf-8")
    loaded = load(tmp_path / "main.yaml")
    avdd = loaded.description.rails["avdd"]
    assert avdd.delivered is not None
    for thing in (loaded, loaded.description, avdd, avdd.delivered, avdd.delivered.basis, loaded.place("rails")):
        for name in (*getattr(thing, "__struct_fields__", ()), *getattr(type(thing), "__slots__", ()), "more"):
            with pytest.raises(AttributeError):
                setattr(thing, name, None)


@pytest.mark.parametrize("kit", sorted(path.stem for path in KITS.glob("*.yaml")))
def test_a_kit_brings_its_data_and_the_description_wins(kit: str, tmp_path: Path) -> None:
    bare = read(tmp_path, f"process: {{kit: {kit}}}\nrails: {{avdd: }}\n").process
    assert bare is not None
    name = next(iter(bare.layers))
    text = f"process: {{kit: {kit}, layers: {{{name}: {{thickness: 9 um}}, own: }}}}\nrails: {{avdd: }}\n"
    mixed = read(tmp_path, text).process
    assert mixed is not None
    assert list(mixed.layers) == [*bare.layers, "own"]
    thickness = mixed.layers[name].thickness
    assert thickness is not None
    assert thickness.most == 9e-6
    assert mixed.layers[name].limits == ()
    assert {key: mixed.layers[key] for key in list(bare.layers)[1:]} == dict(list(bare.layers.items())[1:])
    assert mixed.vias == bare.vias


def test_loading_leaves_the_collector_as_it_was(tmp_path: Path) -> None:
    for start in (gc.enable, gc.disable):
        start()
        was = gc.isenabled()
        read(tmp_path, TEXT)
        assert gc.isenabled() == was
        with pytest.raises(DescriptionError):
            read(tmp_path, "rails: 1\n")
        assert gc.isenabled() == was
    gc.enable()


def test_a_sound_description_does_not_load_what_explains_faults(tmp_path: Path) -> None:
    (tmp_path / "main.yaml").write_text(TEXT, "utf-8")
    script = (
        "import sys; from tidegate.lint.description.load import load; load(sys.argv[1])\n"
        "print([name for name in ('jsonschema', 'difflib', 'tidegate.lint.quantity_faults', 'numpy', 'rich')"
        " if name in sys.modules])"
    )
    command = [sys.executable, "-c", script, str(tmp_path / "main.yaml")]
    assert subprocess.run(command, capture_output=True, text=True, check=True).stdout == "[]\n"


def test_one_fault_does_not_draw_others(tmp_path: Path) -> None:
    text = TEXT.replace("role: under_voltage", "role: yes").replace("nominal: 1.8 V", "<<: {}\n    nominal: 1.8 V")
    assert [str(fault.place) for fault in faults_of(tmp_path, text)] == ["main.yaml:3:5", "main.yaml:12:11"]


VALUES = st.recursive(
    st.sampled_from(["1.8 V", "yes", "010", "none", "avdd", "1e999", "x", "", "-5", "0.5", "true", "'a'", "2 %", "~"]),
    lambda inner: st.one_of(
        st.lists(inner, max_size=2).map(lambda items: f"[{', '.join(items)}]"),
        st.dictionaries(st.sampled_from(["min", "max", "rail", "role", "x-a", "zzz", "avdd"]), inner, max_size=2).map(
            lambda entries: "{" + ", ".join(f"{key}: {value}" for key, value in entries.items()) + "}"
        ),
    ),
    max_leaves=4,
)


LINES = TEXT.splitlines(keepends=True)


@given(st.integers(0, len(LINES) - 1), VALUES)
@settings(max_examples=150, deadline=None)
def test_any_value_anywhere_is_read_or_a_fault_with_a_place(
    tmp_path_factory: pytest.TempPathFactory, number: int, value: str
) -> None:
    key, colon, _ = LINES[number].partition(": ")
    changed = [*LINES[:number], f"{key}{colon or ': '}{value}\n".replace(":\n:", ":"), *LINES[number + 1 :]]
    file = tmp_path_factory.getbasetemp() / "any.yaml"
    file.write_text("".join(changed), "utf-8")
    try:
        load(file, shown="main.yaml")
    except DescriptionError as error:
        assert error.faults
        assert all(fault.advice and str(fault).isprintable() for fault in error.faults)


@pytest.mark.parametrize(
    ("path", "text"),
    [
        ((), ""),
        (("rails", "avdd", "rise", "min"), "rails.avdd.rise.min"),
        (("waivers", 2, "until"), "waivers[2].until"),
        (("x-a", 0, 1), "x-a[0][1]"),
        (("rails", "a b", ""), "rails.'a b'.''"),
        (("a\x1b", "k" * 100), f"'a\\x1b'.'{'k' * 60}...'"),
    ],
)
def test_a_path_is_written_as_people_write_it(path: tuple[str | int, ...], text: str) -> None:
    assert dotted(path) == text


@given(st.lists(st.integers(0, 99) | st.from_regex(r"[a-z_][a-z0-9_-]{0,9}", fullmatch=True), max_size=5))
def test_a_path_of_plain_keys_reads_back(path: list[str | int]) -> None:
    assert steps(dotted(path)) == tuple(path)


def test_a_fault_lies_in_what_it_is_about() -> None:
    fault = Fault(Place("f"), "rails.avdd.dip[2].at", "wrong", "right")
    for path in ("rails", "rails.avdd", "rails.avdd.dip", "rails.avdd.dip[2]", "rails.avdd.dip[2].at"):
        assert fault.lies_in({path})
    assert not fault.lies_in({"", "rails.avd", "rails.avdd.dip[2].at.x", "rails.avdd.dip[1]", "avdd"})
    assert not msgspec.structs.replace(fault, path="").lies_in({"", "rails"})


@pytest.mark.parametrize(
    ("word", "near"),
    [
        ("UV_core", ["uv_core"]),
        ("uv-core", ["uv_core"]),
        ("uvcore", ["uv_core"]),
        ("uv_coer", ["uv_core"]),
        ("ov_core", ["uv_core"]),
        ("reference", []),
        ("", []),
        ("k" * 100_000, []),
    ],
)
def test_the_nearest_word_is_found(word: str, near: list[str]) -> None:
    assert nearest(word, ["uv_core", "bias"]) == near


@pytest.mark.parametrize(
    ("value", "text"),
    [
        ("1.8 V", "1.8 V"),
        ("a: b", "'a: b'"),
        (0.375, "0.375"),
        (True, "true"),
        ([{"a": False}], "[{a: false}]"),
        ({"a": "1 V", "b": {"c": ["d", 2]}}, "{a: 1 V, b: {c: [d, 2]}}"),
        ({"a": "x" * 70, "b": "y" * 70}, f"{{a: {'x' * 70}, ...}}"),
    ],
    ids=str,
)
def test_an_example_is_written_as_in_a_description(value: object, text: str) -> None:
    assert written(value) == text


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (True, "true"),
        (False, "false"),
        (5, "5"),
        (0.5, "0.5"),
        ({}, "an empty mapping"),
        ({"a": 1}, "a mapping"),
        ([], "an empty list"),
        ([1], "a list"),
        ("a", "'a'"),
        ("it's", '"it\'s"'),
        ("a\nb", "'a\\nb'"),
        ("x" * 61, f"'{'x' * 60}...'"),
        ("\x1b" * 50, "'" + r"\x1b" * 14 + r"\...'"),
    ],
)
def test_what_was_found_is_shown_on_one_short_line(value: object, text: str) -> None:
    assert found(value) == text


@given(st.text())
def test_what_was_found_is_always_short_and_printable(text: str) -> None:
    assert quoted(text).isprintable()
    assert len(quoted(text)) <= 65
    assert escaped(text).isprintable()
    assert escaped("plain text") == "plain text"
