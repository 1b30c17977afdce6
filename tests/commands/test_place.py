"""``tidegate place`` as its user meets it: answer, exit status, what is written, yield, JSON."""

from __future__ import annotations

import json
import shutil
from pathlib import Path
from typing import Any

import pytest
import yaml

from tests.derived.placing import placed
from tests.rules.sound import SOUND, judged, of_kind
from tidegate.lint.cli import main
from tidegate.lint.commands.applied_levels import chosen_levels_mv
from tidegate.lint.derived.asking import Unknown
from tidegate.lint.judgement import Kind
from tidegate.rules.trip_crossover import RULES as CROSSOVER_RULES
from tidegate.rules.trip_window import RULES

REQUIREMENT_RULES = {
    "guarantee": "trip_window/guarantee", "quiet": "trip_window/nuisance", "comes back": "trip_window/release",
}  # fmt: skip


@pytest.fixture
def chip(tmp_path: Path) -> Path:
    """A copy of the sound example that may be changed."""
    for file in SOUND.parent.glob("*.yaml"):
        shutil.copy(file, tmp_path)
    return tmp_path / SOUND.name


def edit(file: Path, old: str, new: str) -> None:
    text = file.read_text("utf-8")
    assert old in text
    file.write_text(text.replace(old, new), "utf-8")


def levels(file: Path, detector: str) -> dict[str, str]:
    trip: dict[str, str] = yaml.load(file.read_text("utf-8"), Loader=yaml.BaseLoader)["comparators"][detector]["trip"]
    return trip


def answer(capsys: pytest.CaptureFixture[str], *arguments: str) -> dict[str, Any]:
    main(["place", *arguments, "--as", "json"])
    found: dict[str, Any] = json.loads(capsys.readouterr().out)
    return found


@pytest.mark.parametrize(
    ("arguments", "status"),
    [([], 0), (["uv"], 0), (["--as", "json"], 0), (["uvv"], 2), (["ref_fast"], 2), (["--samples", "5"], 2)],
    ids=str,
)
def test_exit_status(chip: Path, arguments: list[str], status: int, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["place", str(chip), *arguments]) == status
    written = capsys.readouterr()
    assert bool(written.out) == (status == 0)
    assert bool(written.err) == (status == 2)


@pytest.mark.parametrize("samples", ["0", "10000001", "many"])
def test_samples_out_of_range(chip: Path, samples: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["place", str(chip), "uv", "--yield", "--samples", samples]) == 2
    assert "--samples" in capsys.readouterr().err


