"""Facts as people name them, and what they measure, held against the model of the language."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import pytest

from tests.rules.sound import patched
from tidegate.lint.description.model.part import Part
from tidegate.lint.facts.names import dimension_at, listed, named, names_of, short, spoken, spoken_together
from tidegate.lint.quantity import Dimension, Span


@pytest.mark.parametrize(
    ("path", "name"),
    [
        ("rails.vdd.ripple.peak_to_peak", "ripple of vdd"),
        ("rails.vdd.load_step", "load step of vdd"),
        ("rails.vdd.delivered.min", "lower end of the delivered range of vdd"),
        ("comparators.sup.hysteresis.amount.max", "greatest hysteresis of sup"),
        ("comparators.sup.errors.offset.amount", "amount of the error offset of sup"),
        ("comparators.sup.codes.c3.rising.min", "least rising level at code c3 of sup"),
        ("loads.mcu.needs.0.works.min", "lower end of the working range of mcu"),
        ("conditions.service_life", "service life"),
        ("process.layers.m1.thickness", "thickness of m1"),
        ("process.plain_edge", "plain edge"),
        ("bypasses", "bypasses"),
        ("output_stages", "output stages"),
        ("rails.vdd", "vdd"),
        ("whatever a pack. says", "whatever a pack. says"),
        ("", ""),
    ],
)
def test_a_fact_has_a_name(path: str, name: str) -> None:
    assert spoken(path) == name


def test_facts_of_one_element_are_told_together() -> None:
    facts = ["rails.vdd.ripple.peak_to_peak", "rails.vdd.load_step", "rails.vdd.source_impedance"]
    assert spoken_together(facts) == ["ripple, load step and source impedance of vdd"]
    assert spoken_together([*facts[:1], "comparators.sup.delay"]) == ["ripple of vdd", "delay of sup"]
    both_ends = ["comparators.sup.hysteresis.amount.min", "comparators.sup.hysteresis.amount.max"]
    assert spoken_together(both_ends) == ["hysteresis of sup"]
    assert names_of(["rails.vdd.ripple.peak_to_peak", "rails.vdd.ripple.frequency"]) == ["ripple"]
    assert names_of(["comparators.uv.trip.rising", "comparators.uv.trip.falling"]) == ["rising level", "falling level"]
    assert (listed([]), listed("a"), listed("ab"), listed("abca")) == ("", "a", "a and b", "a, b and c")
    assert short("hysteresis", "") == "hysteresis"


def numbers(part: Any, path: str) -> Iterator[tuple[str, Dimension]]:
    """Every quantity below a part of a description, with its path and what it measures, as the typed objects say."""
    if isinstance(part, Span):
        yield path, part.dimension
    elif isinstance(part, Part):
        for field in part.__struct_fields__:
            inside = f"{path}.{field.rstrip('_')}" if path else field.rstrip("_")
            yield from numbers(getattr(part, field), inside)
    elif isinstance(part, dict | tuple):
        for key, each in part.items() if isinstance(part, dict) else enumerate(part):
            yield from numbers(each, f"{path}.{key}")


def test_what_a_number_measures_is_read_off_the_model() -> None:
    """Every quantity of the sound example, and each end of it."""
    found = [each for each in numbers(patched("").description, "") if not each[0].startswith("scenarios")]
    assert len(found) > 200
    for path, dimension in found:
        assert dimension_at(path) is dimension, path
        assert [dimension_at(f"{path}.{end}") for end in ("min", "typ", "max")] == [dimension] * 3, path
        assert dimension_at(f"{path}.basis") is None
        assert named(path).steps, path


@pytest.mark.parametrize(
    ("path", "dimension"),
    [
        ("conditions.power_cycles", Dimension.COUNT),
        ("comparators.uv.divider.ratio", Dimension.COUNT),
        ("comparators.uv.errors", Dimension.VOLTAGE),  # what a list of errors leaves out
        ("comparators.uv.output", None),
        ("comparators.uv", None),
        ("bypasses", None),
        ("rails.avdd.ripple", None),
        ("no.such.fact", None),
    ],
)
def test_what_is_no_quantity(path: str, dimension: Dimension | None) -> None:
    assert dimension_at(path) is dimension
