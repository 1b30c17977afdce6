"""Text from descriptions, waivers and file names stays text in every form: nothing moves a cursor or turns a line."""

from __future__ import annotations

import json
import os
import sys
from pathlib import Path

import pytest

from tests.commands.calling import tidegate
from tidegate.lint.reports.json_form import json_form
from tidegate.lint.reports.plain_text import UNSAFE, plain

ROOT = Path(__file__).resolve().parents[2]
# Right-to-left override (as in CVE-2021-42574), an escape sequence, markup of every sort, a link, a zero-width space.
NASTY = "a\u202eb [bold]c[/bold] <img src=x onerror=alert(1)> [l](http://example.invalid) @someone #1 | `x` \u200b{0}"
ESCAPES = "\x1b[31mred\x07\x9b2J"

CHIP = r"""
subsystem: "NASTY"
revision: "NASTY"
note: "NASTY"
rails: {avdd: {nominal: 1.8 V, note: "NASTY"}}
domains: {aon: {rail: avdd, kind: always_on}}
comparators: {uv: {role: under_voltage, watches: avdd, domain: aon, hysteresis: none}}
bypasses: {skip: {overrides: uv, default: inactive, readable: false}}
waivers:
  - {rule: bypass/readable, element: skip, why: "NASTY", agreed_by: "NASTY", until: '2999-12-31'}
  - {rule: "NASTY", element: "NASTY", why: "NASTY", agreed_by: "NASTY", until: '2999-12-31'}
"""
FORMS = ("terminal", "markdown", "json", "sarif", "html")


def told(folder: Path, form: str, *names: str) -> str:
    done = tidegate("review", "--every", "--as", form, *names, cwd=folder, columns=100)
    return done.stdout + done.stderr


@pytest.mark.parametrize("form", FORMS)
def test_hostile_text_stays_text(form: str, tmp_path: Path) -> None:
    name = "chip\u202e<b>[x](y)@someone.yaml"
    (tmp_path / name).write_text(CHIP.replace("NASTY", NASTY.replace('"', "")), "utf-8")
    (tmp_path / "bad\x1b[31m.yaml").write_text('rails: {"\u202e": 1}\nnone\u202e: 1\n', "utf-8")
    text = told(tmp_path, form, name, "bad\x1b[31m.yaml", "gone\u202e\x1b.yaml")
    assert set(UNSAFE.findall(text)) <= {"\n"}
    if form == "json":
        files = json.loads(text)["files"]
        assert files[0]["file"] == name  # JSON gives the text back as it was
        assert files[0]["subsystem"] == f"{NASTY}"
        (waived,) = [judgement for judgement in files[0]["judgements"] if judgement["waiver"]]
        assert waived["waiver"] == f"{NASTY} (agreed by {NASTY}, until 2999-12-31)"
    elif form == "sarif":
        json.loads(text)
    elif form == "html":
        assert "<img src=x" not in text
    elif form == "markdown":
        check_markdown(text)
    else:
        assert "[bold]c[/bold] <img src=x onerror=alert(1)>" in " ".join(text.split())


def check_markdown(text: str) -> None:
    """The only markup is what the report makes itself."""
    from markdown_it import MarkdownIt

    tokens = MarkdownIt("commonmark", {"html": True}).enable("table").parse(text)
    blocks = [token.content.strip() for token in tokens if token.type == "html_block"]
    inner = [child for token in tokens for child in (token.children or [])]
    html = {child.content for child in inner if child.type == "html_inline"} | {block[:9] for block in blocks}
    assert html <= {"<sub>", "</sub>", "<details>", "</details", "<details><summary>"[:9], "</details>"[:9]}
    assert not [child for child in inner if child.type in ("link_open", "image")]
    said = "".join(child.content for child in inner if child.type in ("text", "text_special"))
    assert "@someone" not in said
    assert "#1" not in said


@pytest.mark.skipif(sys.platform != "linux", reason="file names are bytes on Linux")
@pytest.mark.parametrize("form", FORMS)
def test_a_file_name_that_is_no_text(form: str, tmp_path: Path) -> None:
    name = os.fsdecode(b"chip\xff.yaml")
    (tmp_path / name).write_text(CHIP.replace("NASTY", "x"), "utf-8")
    text = told(tmp_path, form, name)
    assert "chip%FF.yaml" in text if form == "sarif" else "chip\\udcff.yaml" in text


def test_plain_text_and_json_write_controls_as_numbers() -> None:
    text = f"{NASTY}{ESCAPES}\u2028\ufeff\U000e0041"
    assert not UNSAFE.search(plain(text))
    assert plain("a\u202eb") == "a\\u202eb"
    assert json.loads(json_form({"x": text})) == {"x": text}
    assert set(UNSAFE.findall(json_form({"x": text, "y": ["\x7f\x9f\ud800"]}))) <= {"\n"}
    assert json.loads(json_form(["\x7f\ud800"], depth=3)) == ["\x7f\ud800"]
