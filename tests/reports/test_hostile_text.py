"""Hostile text in descriptions and packs stays text in every form of the review, each read by a reader of its own."""

from __future__ import annotations

import json
import os
import re
import sys
import unicodedata
from collections.abc import Callable
from functools import cache
from pathlib import Path
from typing import Any

import pytest
from rich.cells import cell_len

from tests.commands.calling import tidegate
from tests.reports.hostile import (
    GROUPS,
    HARMLESS,
    REFUSED,
    STRINGS,
    description,
    html_read,
    json_shape,
    json_texts,
    markdown_read,
    pack,
)  # fmt: skip
from tidegate.lint.limits import MOST_TEXT
from tidegate.lint.reports.columns import columns, wrapped
from tidegate.lint.reports.json_form import json_form
from tidegate.lint.reports.plain_text import MOST_MARKS, UNSAFE, plain

ENDINGS = ("txt", "json", "sarif", "md", "html")
SAVED = [word for ending in ENDINGS for word in ("--save", f"report.{ending}")]
OWN_COLOUR = re.compile(r"\x1b\[[0-9;]*m")


def allowed(text: str) -> str:
    """As much of a text as a description may hold."""
    return REFUSED.sub("", text)[:MOST_TEXT] or HARMLESS


def reported(folder: Path, text: str) -> dict[str, str]:
    """Every form of a review in which a text stands wherever one can: as much of it as a description may hold."""
    (folder / "chip.yaml").write_text(description(allowed(text)), "utf-8")
    (folder / "pack.py").write_text(pack(text), "utf-8")
    done = tidegate("review", "--every", "--pack", "pack.py", *SAVED, "chip.yaml", cwd=folder)
    assert (done.returncode, done.stderr) == (3, ""), done.stderr[:1000]
    reports = {ending: (folder / f"report.{ending}").read_text("utf-8") for ending in ENDINGS}
    assert done.stdout == reports["txt"]
    return reports


@cache
def harmless(folder: Path) -> dict[str, str]:
    return reported(folder, HARMLESS)


@pytest.fixture(scope="module")
def module_folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("harmless")


def without_spaces(text: str) -> str:
    return "".join(text.split())


READERS: dict[str, Callable[[str], tuple[Any, str]]] = {
    "md": markdown_read,
    "html": html_read,
    "json": lambda text: (json_shape(json.loads(text)), "\n".join(json_texts(json.loads(text)))),
    "sarif": lambda text: (json_shape(json.loads(text)), "\n".join(json_texts(json.loads(text)))),
}


@pytest.mark.parametrize("name", GROUPS)
def test_hostile_text_stays_text_in_every_form(name: str, tmp_path: Path, module_folder: Path) -> None:
    text = GROUPS[name]
    reports, others = reported(tmp_path, text), harmless(module_folder)
    for ending, report in reports.items():
        assert set(UNSAFE.findall(report)) <= {"\n"}, ending
    assert without_spaces(plain(text)) in without_spaces(reports["txt"])
    for ending, read in READERS.items():
        shape, said = read(reports[ending])
        assert shape == read(others[ending])[0], ending  # the same form, whatever stands in it
        shown = text if ending == "json" else plain(text)
        if ending == "sarif":  # braces and links have a meaning there, and are written so that they have none
            shown = shown.replace("{", "{{").replace("}", "}}").replace("](", "] (")
        assert without_spaces(shown) in without_spaces(said.replace("\u200b", "" if ending == "md" else "\u200b")), (
            ending
        )


TOGETHER = " ".join(text[:300] for text in STRINGS.values())


@pytest.mark.parametrize("width", [40, 80])
@pytest.mark.parametrize("name", ["together", "colour", "terminal markup", "long", "marks", "wide", "emoji", "arabic"])
def test_at_a_terminal_only_our_own_colours_are_obeyed(name: str, width: int, tmp_path: Path) -> None:
    text = STRINGS.get(name, TOGETHER)[:4_000]
    (tmp_path / "chip.yaml").write_text(description(allowed(text)), "utf-8")
    (tmp_path / "pack.py").write_text(pack(text), "utf-8")

    def shown(*, colour: bool) -> str:
        arguments = ("review", "--pack", "pack.py", "chip.yaml")
        return tidegate(*arguments, cwd=tmp_path, columns=width, colour=colour).stdout

    coloured, uncoloured = shown(colour=True), shown(colour=False)
    assert OWN_COLOUR.search(coloured)
    assert set(UNSAFE.findall(OWN_COLOUR.sub("", coloured))) <= {"\n"}
    assert [line.rstrip() for line in OWN_COLOUR.sub("", coloured).split("\n")] == uncoloured.split("\n")
    wide = [line for line in uncoloured.split("\n") if cell_len(line) > width]
    assert [line for line in wide if not _cannot_be_broken(line)] == []


def _cannot_be_broken(line: str) -> bool:
    """Whether a line is too wide for want of a place to break it: a single word, or a row of the table of families."""
    return len(line.split()) == 1 or bool(re.fullmatch(r"[a-z -]+?( +(\d+|[.])){5}|judged( +[a-z/]+){5}", line))


# Names of files

TINY = "rails: {avdd: {nominal: 1.8 V}}\n"


