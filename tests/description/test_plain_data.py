"""What YAML values mean: by rules of our own, the same with both parsers, with the traps of YAML 1.1 refused."""

from __future__ import annotations

from typing import Any

import pytest
import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.description.test_messages import PARSERS
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.description.yaml_nodes import PARSER, Parser, PureParser, node_tree
from tidegate.lint.description.yaml_text import YamlFile, read_yaml


def read(text: str, parser: type[Parser] = PARSER) -> YamlFile:
    return read_yaml("f.yaml", text.encode(), parser)


READ: tuple[tuple[str, Any], ...] = (
    ("1.8 V", "1.8 V"),
    ("true", True),
    ("false", False),
    ("'true'", "true"),
    ("5", 5),
    ("-5", -5),
    ("+5", 5),
    ("0", 0),
    ("0.5", 0.5),
    ("1e-6", 1e-6),  # a text to YAML 1.1, which wants 1.0e-6
    ("1E6", 1e6),
    ("-1.5e+3", -1500.0),
    ("9007199254740993", 9007199254740993),
    ("12345678901234567890", 12345678901234567890.0),
    (".5", ".5"),
    ("1_000", "1_000"),
    (".inf", ".inf"),
    ("NaN", "NaN"),
    ("2026-11-01", "2026-11-01"),
    ("=", "="),
    ("yEs", "yEs"),
    ("'yes'", "yes"),
    ("|\n  two\n  lines\n", "two\nlines\n"),
    (">\n  one\n  line\n", "one line\n"),
    ('"a\\tb\\n"', "a\tb\n"),
    ("'a\tb'", "a\tb"),
    ("a#b", "a#b"),
    ("a # b\tc", "a"),
    ("[1, a, 'b']", [1, "a", "b"]),
    ("{a: 1, b: }", {"a": 1}),
    ("[]", []),
    ("{}", {}),
    ("is it so? yes", "is it so? yes"),
    ("[why?, 'x']", ["why?", "x"]),
    ("{a: is it? b}", {"a": "is it? b"}),
)


@pytest.mark.parametrize("parser", PARSERS)
@pytest.mark.parametrize(("text", "value"), READ, ids=[text for text, _ in READ])
def test_a_value_is_read(text: str, value: object, parser: type[Parser]) -> None:
    file = read(f"x-a: {text}\n", parser)
    assert file.faults == ()
    assert file.data == {"x-a": value}
    assert type(file.data["x-a"]) is type(value)


@pytest.mark.parametrize("parser", PARSERS)
@pytest.mark.parametrize("text", ["", "~", "null", "Null", "NULL", "# comment"])
def test_an_empty_value_is_not_given(text: str, parser: type[Parser]) -> None:
    file = read(f"x-a: {text}\nx-b:\n  c: {text}\n", parser)
    assert file.faults == ()
    assert file.data == {"x-b": {}}
    assert file.empty == (("x-a",), ("x-b", "c"))


SWITCHES = [w for word in ("y", "n", "yes", "no", "on", "off") for w in (word, word.capitalize(), word.upper())]


@pytest.mark.parametrize("word", [*SWITCHES, "True", "TRUE", "False", "FALSE"])
def test_every_word_that_yaml_1_1_may_take_for_a_boolean_is_refused(word: str) -> None:
    # PyYAML implements YAML 1.1; it leaves y and n alone, which the YAML 1.1 type repository lists
    # (https://yaml.org/type/bool.html).
    assert len(word) == 1 or isinstance(yaml.safe_load(word), bool)
    (fault,) = read(f"x-a: {word}\n").faults
    assert fault.problem == f"{word} is read as true or false by some and as a word by others"


@pytest.mark.parametrize("text", ["010", "0o17", "0x1F", "0b101", "1:30", "190:20:30", "1:30.5", "-017", "0_7", "00"])
def test_a_number_that_readers_disagree_about_is_refused(text: str) -> None:
    (fault,) = read(f"x-a: {text}\n").faults
    assert fault.problem == f"'{text}' is read as decimal by some, as octal, hexadecimal or base 60 by others"


@given(st.integers(-(10**15), 10**15) | st.floats(-1e12, 1e12))
@settings(max_examples=200)
def test_a_number_is_read_as_python_writes_it(number: float) -> None:
    assert read(f"x-a: {number!r}\n").data == {"x-a": number}