def test_near_names(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    main(["place", str(chip), "uvv"])
    expected = "no power-on, under- or over-voltage detector is called 'uvv'; did you mean uv?\n"
    assert capsys.readouterr().err == f"{chip}: {expected}"


def test_one_screen_at_80_columns(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    for detector in ("uv", "ov", "por", "uv_core"):
        main(["place", str(chip), detector])
        lines = capsys.readouterr().out.splitlines()
        assert len(lines) <= 24
        assert max(map(len, lines[1:])) <= 80


def test_levels_outside_are_a_finding(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edit(chip, "rising: 1.677 V, falling: 1.627 V", "rising: 1.652 V, falling: 1.602 V")
    assert main(["place", str(chip), "uv"]) == 1
    assert "too low" in capsys.readouterr().out
    assert answer(capsys, str(chip), "uv")["detectors"][0]["stands"] is False


def test_nothing_fits(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edit(chip, "rising: 1.677 V, falling: 1.627 V", "rising: 1.727 V, falling: 1.627 V")
    assert main(["place", str(chip), "uv", "--apply"]) == 2
    written = capsys.readouterr()
    assert "no place" in written.out and " short" in written.out
    assert "comparators.uv: no level keeps every limit; see what would buy room" in written.err
    assert levels(chip, "uv")["rising"] == "1.727 V"


def test_what_is_missing_is_named_and_is_no_finding(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edit(chip, "    collapse: 2 V/ms\n", "")
    assert main(["place", str(chip), "uv"]) == 0
    assert capsys.readouterr().out.splitlines()[1] == "  open       not given: rails.avdd.collapse"


def test_apply_changes_the_levels_and_not_one_other_byte(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    before = chip.read_bytes()
    assert main(["place", str(chip), "uv", "--apply"]) == 0
    fixed = placed("", "uv").found
    assert not isinstance(fixed, Unknown)
    chosen = chosen_levels_mv(fixed)
    assert chosen is not None
    assert abs(chosen[0] / 1000 - fixed.middle_v) <= 0.0005
    falling, rising = (f"{level_mv / 1000:.3f} V" for level_mv in chosen)
    assert levels(chip, "uv") == {"rising": rising, "falling": falling}
    old, new = "rising: 1.677 V, falling: 1.627 V", f"rising: {rising}, falling: {falling}"
    assert chip.read_bytes() == before.replace(old.encode(), new.encode())
    text = capsys.readouterr()
    assert text.out.startswith(f"{chip}: wrote comparators.uv.trip.falling: {falling}\n")
    assert text.err == ""
    # A second time there is nothing left to write.
    again = chip.read_bytes()
    assert main(["place", str(chip), "uv", "--apply"]) == 0
    assert chip.read_bytes() == again
    assert "wrote" not in capsys.readouterr().out


def test_apply_writes_where_the_level_stands(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    text = chip.read_text("utf-8")
    head, comparators = text.split("comparators:\n", 1)
    own, rest = comparators.split("\noutput_stages:", 1)
    beside = chip.with_name("detectors.yaml")
    beside.write_bytes(f"comparators:\r\n{own}".replace("\n", "\r\n").replace("\r\r", "\r").encode())
    chip.write_text(head.replace("[process.yaml]", "[process.yaml, detectors.yaml]") + "output_stages:" + rest, "utf-8")
    first = chip.read_bytes()
    assert main(["place", str(chip), "uv", "--apply"]) == 0
    assert chip.read_bytes() == first
    assert b"\r\n" in beside.read_bytes() and b"\n" not in beside.read_bytes().replace(b"\r\n", b"")
    assert levels(beside, "uv")["falling"] != "1.627 V"
    assert f"{beside}: wrote" in capsys.readouterr().out


def test_apply_keeps_millivolts_and_quotes(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edit(chip, "rising: 1.677 V, falling: 1.627 V", 'rising: "1677 mV", falling: {typ: 1627 mV}')
    assert main(["place", str(chip), "uv", "--apply"]) == 0
    edited = capsys.readouterr().out
    assert "wrote comparators.uv.trip.falling.typ: 16" in edited
    assert 'mV", falling: {typ: 16' in chip.read_text("utf-8")


def test_apply_fills_a_sketch(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edit(
        chip,
        "    trip: {rising: 1.677 V, falling: 1.627 V}\n",
        "    trip:\n      rising:     # to be placed\n      falling:\n",
    )
    assert main(["place", str(chip), "uv"]) == 0
    assert "not placed yet" in capsys.readouterr().out
    assert main(["place", str(chip), "uv", "--apply"]) == 0
    capsys.readouterr()
    fixed = levels(chip, "uv")
    assert (
        f"      rising: {fixed['rising']}     # to be placed\n      falling: {fixed['falling']}\n" in chip.read_text()
    )
    assert answer(capsys, str(chip), "uv")["detectors"][0]["stands"] is True


@pytest.mark.parametrize(
    ("detector", "old", "new", "message"),
    [
        ("por", "", "", "its levels are stated as a range; move the circuit, and state the range that it has then"),
        (
            "uv", "trip: {rising: 1.677 V, falling: 1.627 V}",
            "codes: {a: {rising: 1.677 V, falling: 1.627 V}}\n    ships_with: a",
            "its levels are chosen by code; choose a code that is usable",
        ),
        ("uv", "    collapse: 2 V/ms\n", "", "cannot be placed (not given: rails.avdd.collapse); nothing was written"),
    ],
    ids=["range", "codes", "open"],
)  # fmt: skip
def test_apply_refuses(
    chip: Path, detector: str, old: str, new: str, message: str, capsys: pytest.CaptureFixture[str]
) -> None:
    edit(chip, old, new)
    before = chip.read_bytes()
    assert main(["place", str(chip), detector, "--apply"]) == 2
    assert f"comparators.{detector}: {message}\n" in capsys.readouterr().err
    assert chip.read_bytes() == before


def test_all_that_can_be_written_is(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["place", str(chip), "--apply"]) == 0
    written = capsys.readouterr()
    assert "comparators.por: its levels are stated as a range" in written.err
    found = answer(capsys, str(chip))
    assert [entry["id"] for entry in found["detectors"]] == ["por", "uv", "ov", "uv_core"]
    assert all(entry["stands"] for entry in found["detectors"])


@pytest.mark.parametrize("detector", ["uv", "ov", "uv_core"])
def test_the_rules_agree_with_both_ends(detector: str, chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    entry = answer(capsys, str(chip), detector)["detectors"][0]
    apart_v = entry["hysteresis"]["now"]["value"]

    def failing(falling_v: float) -> set[str]:
        trip = f"{{falling: {falling_v:.9f} V, rising: {falling_v + apart_v:.9f} V}}"
        found = judged(f"comparators: {{{detector}: {{trip: {trip}}}}}", RULES)
        return {rule for rule, subject in of_kind(found, Kind.FAIL) if subject == detector} & set(
            REQUIREMENT_RULES.values()
        )

    least_v, most_v = entry["falling"]["least"]["value"], entry["falling"]["most"]["value"]
    assert failing((least_v + most_v) / 2) == failing(least_v + 1e-7) == failing(most_v - 1e-7) == set()
    assert failing(least_v - 1e-6) == {REQUIREMENT_RULES[entry["lowest_by"]["requirement"]]}
    assert failing(most_v + 1e-6) == {REQUIREMENT_RULES[entry["highest_by"]["requirement"]]}


def test_yield(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edit(chip, "rising: 1.677 V, falling: 1.627 V", "rising: 1.6625 V, falling: 1.6125 V")
    arguments = ["place", str(chip), "uv", "--yield", "--samples", "40000", "--seed", "5"]
    main(arguments)
    first = capsys.readouterr()
    assert first.err == ""
    main(arguments)
    assert capsys.readouterr().out == first.out
    rows = [line for line in first.out.splitlines() if " ppm, 95 % " in line]
    assert len(rows) == 4
    assert rows[0].startswith("  missed by  ") and rows[0].endswith("guarantee (falling)")
    found = answer(capsys, str(chip), "uv", "--yield", "--samples", "40000", "--seed", "5")["detectors"][0]["yield"]
    demand = found["demands"]["guarantee (falling)"]
    assert demand["samples"] == 40000
    assert demand["least_ppm"] <= demand["ppm"] <= demand["most_ppm"]
    assert demand["ppm"] == pytest.approx(1e6 * demand["failures"] / 40000)
    assert found["detector"]["failures"] >= demand["failures"] > 0


def test_numpy_is_loaded_for_yield_and_for_the_crossover_asked_for_alone(chip: Path) -> None:
    import subprocess
    import sys

    script = (
        "import sys\nfrom tidegate.lint.cli import main\n"
        f"main(['place', {str(chip)!r}]); main(['place', {str(chip)!r}, 'uv']); main(['margins', {str(chip)!r}])\n"
        f"assert 'numpy' not in sys.modules\nmain(['place', {str(chip)!r}, 'por'])\nassert 'numpy' in sys.modules"
    )
    subprocess.run([sys.executable, "-c", script], check=True, capture_output=True)


def test_components_of_a_crossover(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """The window is that of the rule; the widest contribution comes first; the room to follow is that of the rule."""
    found = answer(capsys, str(chip), "por")["detectors"][0]["components"]
    said = judged("", CROSSOVER_RULES)
    level, tracking = found["level"], found["tracking"]
    have = said["trip_window/crossover_level", "por"].measure
    room = said["trip_window/crossover_tracks", "por"].measure
    assert have is not None and room is not None
    assert level["least"]["value"] == pytest.approx(have.have, abs=1e-9)
    assert level["least_at"]["temperature"] == {"value": pytest.approx(398.15), "unit": "K"}
    assert level["down"]["value"] == pytest.approx(100 * (1 - level["least"]["value"] / level["nominal"]["value"]))
    assert [part["parameter"] for part in level["moved_by"]] == ["temperature", "threshold", "resistance", "offset"]
    assert tracking["margin"]["value"] == pytest.approx(room.have - room.need, abs=1e-9)
    assert found["second_crossing"] is None


def test_components_of_others_are_not_asked_for(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert all("components" not in entry for entry in answer(capsys, str(chip))["detectors"])
    assert "components" not in answer(capsys, str(chip), "uv")["detectors"][0]


def test_components_of_a_crude_current(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edit(
        chip, "{kind: divider_mos, ratio: 0.5,",
        "{kind: crude_current, mirror: 1, reference_current: 900 nA, reference_start: 1 V, reference_rise: 0.4 V,",
    )  # fmt: skip
    main(["place", str(chip), "por"])
    text = capsys.readouterr().out
    second = answer(capsys, str(chip), "por")["detectors"][0]["components"]["second_crossing"]
    assert second["in_service"] == {"value": pytest.approx(1.895), "unit": "V"}
    assert second["least"]["value"] > 1.895
    assert f"  crosses    the crude current overtakes again from {second['least']['value']:.4g} V, at 125 degC" in text
    edit(chip, "reference_rise: 0.4 V,", "")
    main(["place", str(chip), "por"])
    text = capsys.readouterr().out
    assert "  components not given: comparators.por.crossover.reference_rise\n" in text
    assert "  crosses    the crude current overtakes again from " in text
