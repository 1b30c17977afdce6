"""Text in Markdown stays text: held against markdown-it-py, an independent reader of CommonMark and its tables."""

from __future__ import annotations

import re

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from markdown_it import MarkdownIt
from markdown_it.token import Token

from tidegate.lint.reports.markdown_text import code, code_in_table, escaped
from tidegate.lint.reports.plain_text import plain

READER = MarkdownIt("commonmark", {"html": True}).enable(["table", "strikethrough"])
HARMLESS = {"text", "text_special", "softbreak", "entity"}

SPECIMENS = (
    "plain words", "<script>alert(1)</script>", "<img src=x onerror=alert(1)>", "</details></td></table>",
    "[link](javascript:alert(1))", "![image](http://example.invalid/x.png)", "<http://example.invalid>",
    "http://example.invalid/a", "www.example.invalid", "someone@example.invalid", "@someone", "see #12 and GH-12",
    "group!7, ~label, %milestone, &epic, $snippet, ^alert, :smile:", "`code`", "a | b || c", "*bold* _it_ ~~gone~~",
    "&lt;b&gt; &#64;someone", "# heading", "- item", "1. item", "> quote", "```\nfence", "a\\*b", "\\", "|", "`", "",
    "line\nbreak", "\u202egnirts\u202c", "\x1b[31mred", "<!-- note -->", "[x]: http://example.invalid", "[ ] task",
)  # fmt: skip
HOSTILE = st.text(st.sampled_from("<>[]()!@#$%^&*_~`|\\:/-+=.'\"{} \nabAB019\u202e\u200bµ"), max_size=40)

# What code hosts look for in the text of a finished page.  From memory: @name, #1, !1, $1, %1, ~name, &1, ^name,
# GH-1, :face:, addresses with http: or www., and e-mail.
REFERENCES = re.compile(r"[@#!$%~^][A-Za-z0-9\"]|&\d|GH-\d|:[a-z_]+:|https?://|www\.[a-z]|[a-z]@[a-z]", re.IGNORECASE)


def inner(tokens: list[Token]) -> list[Token]:
    return [child for token in tokens for child in (token.children or [])]


@pytest.mark.parametrize("text", SPECIMENS)
def test_escaped_text_is_shown_as_it_is(text: str) -> None:
    check_in_paragraph(text)
    check_in_table(text)


@settings(max_examples=150, deadline=None)
@given(HOSTILE)
def test_any_text_is_shown_as_it_is(text: str) -> None:
    check_in_paragraph(text)
    check_in_table(text)


def check_in_paragraph(text: str) -> None:
    tokens = READER.parse(f"- **fail** ({escaped(text)})")
    kinds = [token.type for token in inner(tokens)]
    after = inner(tokens)[kinds.index("strong_close") + 1 :]
    assert {token.type for token in after} <= HARMLESS
    said = "".join(token.content for token in after)
    assert said.replace("\u200b", "") == f" ({plain(text)})"
    assert not REFERENCES.search(said)


def check_in_table(text: str) -> None:
    row = f"| head | other |\n| --- | --- |\n| ({escaped(text)}) | {code_in_table(text)} |\n"
    tokens = READER.parse(row)
    cells = [token for token in tokens if token.type == "inline"]
    assert len(cells) == 4
    left, right = cells[2:]
    assert {child.type for child in left.children or []} <= HARMLESS
    assert "".join(child.content for child in left.children or []).replace("\u200b", "") == f"({plain(text)})"
    assert [child.type for child in right.children or []] == ["code_inline"]


@settings(max_examples=150, deadline=None)
@given(HOSTILE)
def test_code_is_one_piece_of_code(text: str) -> None:
    (token,) = inner(READER.parse(f"{code(text)}"))
    assert token.type == "code_inline"
    assert token.content.strip() == plain(text).strip()