@pytest.mark.parametrize("parser", PARSERS)
def test_keys_are_text_whatever_they_look_like(parser: type[Parser]) -> None:
    file = read("x-a: {on: 1, 1: 2, null: 3, ~: 4, 2026-01-01: 5, 'quoted': 6, 1.5: 7, '': 8, 'a:b': 9}\n", parser)
    assert file.faults == ()
    assert file.data["x-a"] == {
        "on": 1, "1": 2, "null": 3, "~": 4, "2026-01-01": 5, "quoted": 6, "1.5": 7, "": 8, "a:b": 9,
    }  # fmt: skip


@pytest.mark.parametrize("parser", PARSERS)
def test_aliases_are_read_once_and_stand_for_the_same(parser: type[Parser]) -> None:
    file = read("x-a: &a {b: [1, 2]}\nx-c: *a\nx-d: [*a, *a]\nx-e: &e text\nx-f: *e\n", parser)
    assert file.faults == ()
    assert file.data["x-c"] == {"b": [1, 2]}
    assert file.data["x-d"] == [{"b": [1, 2]}] * 2
    assert file.data["x-f"] == "text"


@pytest.mark.parametrize("parser", PARSERS)
def test_what_aliases_stand_for_is_bounded(parser: type[Parser]) -> None:
    # 10^9 texts, and a single long text a thousand times: both would fill the memory of a naive reader.
    bombs = (
        "x-0: &x0 ["
        + "lol, " * 9
        + "lol]\n"
        + "".join(f"x-{n}: &x{n} [{', '.join([f'*x{n - 1}'] * 10)}]\n" for n in range(1, 9))
    )
    long = f"x-a: &a {'z' * 2000}\nx-b: [{', '.join(['*a'] * 2000)}]\n"
    for text in (bombs, long):
        with pytest.raises(DescriptionError, match=r"characters stand for more than 1000000; write the values out"):
            read(text, parser)
    harmless = f"x-a: &a {'z' * 2000}\nx-b: [{', '.join(['*a'] * 100)}]\n"
    assert read(harmless, parser).faults == ()


def nested(levels: int, form: str) -> str:
    """A description of a mapping in which so many levels of lists or mappings lie."""
    match form:
        case "brackets":
            return "x-a: " + "[" * levels + "]" * levels + "\n"
        case "braces":
            return "x-a: " + "{b: " * levels + "1" + "}" * levels + "\n"
        case _:
            return "".join(" " * level + "x-a:\n" for level in range(levels)) + " " * levels + "x-a: 1\n"


@pytest.mark.parametrize("parser", PARSERS)
@pytest.mark.parametrize("form", ["brackets", "braces", "indented"])
@pytest.mark.parametrize(("levels", "fits"), [(32, True), (33, False), (500, False), (2000, False), (100000, False)])
def test_depth_is_bounded(levels: int, fits: bool, form: str, parser: type[Parser]) -> None:
    text = nested(min(levels, 3000) if form == "indented" else levels, form)
    if fits:
        assert read(text, parser).faults == ()
        return
    with pytest.raises(DescriptionError) as caught:
        read(text, parser)
    column = {"brackets": 38, "braces": 134, "indented": 34}[form]
    line = 34 if form == "indented" else 1
    assert str(caught.value) == (
        f"f.yaml:{line}:{column}: nested more than 32 levels deep; a description needs far fewer"
    )


NOT_TEXT = (
    (b"\xff\xfer\x00", "f.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8"),
    (b"\xfe\xff\x00r", "f.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8"),
    ("rails:".encode("utf-16-le"), "f.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8"),
    ("rails:".encode("utf-16-be"), "f.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8"),
    ("x-a: é\n  µ".encode("latin-1"), "f.yaml:1:6: byte 0xE9 is not UTF-8; save the file as UTF-8"),
    (b"\xef\xbb\xbfx-a: b\n\n  \xff", "f.yaml:3:3: byte 0xFF is not UTF-8; save the file as UTF-8"),
    (b"x-a: \xed\xa0\x80", "f.yaml:1:6: byte 0xED is not UTF-8; save the file as UTF-8"),
    (b"x-a: a\x00b", "f.yaml:1:7: the character U+0000 is not allowed; remove it"),
    (b"x-a: 1\nx-b: \x1b[31m", "f.yaml:2:6: the character U+001B is not allowed; remove it"),
    ("x-a: 1\u0085x-b: 2".encode(), "f.yaml:1:7: the character U+0085 is not allowed; remove it"),
    ("x-a: 1\u2028x-b: 2".encode(), "f.yaml:1:7: the character U+2028 is not allowed; remove it"),
    ("x-a: \ufeff1".encode(), "f.yaml:1:6: the character U+FEFF is not allowed; remove it"),
    ("x-a: \uffff".encode(), "f.yaml:1:6: the character U+FFFF is not allowed; remove it"),
)


