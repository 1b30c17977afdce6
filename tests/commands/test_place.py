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
from tidegate.lint.judgement import Kind
from tidegate.rules.trip_crossover import RULES as CROSSOVER_RULES
from tidegate.rules.trip_window import RULES

REQUIREMENT_RULES = {
    "protects": "trip_window/guarantee", "quiet": "trip_window/nuisance", "comes back": "trip_window/release",
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
    lines = capsys.readouterr().out.splitlines()
    assert lines[1] == "  falling    1.6114 V to 1.6432 V so far, room 31.9 mV; today 1.627 V"
    assert lines[3] == "  surely     none, before what is missing is known"
    assert lines[4] == "  waits for  collapse of avdd"
    # 1.627 V less the error of 11.4 mV, above 1.6 V; over the 3.5 us that the answer takes that is 4.46 V/ms.
    assert any(
        line.startswith("  margins    protects +15.6 mV before fall of avdd until the answer, ") for line in lines
    )
    bears = "  bears      protects: 15.5 mV for fall of avdd until the answer (collapse of avdd up to 4.45 V/ms)"
    assert bears in " ".join(" ".join(line.split()) if line.startswith(" " * 13) else line for line in lines)


BOARD = """
subsystem: board
rails:
  v33: {delivered: {min: 3.135 V, max: 3.465 V}}
comparators:
  sup:
    role: under_voltage
    watches: v33
    trip: {falling: 3.08 V}
    hysteresis: {amount: {typ: 40 mV}}
    errors: {accuracy: {of: total, share: 1.5 %, is: bound, at: rail}}
output_stages: {out: {driven_by: [sup]}}
resets: {rst: {driven_by: [out], active: low, guards: [chip]}}
loads: {chip: {needs: [{rail: v33, works: {min: 2.7 V}}]}}
"""


def test_a_supervisor_of_fifteen_lines_is_answered_as_far_as_is_known(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """By hand: 2.7 V / 0.985, (3.135 V - 40 mV) / 1.015, 3.135 V - 1.015 x 3.08 V and twice that in ripple."""
    board = tmp_path / "board.yaml"
    board.write_text(BOARD, "utf-8")
    assert main(["place", str(board)]) == 1  # it does not come back, whatever is missing
    text = " ".join(capsys.readouterr().out.split())
    for said in (
        "falling 2.7412 V to 3.0492 V so far, room 308.1 mV; today 3.08 V, 30.7 mV too high",
        "waits for collapse, ripple, load step and source impedance of v33; delay, filter, sampling and hysteresis of ",
        "352.8 mV at most fit so far",
        "errors 1.5 % now; up to 0.487 % here, up to 6.81 % at the best place so far",
        "quiet +8.8 mV before half the ripple and load step at release, comes back -31.2 mV or worse",
        "quiet: 8.8 mV for half the ripple and load step at release together (ripple of v33 up to 17.6 mV by itself)",
    ):
        assert said in text
    entry = answer(capsys, str(board))["detectors"][0]
    assert entry["margins"]["quiet"] == {
        "surely": {"value": None, "unit": "V"}, "at_best": {"value": pytest.approx(0.0088), "unit": "V"},
        "not_known": ["half the ripple", "load step at release"],
    }  # fmt: skip
    assert entry["falling"]["surely"] is None
    assert entry["falling"]["least"]["value"] == pytest.approx(2.7 / 0.985)
    ripple = next(each for each in entry["bears"] if each["kept"] is not None)
    assert ripple["kept"] == {
        "fact": "rails.v33.ripple.peak_to_peak", "relation": "at most", "value": pytest.approx(0.0176), "unit": "V",
    }  # fmt: skip
    assert "rails.v33.ripple.peak_to_peak" in entry["missing"]


def test_apply_changes_the_levels_and_not_one_other_byte(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    before = chip.read_bytes()
    assert main(["place", str(chip), "uv", "--apply"]) == 0
    fixed = placed("", "uv")
    chosen = chosen_levels_mv(fixed)
    assert chosen is not None and fixed.found.stated.falling_v is not None
    assert abs(chosen[0] / 1000 - (fixed.found.stated.falling_v + fixed.found.sure.middle_v)) <= 0.0005
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
    edit(chip, "rising: 1.677 V, falling: 1.627 V", 'rising: "1677 mV", falling: 1627 mV')
    assert main(["place", str(chip), "uv", "--apply"]) == 0
    edited = capsys.readouterr().out
    assert "wrote comparators.uv.trip.falling: 1631 mV" in edited
    assert 'rising: "1681 mV", falling: 1631 mV' in chip.read_text("utf-8")


def test_apply_writes_the_level_that_is_stated(chip: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edit(chip, "rising: 1.677 V, falling: 1.627 V", "rising: 1.677 V")
    assert main(["place", str(chip), "uv", "--apply"]) == 0
    # 46 to 54 mV of hysteresis lie below it: 1.618 V + 54 mV at the least, 1.693 V at the most.
    assert "wrote comparators.uv.trip.rising: 1.68" in capsys.readouterr().out
    assert set(levels(chip, "uv")) == {"rising"}
    assert answer(capsys, str(chip), "uv")["detectors"][0]["stands"] is True


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
        (
            "uv", "    collapse: 2 V/ms\n", "",
            "no level surely keeps every limit without rails.avdd.collapse; nothing was written",
        ),
        (
            "uv", "trip: {rising: 1.677 V, falling: 1.627 V}", "trip: {falling: {typ: 1.627 V}}",
            "its levels are stated as typical values; state nominal levels with their errors",
        ),
    ],
    ids=["range", "codes", "open", "typical"],
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
    assert rows[0].startswith("  missed by  ") and rows[0].endswith("protects (falling)")
    found = answer(capsys, str(chip), "uv", "--yield", "--samples", "40000", "--seed", "5")["detectors"][0]["yield"]
    demand = found["demands"]["protects (falling)"]
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
