"""Settings: which file counts, what it changes, what is said of a wrong one, and that every report names them."""

from __future__ import annotations

import datetime
import json
import re
from collections.abc import Sequence
from contextlib import closing
from pathlib import Path
from typing import Any

import pytest

from tidegate.lint.batch import Judged, Request, judge_file, settings_for
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.judgement import Kind, Level
from tidegate.lint.reports.forms import Form, Ran, View, Whole, part
from tidegate.lint.rule import Rule
from tidegate.lint.settings import FILE_NAME, Settings, load_settings
from tidegate.rules.catalogue import FAMILIES

ROOT = Path(__file__).resolve().parents[1]
DAY = datetime.date(2026, 1, 1)


@pytest.fixture
def chip(tmp_path: Path) -> Path:
    """A copy of the sound example, two folders down."""
    folder = tmp_path / "chips" / "a"
    folder.mkdir(parents=True)
    for name in ("sound.yaml", "process.yaml"):
        (folder / name).write_text((ROOT / "examples" / name).read_text("utf-8"), "utf-8")
    return folder / "sound.yaml"


def request(tmp_path: Path, **changes: Any) -> Request:
    return Request(DAY, lambda: FAMILIES, folder=str(tmp_path), **changes)


def judged(tmp_path: Path, text: str, **changes: Any) -> Judged:
    (tmp_path / FILE_NAME).write_text(text, "utf-8")
    return judge_file("chips/a/sound.yaml", request(tmp_path, **changes))


def test_the_nearest_file_counts(chip: Path, tmp_path: Path) -> None:
    (tmp_path / FILE_NAME).write_text("fail_at: note\n", "utf-8")
    assert settings_for("chips/a/sound.yaml", request(tmp_path)).file == FILE_NAME
    (chip.parent / FILE_NAME).write_text("fail_at: error\n", "utf-8")
    near = settings_for("chips/a/sound.yaml", request(tmp_path))
    assert (near.file, near.fail_at) == (str(Path("chips/a") / FILE_NAME), Level.ERROR)
    below = settings_for("sound.yaml", request(chip.parent))
    assert (below.file, below.fail_at) == (FILE_NAME, Level.ERROR)
    # The way leads through chips/a, but the file does not lie there.
    (tmp_path / "other.yaml").write_text("rails: {}\n", "utf-8")
    assert settings_for("chips/a/../../other.yaml", request(tmp_path)).file == FILE_NAME


def test_settings_above_are_named_from_where_the_tool_was_called(chip: Path, tmp_path: Path) -> None:
    (tmp_path / FILE_NAME).write_text("fail_at: note\n", "utf-8")
    assert settings_for("sound.yaml", request(chip.parent)).file == str(Path("../..") / FILE_NAME)


def test_a_named_file_and_options_win(chip: Path, tmp_path: Path) -> None:
    (tmp_path / FILE_NAME).write_text("fail_at: note\nalso: [review]\n", "utf-8")
    (tmp_path / "mine.yaml").write_text("levels: {coupling: note}\n", "utf-8")
    named = settings_for("chips/a/sound.yaml", request(tmp_path, settings="mine.yaml"))
    assert (named.file, named.fail_at, named.also) == ("mine.yaml", Level.WARNING, ())
    options = request(tmp_path, fail_at="error", also=("open",), packs=("mine.py",))
    won = settings_for("chips/a/sound.yaml", options)
    assert (won.file, won.fail_at, won.also, won.option_packs) == (FILE_NAME, Level.ERROR, ("open",), ("mine.py",))
    assert settings_for("chips/a/sound.yaml", request(tmp_path, also=())).also == ()


def test_a_run_reads_settings_afresh(chip: Path, tmp_path: Path) -> None:
    (tmp_path / FILE_NAME).write_text("fail_at: note\n", "utf-8")
    before = request(tmp_path)
    assert settings_for("chips/a/sound.yaml", before).fail_at is Level.NOTE
    (tmp_path / FILE_NAME).write_text("fail_at: error\n", "utf-8")
    assert settings_for("chips/a/sound.yaml", before).fail_at is Level.NOTE  # one run, one answer
    assert settings_for("chips/a/sound.yaml", request(tmp_path)).fail_at is Level.ERROR


def test_levels_and_what_is_left_out(chip: Path, tmp_path: Path) -> None:
    text = "levels: {hysteresis: note, hysteresis/present: warning}\nleave_out: [coupling, bypass/readable]\n"
    review = judged(tmp_path, text).review
    assert review is not None
    levels = {judgement.rule: judgement.level for judgement in review.judgements}
    assert levels["hysteresis/present"] is Level.WARNING
    assert {level for rule, level in levels.items() if re.match("hysteresis/(?!present)", rule)} == {Level.NOTE}
    assert not [rule for rule in levels if rule.startswith("coupling/") or rule == "bypass/readable"]


