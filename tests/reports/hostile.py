"""Hostile text, places where it can enter, and readers of every form that tell whether it stayed text."""

from __future__ import annotations

import json
import re
import xml.etree.ElementTree as ET
from collections.abc import Iterator, Mapping
from html.parser import HTMLParser
from pathlib import Path
from typing import Any, Final

from markdown_it import MarkdownIt

SMALL: Final = Path(__file__).with_name("drawing") / "small.yaml"

# Raw as a terminal or a browser would take them.  Controls: ECMA-48; OSC 8 and 52: common practice, no source;
# direction marks as in CVE-2021-42574; separators and noncharacters: the Unicode Standard.
STRINGS: Final[Mapping[str, str]] = {
    "colour": "\x1b[31mred\x1b[0m",
    "cursor": "\x1b[2J\x1b[1;1H\x1b]0;title\x07",
    "link": "\x1b]8;;http://example.invalid\x1b\\click\x1b]8;;\x1b\\",
    "clipboard": "\x1b]52;c;aGk=\x07",
    "C1": "\x9b31m\x9d0;t\x9c\x85\x90q\x9c",
    "C0 and delete": "a\x00b\x01c\x08d\x0be\x0cf\x0eg\x7fh",
    "line ends": "a\rb\nc\r\nd\x85e\u2028f\u2029g\x0bh",
    "tabs": "a\tb\t\tc",
    "terminal markup": "[bold]b[/bold] [/] [link=http://example.invalid]l[/link] [red on blue] :smile: \\[x]",
    "html": "<script>alert(1)</script><img src=x onerror=alert(1)> &lt;b&gt; &#x3c; <b>",
    "end of script": "</script></style></title></textarea></svg></details><svg onload=alert(1)>",
    "attributes": "\" onload=alert(1) x='y' ' autofocus onfocus=alert(1) > <",
    "xml": "]]> <![CDATA[x]]> <!-- y --> <?z?> <!DOCTYPE a [<!ENTITY b 'c'>]> &b;",
    "markdown": "| a | b |\n|---|---|\n# h\n- i\n> q\n```\nx\n*b* _i_ ~~s~~ `c` [t](javascript:alert(1)) ![i](http://x.y)",
    "references": "@someone #12 GH-12 !3 $x$ $\\alpha$ :tada: www.example.invalid http://example.invalid a@b.cd",
    "json": '", "verdict": "KEPT", "x": "\\u0000 \\',
    "sarif": "{0} {1} [a](1) [b](http://x.y) }{",
    "dot": '"]; a -> b; x [label="\\N\\G\\l\\"',
    "templates": "{{ 7 * 7 }}{% raw %}{# c #} ${x} %s %d %(a)s {x!r}",
    "bidi": "a\u202eb\u202dc\u202ad\u202be\u202cf\u2066g\u2067h\u2068i\u2069j\u200ek\u200fl\u061c",
    "zero width": "a\u200bb\u200cc\u200dd\ufeffe\u2060f\u00adg\u034fh\u180ei\u3164j\U000e0041k\U000e0100l",
    "marks": "e" + "\u0301" * 400 + " o\u20dd\u20dd x" + "\u0489" * 100,
    "surrogates": "a\ud800b\udfffc\udcffd",
    "no characters": "a\ufdd0b\ufffec\uffffd\U0001ffffe\U0010fffef",
    "long": "n" * 100_000,
    "long lines": "lorem ipsum " * 2_000,
    "arabic": "مراقب الجهد ٣٫٣ فولت",
    "wide": "電源監視回路 基準電圧 한국어 ｆｕｌｌ",
    "emoji": "👩‍👩‍👧‍👦 ❤️ 🇪🇺 👍🏽 1️⃣",
    "empty looking": "\u2800\u00a0\u3000 \u2003 \u115f\uffa0",
    "dashes first": "--save=/x -x\n--- \n... \n%TAG",
    "spreadsheet": "=cmd|' /C calc'!A0",
}
_TOGETHER: Final = (
    ("colour", "cursor", "link", "clipboard", "C1", "C0 and delete"), ("line ends", "tabs"), ("terminal markup",),
    ("html", "end of script"), ("attributes", "xml"), ("markdown", "references"), ("json", "sarif"),
    ("dot", "templates"),
    ("bidi", "zero width"), ("marks",), ("surrogates", "no characters"), ("long",), ("long lines",),
    ("arabic", "wide", "emoji"), ("empty looking",), ("dashes first", "spreadsheet"),
)  # fmt: skip
GROUPS: Final[Mapping[str, str]] = {" + ".join(names): " ".join(STRINGS[name] for name in names) for names in _TOGETHER}
"""All of them, some in one text, where each text takes a while to try."""
assert {name for names in _TOGETHER for name in names} == set(STRINGS)
# What a description refuses to hold, by a message of its own.
REFUSED: Final = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u2028\u2029\ud800-\udfff\ufeff\ufffe\uffff]")
HARMLESS: Final = "harmless"