@pytest.mark.parametrize(("content", "said"), NOT_TEXT, ids=[str(content)[:30] for content, _ in NOT_TEXT])
def test_what_is_no_text_is_refused(content: bytes, said: str) -> None:
    with pytest.raises(DescriptionError) as caught:
        read_yaml("f.yaml", content)
    assert str(caught.value) == said


TABS = (
    ("x-a: 'b\tc'\n", None),
    ('x-a: "b\n  \tc"\n', None),
    ("x-a: |\n  b\n  \tc\n", None),
    ("x-a: 1 # b\tc\n", None),
    ("#\tb\nx-a: '#'\n", None),
    ("{\n\t'x-a':\t1\n}\n", None),
    ("x-a:\t1\n", "f.yaml:1:5"),
    ("x-a: 1\t# b\n", "f.yaml:1:7"),
    ("x-a:\n\tb: 1\n", "f.yaml:2:1"),
    ("x-a:\n  b: 1\n\t\nx-c: 1\n", "f.yaml:3:1"),
    ("x-a: |\t\n  b\n", "f.yaml:1:7"),
    ("x-a: b\tc\n", "f.yaml:1:7"),
    ("x-a: '#'\t\n", "f.yaml:1:9"),
)


@pytest.mark.parametrize("parser", PARSERS)
@pytest.mark.parametrize(("text", "place"), TABS, ids=[repr(text) for text, _ in TABS])
def test_a_tab_is_part_of_a_text_or_comment_or_a_fault(text: str, place: str | None, parser: type[Parser]) -> None:
    if place is None:
        assert read(text, parser).faults == ()
        return
    with pytest.raises(DescriptionError) as caught:
        read(text, parser)
    assert str(caught.value) == f"{place}: a tab; use spaces"


PIECES = st.sampled_from(
    [
        "a", "b: ", "c:", ": ", "- ", "-", "\n", "\n  ", "\n    ", "  ", " ", ", ", "{", "}", "[", "]", "'", '"', "# x",
        "&a ", "*a", "|\n", ">-\n", "? ", "?", "---\n", "...\n", "%", "@", "\\", "\\n", "\\x1b", "\t", "1.8 V", "yes",
        "010", "~", "<<: ", "é🙂", "\u00a0", "\r\n", "\r", "{min:1 V}", "x-", "0x1", "''", '""', "=", "!",
    ]
)  # fmt: skip
SEED = (
    "rails: &a\n  avdd:\n    nominal: 1.8 V\n    dip: {depth: 20 mV, at: [a, 'b c']}\n    note: |\n      text\n"
    "x-b: *a\n"
)


def tree(node: yaml.Node | None, seen: dict[int, int]) -> object:
    """A tree of nodes to compare; where something empty stands, the parsers differ, and nothing depends on it."""
    if node is None or id(node) in seen:
        return None if node is None else seen[id(node)]
    seen[id(node)] = len(seen)
    place = (node.start_mark.line, node.start_mark.column)
    if isinstance(node, yaml.ScalarNode):
        return node.tag, node.value, node.style or "", place if node.value or node.style else None
    if isinstance(node, yaml.MappingNode):
        return place, node.tag, [(tree(key, seen), tree(value, seen)) for key, value in node.value]
    return place, node.tag, [tree(item, seen) for item in node.value]


def outcome(text: str, parser: type[Parser]) -> object:
    try:
        return tree(node_tree("f.yaml", text.encode(), parser), {})
    except DescriptionError as error:
        assert str(error).isprintable()
        return str(error)


@given(st.lists(PIECES, max_size=12), st.integers(0, len(SEED)), st.integers(0, 3), st.booleans())
@settings(max_examples=400, deadline=None)
def test_both_parsers_give_the_same_tree_or_the_same_fault(pieces: list[str], at: int, lost: int, alone: bool) -> None:
    text = "".join(pieces) if alone else SEED[:at] + "".join(pieces[:3]) + SEED[at + lost :]
    # The pure parser takes a comma for a part of a tag, and refuses a comment that follows | at once.
    if not any(sign in text for sign in ("!", "|#", ">#", ">-#", "|-#")):
        assert outcome(text, PARSER) == outcome(text, PureParser)


def test_the_pure_parser_is_there_where_the_other_is_not() -> None:
    assert issubclass(PureParser, yaml.BaseLoader)
    assert PARSER is not PureParser or not yaml.__with_libyaml__