@pytest.mark.parametrize(
    ("least", "kind"),
    [("8 mV", Kind.PASS), ("9 mV", Kind.FAIL), ("0.5 %", Kind.PASS), ("0.6 %", Kind.FAIL)],
)
def test_least_margins_as_quantity_and_as_share(chip: Path, tmp_path: Path, least: str, kind: Kind) -> None:
    # On uv the sound example keeps 8.595 mV of margin over a need of 1.607 V: 0.535 %.
    review = judged(tmp_path, f"least_margins: {{trip_window/guarantee: {least}}}\n").review
    assert review is not None
    found = next(j for j in review.judgements if (j.rule, j.subject) == ("trip_window/guarantee", "uv"))
    assert found.kind is kind
    assert found.message.endswith("that the settings ask for") == (kind is Kind.FAIL)


@pytest.mark.parametrize(
    ("text", "faults"),
    [
        (
            "levels: {hysteresis/presant: note}\nleave_out: [coupling, bypas]\n",
            [
                f"{FILE_NAME}:1:10: levels: no rule or family is called 'hysteresis/presant'; "
                "did you mean hysteresis/present?",
                f"{FILE_NAME}:2:23: leave_out: no rule or family is called 'bypas'; did you mean bypass?",
            ],
        ),
        (
            "least_margins: {zzz/zzz: 1 %}\n",
            [f"{FILE_NAME}:1:17: least_margins: no rule or family is called 'zzz/zzz'; tidegate rules lists them"],
        ),
        (
            "least_margins:\n  hysteresis/covers_disturbance: 4 ohm\n",
            [
                f"{FILE_NAME}:2:3: least_margins.hysteresis/covers_disturbance: the margin of "
                "hysteresis/covers_disturbance is a voltage (found '4 ohm'); write a voltage, such as +1 mV, "
                "or a share of the need, such as 2 %"
            ],
        ),
        ("leave_out:\nleeve_out:\n", [f"{FILE_NAME}:2:1: unknown key 'leeve_out'; did you mean leave_out?"]),
        (
            "fail_at: fatal\n",
            [f"{FILE_NAME}:1:10: fail_at: no such choice (found 'fatal'); choices: error, warning, note"],
        ),
        (
            "conditions: {junction_temperature: {min: 125 degC, max: -40 degC}}\n",
            [f"{FILE_NAME}:1:36: conditions.junction_temperature: min 125 degC, max -40 degC are out of order; "],
        ),
        ("waivers: [no.yaml]\n", [f"{FILE_NAME}:1:11: waivers[0]: no such file (found 'no.yaml'); name a file"]),
        ("packs: [no.py]\n", [f"{FILE_NAME}:1:9: packs[0]: rule pack no.py: no such file; "]),
    ],
    ids=["near miss", "no near miss", "dimension", "unknown key", "choice", "order", "waiver file", "pack"],
)
def test_what_is_wrong_with_settings(chip: Path, tmp_path: Path, text: str, faults: list[str]) -> None:
    found = judged(tmp_path, text)
    assert found.review is None
    said = list(dict.fromkeys(re.sub(r"\+[0-9.]+ [mu]?V", "+1 mV", str(fault)) for fault in found.faults))
    assert [line.startswith(fault) for line, fault in zip(said, faults, strict=True)] == [True] * len(faults), said


def test_a_settings_file_may_say_nothing(tmp_path: Path) -> None:
    for text in ("", "# later\n", "levels:\n", "x-owner: me\n"):
        (tmp_path / FILE_NAME).write_text(text, "utf-8")
        assert load_settings(tmp_path / FILE_NAME, shown="s.yaml").summary == "s.yaml"
    with pytest.raises(DescriptionError, match="cannot be read"):
        load_settings(tmp_path / "none.yaml")


def test_conditions_are_filled_in_where_a_description_leaves_them_out(chip: Path, tmp_path: Path) -> None:
    text = chip.read_text("utf-8")
    assert "  coverage:" in text
    chip.write_text(re.sub(r"\n  coverage:.*", "", text), "utf-8")
    without = judged(tmp_path, "")
    filled = judged(tmp_path, "conditions: {coverage: 6, combine: worst_case}\n")
    assert without.review is not None and filled.review is not None
    own = without.review.loaded.description.conditions
    conditions = filled.review.loaded.description.conditions
    assert own is not None and conditions is not None
    assert (own.coverage, conditions.coverage) == (None, 6)
    assert conditions.combine == own.combine  # what the description states wins
    needs = [
        next(j.measure for j in review.judgements if (j.rule, j.subject) == ("hysteresis/covers_disturbance", "uv"))
        for review in (without.review, filled.review)
    ]
    assert needs[0] is not None and needs[1] is not None
    assert needs[1].need > needs[0].need  # noise counts with six standard deviations, not with the usual three


