"""What is said not to be there: read as the schema says, told apart from what is not given. The data are invented."""

from __future__ import annotations

import copy
from pathlib import Path
from typing import Any

import pytest
import yaml

from tidegate.lint.description.load import description_of, description_schema, load
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.said_none import none_fields, without_none
from tidegate.lint.quantity import Duration, Ratio, Voltage

FIELDS = none_fields(description_schema())
EVERY = [(way, key) for way, means in FIELDS.items() for key in means]
ENTRY = {"comparators": {"role": "under_voltage", "watches": "avdd"}}


def data_with(way: tuple[str, ...], key: str, value: Any) -> dict[str, Any]:
    """A description of one rail, with a value at a key of a section, or of an element of one."""
    data: dict[str, Any] = {"rails": {"avdd": {"nominal": "1.8 V"}}}
    if way:
        section, star = way
        assert star == "*"
        entries = data.setdefault(section, {})
        name = "avdd" if section == "rails" else "one"
        entries[name] = {**entries.get(name, ENTRY.get(section, {})), key: value}
    else:
        data[key] = value
    return data


def built(data: dict[str, Any]) -> Description:
    description = description_of(data)
    assert description is not None
    return description


@pytest.mark.parametrize(("way", "key"), EVERY, ids=[".".join((*way, key)) for way, key in EVERY])
def test_none_reads_as_what_the_schema_says(way: tuple[str, ...], key: str) -> None:
    data = data_with(way, key, "none")
    before = copy.deepcopy(data)
    said = built(data)
    assert data == before
    written_out = data_with(way, key, FIELDS[way][key])
    if not way:
        written_out["complete"] = [key]
    assert said == built(written_out)
    not_given = data_with(way, key, "none")
    del (next(reversed(not_given[way[0]].values())) if way else not_given)[key]
    assert said != built(not_given)


def test_every_key_of_which_none_can_be_said_is_known() -> None:
    assert FIELDS == {
        (): {"loads": {}, "modes": {}, "bypasses": {}, "neighbours": {}},
        ("rails", "*"): {
            "dip": {"depth": "0 V"}, "ripple": {"peak_to_peak": "0 V"}, "source_impedance": "0 ohm",
            "load_step": "0 A",
        },
        ("comparators", "*"): {
            "errors": {"total": {"of": "total", "share": "0 %", "is": "bound", "at": "rail", "tracks": True}},
            "divider": {"ratio": 1}, "filter": "0 s", "sampling": "0 s", "noise": {"rms": "0 V"},
        },
    }  # fmt: skip


TEXT = """\
rails:
  avdd: {nominal: 1.8 V, ripple: none}
comparators:
  uv:
    role: under_voltage
    watches: avdd
    reference: none
    bias: none
    filter: none
    errors: none
    divider: none
    x-mine: none
bypasses: none
complete: [comparators]
neighbours: none
"""


def test_a_description_with_none_is_typed_and_keeps_the_place_of_the_word(tmp_path: Path) -> None:
    (tmp_path / "main.yaml").write_text(TEXT, "utf-8")
    loaded = load(tmp_path / "main.yaml", shown="main.yaml")
    uv = loaded.description.comparators["uv"]
    assert uv.filter == Duration(0.0, 0.0, 0.0, plain=True)
    assert uv.sampling is None
    assert (uv.reference, uv.bias) == ("none", "none")
    assert uv.errors["total"].share == Ratio(0.0, 0.0, 0.0, plain=True)
    assert uv.divider is not None
    assert uv.divider.ratio == 1.0
    ripple = loaded.description.rails["avdd"].ripple
    assert ripple is not None
    assert ripple.peak_to_peak == Voltage(0.0, 0.0, 0.0, plain=True)
    assert loaded.description.bypasses == {}
    assert loaded.description.complete == ("comparators", "bypasses", "neighbours")
    for fact, line, column in (
        ("comparators.uv.filter", 9, 13),
        ("comparators.uv.filter.max", 9, 5),
        ("comparators.uv.errors.total.share", 10, 5),
        ("rails.avdd.ripple.peak_to_peak", 2, 26),
        ("bypasses", 13, 11),
        ("complete", 14, 11),
    ):
        place = loaded.place(fact)
        assert (place.line, place.column) == (line, column), fact
    assert loaded.sources.data["bypasses"] == "none"


def test_what_is_complete_is_named_once_and_in_order(tmp_path: Path) -> None:
    (tmp_path / "main.yaml").write_text("include: [more.yaml]\nrails: {a: }\ncomplete: [bypasses]\n", "utf-8")
    (tmp_path / "more.yaml").write_text("complete: [rails]\nbypasses: none\nmodes: none\n", "utf-8")
    assert load(tmp_path / "main.yaml").description.complete == ("bypasses", "rails", "modes")


def test_an_empty_section_is_not_said_to_be_complete(tmp_path: Path) -> None:
    for empty in ("bypasses: {}\n", "bypasses:\n"):
        (tmp_path / "main.yaml").write_text("rails: {a: }\n" + empty, "utf-8")
        assert load(tmp_path / "main.yaml").description.complete == ()


def test_data_without_none_stay_the_same_objects() -> None:
    data = yaml.safe_load(TEXT.replace("none", "''"))
    read = without_none(data, FIELDS)
    assert all(read[key] is data[key] for key in data)


def test_none_of_an_alias_changes_nothing_elsewhere(tmp_path: Path) -> None:
    text = "rails:\n  a: &a {ripple: none}\n  b: *a\n  c: {ripple: {peak_to_peak: 1 mV}}\n"
    (tmp_path / "main.yaml").write_text(text, "utf-8")
    loaded = load(tmp_path / "main.yaml")
    assert loaded.description.rails["a"].ripple == loaded.description.rails["b"].ripple
    assert loaded.sources.data["rails"]["a"] == {"ripple": "none"}