@pytest.mark.parametrize("name", GROUPS)
def test_a_file_may_be_called_anything(name: str, tmp_path: Path) -> None:
    file = re.sub("[/\0\ud800-\udfff]", "_", GROUPS[name]).encode()[:200].decode("utf-8", "ignore") + ".yaml"
    (tmp_path / file).write_text(TINY, "utf-8")
    bad = f"bad{file}"
    (tmp_path / bad).write_text(TINY.replace(" V", ""), "utf-8")
    named = [f"./{file}", f"./{bad}", f"./gone{file}"]
    done = tidegate("review", *SAVED, *named, cwd=tmp_path)
    assert (done.returncode, len(done.stderr.splitlines())) == (2, 2)
    reports = {ending: (tmp_path / f"report.{ending}").read_text("utf-8") for ending in ENDINGS}
    for report in (done.stdout, done.stderr, *reports.values()):
        assert set(UNSAFE.findall(report)) <= {"\n"}
    entries = json.loads(reports["json"])["files"]
    assert [entry["file"] for entry in entries] == named
    for ending in ("md", "html"):
        _, said = READERS[ending](reports[ending])
        assert without_spaces(plain(f"./{file}")) in without_spaces(said.replace("\u200b", "")), ending
    uris = {
        location["physicalLocation"]["artifactLocation"]["uri"]
        for result in json.loads(reports["sarif"])["runs"][0]["results"]
        for location in result["locations"]
    }
    assert all(re.fullmatch(r"[A-Za-z0-9._~%/-]+", uri) for uri in uris)  # RFC 3986


@pytest.mark.skipif(sys.platform != "linux", reason="file names are bytes on Linux")
@pytest.mark.parametrize("ending", ENDINGS)
def test_a_file_name_that_is_no_text(ending: str, tmp_path: Path) -> None:
    name = os.fsdecode(b"chip\xff.yaml")
    (tmp_path / name).write_text(description("x"), "utf-8")
    done = tidegate("review", "--save", f"report.{ending}", name, cwd=tmp_path)
    assert done.stderr == ""
    text = (tmp_path / f"report.{ending}").read_text("utf-8")
    assert "chip%FF.yaml" in text if ending == "sarif" else "chip\\udcff.yaml" in text


# What is unsafe, and how wide the rest is


def test_everything_without_a_look_of_its_own_is_unsafe() -> None:
    """Against the Unicode Character Database of Python: controls, formats, surrogates, separators, noncharacters."""
    by_category: dict[str, set[str]] = {}
    for sign in map(chr, range(0x110000)):
        by_category.setdefault(unicodedata.category(sign), set()).add(sign)
    unsafe = set(UNSAFE.findall("".join(map(chr, range(0x110000)))))
    for category in ("Cc", "Cs", "Zl", "Zp"):
        assert by_category[category] <= unsafe, category
    # Marks of numbers and verses in Arabic and Syriac, which can be seen (Prepended_Concatenation_Mark).
    seen = set("\u0600\u0601\u0602\u0603\u0604\u0605\u06dd\u070f\u0890\u0891\u08e2")
    assert by_category["Cf"] - seen <= unsafe
    # The noncharacters of the Unicode Standard (section 23.7): these, and two in each plane.
    assert set(map(chr, range(0xFDD0, 0xFDF0))) <= unsafe
    assert {chr(plane + last) for plane in range(0, 0x110000, 0x10000) for last in (0xFFFE, 0xFFFF)} <= unsafe
    assert not {sign for sign in unsafe if unicodedata.category(sign)[0] in "PSN" or unicodedata.category(sign) == "Zs"}
    letters = {sign for sign in unsafe if unicodedata.category(sign)[0] == "L"}
    assert letters == set("\u115f\u1160\u3164\uffa0")  # Hangul fillers, which are blank


def test_plain_text_and_json_write_unsafe_characters_as_numbers() -> None:
    for text in STRINGS.values():
        shown = plain(text)
        assert not UNSAFE.search(shown)
        assert plain(shown) == shown
        written = json_form({"x": text, text: [text]}, depth=3)
        assert set(UNSAFE.findall(written)) <= {"\n"}
        assert json.loads(written) == {"x": text, text: [text]}
    assert plain("a\u202eb\x1b") == "a\\u202eb\\u001b"
    assert plain("e" + "\u0301" * (MOST_MARKS + 2)) == "e" + "\u0301" * MOST_MARKS + "\\u0301" * 2


@pytest.mark.parametrize(
    "text", ["plain words", "電源監視回路", "e\u0301o\u20dd", "한국어 ｆｕｌｌ", "مراقب", "\U0001f30a 1"]
)
def test_columns_are_those_of_another_reader(text: str) -> None:
    assert columns(text) == cell_len(text)  # rich: widths of its own table of Unicode


@pytest.mark.parametrize("name", ["wide", "emoji", "arabic", "marks", "long", "long lines", "markdown"])
@pytest.mark.parametrize("most", [2, 7, 24, 80])
def test_wrapped_lines_fit_and_lose_nothing(name: str, most: int) -> None:
    text = plain(STRINGS[name])[:2_000]
    lines = wrapped(text, most)
    assert all(columns(line) <= most for line in lines)
    assert without_spaces("".join(lines)) == without_spaces(text)
    assert not any(unicodedata.combining(line[0]) for line in lines)  # a mark stays with its letter


def test_both_ends_of_a_line_stand_in_their_columns(tmp_path: Path) -> None:
    text = STRINGS["wide"]
    (tmp_path / "電圧.yaml").write_text(description(text).replace(f'"revision": "{text}"', '"revision": "A"'), "utf-8")
    first = tidegate("review", "電圧.yaml", cwd=tmp_path).stdout.splitlines()[0]
    assert first.endswith("電圧.yaml")
    assert cell_len(first) == 80