def description(text: str) -> str:
    """A description with a text in every place that takes any."""
    data: dict[str, Any] = _small()
    span = {"min": "1 us", "max": "3 us", "basis": {"by": "measured", "source": text, "x-more": text}}
    data |= {"subsystem": text, "revision": text, "note": text, "x-own": {text[:200]: [text]}}
    data["conditions"] = {"note": text}
    data["process"] = {"source": text, "note": text, "layers": {"m1": {"source": text, "note": text}}}
    data["scenarios"] = {"plug_in": {"note": text, "waveforms": [{"rail": "vdd", "points": _points()}]}}
    data["waivers"] = [_waiver("evidence/rails", "vdd", text), _waiver(text, text, text), _waiver(text, "uv", text)]
    for section, name in _ELEMENTS:
        data[section][name]["note"] = text
    data["comparators"]["uv"] |= {"delay": span, "hysteresis": {"note": text}}
    data["references"]["ref"]["start_up"] = {"by": text, "note": text}
    data["output_stages"]["out"]["discharge"] = {"by": text, "note": text}
    return json.dumps(data, ensure_ascii=False)


_ELEMENTS: Final = (
    ("rails", "vdd"), ("domains", "aon"), ("references", "ref"), ("biases", "bias"), ("comparators", "uv"),
    ("output_stages", "out"), ("resets", "rst_n"), ("loads", "radio"), ("bypasses", "skip"),
)  # fmt: skip


def _small() -> dict[str, Any]:
    from tidegate.lint.description.yaml_text import read_yaml

    return dict(read_yaml("small.yaml", SMALL.read_bytes()).data)


def _points() -> list[dict[str, str]]:
    return [{"at": "0 s", "level": "0 V"}, {"at": "1 ms", "level": "1.8 V"}]


def _waiver(rule: str, element: str, text: str) -> dict[str, str]:
    return {"rule": rule, "element": element, "why": text, "agreed_by": text, "until": "2999-12-31", "note": text}


# A pack that says a text wherever a pack can say something.
_PACK: Final = """
import json
from tidegate.lint.account import less, plus
from tidegate.lint.graph.edge import Hop
from tidegate.lint.judgement import Level
from tidegate.lint.quantity import Dimension
from tidegate.lint.rule import Example, rule

TEXT = json.loads(JSON)


def about(name):
    return rule(
        f"hostile/{name}", title=TEXT, level=Level.ERROR, applies_to="rails", proves=TEXT, facts=(TEXT,), mend=TEXT,
        sources=(TEXT, TEXT), example=Example(fails=TEXT, holds=TEXT), formulas=(documented,),
    )


def documented():
    pass


documented.__doc__ = TEXT
Raised = type(TEXT.replace("\\0", "0").encode("utf-8", "replace").decode(), (Exception,), {})


@about("fails")
def fails(rail, case):
    return case.fails(TEXT, mend=TEXT, why=TEXT, at=TEXT, path=(Hop(TEXT, TEXT), Hop(rail.id, TEXT)))


@about("asks")
def asks(rail, case):
    return case.asks(TEXT, mend=TEXT, why=TEXT)


@about("passes")
def passes(rail, case):
    return case.passes(TEXT, why=TEXT)


@about("waits")
def waits(rail, case):
    return case.open([TEXT], TEXT)


@about("cannot_tell")
def cannot_tell(rail, case):
    return case.open([], TEXT)


@about("adds_up")
def adds_up(rail, case):
    have = case.sum(plus(TEXT, lambda: 0.5, of=TEXT), less(TEXT, lambda: 0.1, of=TEXT))
    need = case.sum(plus(TEXT, lambda: 0.7, of=TEXT), plus(TEXT, lambda: 0.1))
    return case.at_least(
        need=need, have=have, dimension=Dimension.VOLTAGE, says=TEXT, why=TEXT, mend=TEXT, path=(Hop(TEXT, TEXT),)
    )


@about("adds_up_so_far")
def adds_up_so_far(rail, case):
    ripple = case.of(rail).dip.depth
    have = case.sum(plus(TEXT, lambda: 0.5, of=TEXT), less(TEXT, ripple.most, of=TEXT, floor=0.0))
    return case.at_least(need=0.2, have=have, dimension=Dimension.VOLTAGE, says=TEXT, why=TEXT, mend=TEXT)


@about("does_not_apply")
def does_not_apply(rail, case):
    return case.not_applicable(TEXT)


@about("raises")
def raises(rail, case):
    raise Raised(TEXT)


RULES = (fails, asks, passes, waits, adds_up, adds_up_so_far, cannot_tell, does_not_apply, raises)
"""