def test_packs_stand_beside_the_settings(chip: Path, tmp_path: Path) -> None:
    (tmp_path / "house").mkdir()
    pack = (ROOT / "examples" / "house_rules.py").read_text("utf-8")
    (tmp_path / "house" / "rules.py").write_text(pack, "utf-8")
    (chip.parent / FILE_NAME).write_text("packs: [../../house/rules.py]\n", "utf-8")
    for folder, name in ((tmp_path, "chips/a/sound.yaml"), (chip.parent, "sound.yaml")):
        review = judge_file(name, request(folder)).review
        assert review is not None
        assert "house/quick_detectors" in {judgement.rule for judgement in review.judgements}


# Reports

TELLING = """\
levels: {hysteresis: note}
least_margins: {bypass: 1 %}
leave_out: [coupling]
also: [open]
conditions: {coverage: 6}
"""
SUMMARY = (
    "tidegate.settings.yaml; left out coupling; levels hysteresis note; least margins bypass 1 %; also fails on open; "
    "conditions coverage"
)


def whole(form: Form, found: Judged) -> str:
    return together(form, [found], [rule for family in FAMILIES for rule in family])


def together(form: Form, founds: Sequence[Judged], rules: Sequence[Rule] = ()) -> str:
    with closing(Whole(form)) as made:
        for found in founds:
            made.add(part(View(form), found))
        return "".join(made.pieces(Ran(0, [found.settings for found in founds], rules)))


@pytest.mark.usefixtures("chip")
def test_the_report_names_the_settings_and_what_they_leave_out(tmp_path: Path) -> None:
    found = judged(tmp_path, TELLING)
    assert found.settings.summary == SUMMARY
    text = part(View(Form.TERMINAL), found).text
    assert f"settings: {SUMMARY}" in " ".join(text.split())
    markdown = part(View(Form.MARKDOWN), found).text
    assert f"Settings: {SUMMARY}." in markdown.replace("\\_", "_").replace("&#8203;", "")
    entry = json.loads(part(View(Form.JSON), found).text)["settings"]
    assert (entry["file"], entry["leave_out"], entry["also"]) == (FILE_NAME, ["coupling"], ["open"])
    assert (entry["levels"], entry["least_margins"], entry["conditions"]) == (
        {"hysteresis": "note"}, {"bypass": "1 %"}, ["coverage"],
    )  # fmt: skip
    (invocation,) = json.loads(whole(Form.SARIF, found))["runs"][0]["invocations"]
    assert invocation["properties"]["settings"] == [entry]
    overrides = {each["descriptor"]["id"]: each["configuration"] for each in invocation["ruleConfigurationOverrides"]}
    assert overrides["coupling/bump"] == {"enabled": False}
    assert overrides["hysteresis/present"] == {"level": "note"}


@pytest.mark.usefixtures("chip")
def test_defaults_need_no_words(tmp_path: Path) -> None:
    found = judge_file("chips/a/sound.yaml", request(tmp_path))
    assert found.settings == Settings()
    assert "settings" not in part(View(Form.TERMINAL), found).text
    assert "Settings" not in part(View(Form.MARKDOWN), found).text
    assert "ruleConfigurationOverrides" not in whole(Form.SARIF, found)


def test_a_report_on_several_settings_names_each(chip: Path, tmp_path: Path) -> None:
    (chip.parent / FILE_NAME).write_text("fail_at: note\n", "utf-8")
    (tmp_path / "other.yaml").write_text(chip.read_text("utf-8"), "utf-8")
    (tmp_path / "process.yaml").write_text((ROOT / "examples" / "process.yaml").read_text("utf-8"), "utf-8")
    founds = [judge_file(name, request(tmp_path)) for name in ("chips/a/sound.yaml", "other.yaml")]
    report = json.loads(together(Form.JSON, founds))
    assert report["settings"] == {"file": f"{Path('chips/a') / FILE_NAME}, defaults", "fail_at": "note"}


def test_a_least_margin_that_may_be_there_is_open(chip: Path, tmp_path: Path) -> None:
    """Of the collapse only a typical value is known: the margin is open, and beyond its best end it surely fails."""
    text = chip.read_text("utf-8")
    assert text.count("    collapse: 2 V/ms\n") == 1
    chip.write_text(text.replace("    collapse: 2 V/ms\n", "    collapse: {typ: 1 V/ms}\n"), "utf-8")
    for least, kind in (("12 mV", Kind.OPEN), ("13 mV", Kind.FAIL)):
        review = judged(tmp_path, f"least_margins: {{trip_window/guarantee: {least}}}\n").review
        assert review is not None
        found = next(j for j in review.judgements if (j.rule, j.subject) == ("trip_window/guarantee", "uv"))
        # 8.595 mV, and 1 V/ms for 3.5 us less: 12.095 mV at best, whatever the steepest collapse is.
        assert found.measure is not None
        assert found.measure.best_margin == pytest.approx(8.595e-3 + 3.5e-3, abs=1e-6)
        assert found.kind is kind