def pack(text: str) -> str:
    """A pack that says a text wherever a pack can say something."""
    return _PACK.replace("JSON", repr(json.dumps(text)))


# Readers: what a text is made of, without the text


def json_shape(data: Any) -> Any:
    """JSON without its texts; what only a list of them says is told by its length."""
    if isinstance(data, dict):
        return {key: json_shape(value) for key, value in data.items()}
    if isinstance(data, list):
        return [json_shape(value) for value in data]
    return type(data).__name__


def json_texts(data: Any) -> Iterator[str]:
    """Every text of JSON data."""
    if isinstance(data, str):
        yield data
    elif isinstance(data, dict | list):
        for value in data.values() if isinstance(data, dict) else data:
            yield from json_texts(value)


class _Page(HTMLParser):
    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.shape: list[Any] = []
        self.said: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.shape.append((tag, tuple(name for name, _ in attrs)))
        self.said += [value for _, value in attrs if value]

    def handle_endtag(self, tag: str) -> None:
        self.shape.append(f"/{tag}")

    def handle_data(self, data: str) -> None:
        self.said.append(data)

    def handle_comment(self, data: str) -> None:
        self.shape.append("comment")

    def handle_decl(self, decl: str) -> None:
        self.shape.append(decl)

    def handle_pi(self, data: str) -> None:
        self.shape.append("instruction")


def html_read(text: str) -> tuple[list[Any], str]:
    """Tags with the names of their attributes, and everything that is said."""
    page = _Page()
    page.feed(text)
    page.close()
    return page.shape, "\n".join(page.said)


def xml_read(text: str) -> tuple[list[Any], str]:
    """Elements with the names of their attributes, and everything that is said; the parser refuses what is no XML."""
    nodes = list(ET.fromstring(text).iter())
    said = [part for node in nodes for part in (node.text, node.tail, *node.attrib.values()) if part]
    return [(node.tag, tuple(node.attrib)) for node in nodes], "\n".join(said)


def markdown_read(text: str) -> tuple[list[Any], str]:
    """Blocks, marks and HTML of CommonMark with tables, and everything that is said."""
    tokens = MarkdownIt("commonmark", {"html": True}).enable(["table", "strikethrough"]).parse(text)
    shape: list[Any] = []
    said: list[str] = []
    for token in tokens:
        shape.append((token.type, token.content.strip() if token.type == "html_block" else ""))
        for child in token.children or []:
            if child.type in ("text", "text_special", "entity", "code_inline"):
                said.append(child.content)
            if child.type not in ("text", "text_special", "entity"):
                shape.append((child.type, child.content if child.type == "html_inline" else ""))
    return shape, "".join(said)


_DOT: Final = re.compile(r'"(?:[^"\\]|\\.)*"|\w+|->|[\[\]{};=,]|\s+')


def dot_read(text: str) -> tuple[list[str], str]:
    """Tokens of DOT with quoted texts left out, and everything that is said in them."""
    tokens = _DOT.findall(text)
    assert "".join(tokens) == text
    words = [token for token in tokens if not token.isspace()]
    said = [token[1:-1].replace('\\"', '"').replace("\\\\", "\\") for token in words if token.startswith('"')]
    return ['"' if token.startswith('"') else token for token in words], "\n".join(said)
