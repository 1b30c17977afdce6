"""Long texts that cannot be parsed: the entry with the fault is read again alone, and the message stays the same."""

from __future__ import annotations

import pytest

from tidegate.lint.description.place import DescriptionError
from tidegate.lint.description.syntax_faults import parts_alone
from tidegate.lint.description.yaml_nodes import PARSER, node_tree
from tidegate.lint.description.yaml_text import read_yaml

LINES = 30
RAILS = "".join(f"  rail_{number}: {{nominal: 1.8 V}}\n" for number in range(LINES))
LAST = LINES + 2  # the line of the section after the rails

ENDS = (
    (
        "domains:\n  aon: {rail: rail_0\n",
        f"f:{LAST + 2}:1: a comma or }} is missing here, for the {{ in line {LAST + 1}",
    ),
    (
        "domains:\n  aon: [rail_0\nloads:\n",
        f"f:{LAST + 2}:6: a comma or ] is missing here, for the [ in line {LAST + 1}",
    ),
    ("domains:\n  aon: 'rail_0\nloads:\n", f"f:{LAST + 1}:8: a quoted text without its end"),
    ("domains:\n  aon: @x\nloads:\n", f"f:{LAST + 1}:8: a text cannot begin with '@'"),
    ("domains:\n  aon: *x\nloads:\n", f"f:{LAST + 1}:8: an alias (*) of an anchor (&) that is not there"),
    ("domains:\n  aon\n  bon: 1\n", f"f:{LAST + 1}:3: a line without a key and a colon (found 'aon')"),
    ("---\ndomains: {}\n", f"f:{LAST}:1: a second document begins here"),
    ("domains: {}\n...\n]\n", f"f:{LAST + 2}:1: text after the end of the description"),
    ("  rail_x: 1\n rail_y: 2\n", f"f:{LAST + 1}:2: the indentation does not fit the lines above"),
)


@pytest.fixture(autouse=True)
def shorter_texts_are_long(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("tidegate.lint.description.syntax_faults.MOST_LINES_AT_ONCE", LINES)


@pytest.mark.parametrize("anchor", [False, True], ids=["no anchor", "an anchor above"])
@pytest.mark.parametrize(("end", "said"), ENDS, ids=[end for end, _ in ENDS])
def test_a_fault_at_the_end_of_a_long_text_keeps_its_message(end: str, said: str, anchor: bool) -> None:
    rails = RAILS.replace("{nominal", "&first {nominal", 1) if anchor else RAILS
    with pytest.raises(DescriptionError) as caught:
        node_tree("f", f"rails:\n{rails}{end}".encode())
    assert str(caught.value).startswith(said + "; ")


def test_an_alias_of_a_section_above_is_no_fault_of_the_section_alone() -> None:
    rails = RAILS.replace("{nominal", "&first {nominal", 1)
    text = f"rails:\n{rails}domains:\n  aon: *first\n  bon: @x\n"
    with pytest.raises(DescriptionError, match=f"f:{LAST + 2}:8: a text cannot begin with '@'"):
        node_tree("f", text.encode())


def test_lines_before_the_entry_and_before_the_section_are_left_empty() -> None:
    text = f"rails:\n{RAILS}domains:\n  aon: 1\n  bon: @x\n"
    above = "\n" * (LAST - 1) + "domains:\n"
    assert list(parts_alone(text, LAST + 1)) == [
        (f"{above}\n  bon: @x\n", False), (f"{above}  aon: 1\n  bon: @x\n", True)
    ]  # fmt: skip
    assert list(parts_alone(text, None)) == []
    assert list(parts_alone("rails:\n", 0)) == []


@pytest.mark.parametrize(("end", "said"), ENDS, ids=[end for end, _ in ENDS])
def test_of_a_very_long_text_the_fast_parser_may_have_the_last_word(
    end: str, said: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    # No part leads to the same line, and the whole text is too long for the slow parser.
    monkeypatch.setattr("tidegate.lint.description.syntax_faults.parts_alone", lambda text, line: ())
    monkeypatch.setattr("tidegate.lint.description.yaml_nodes._LONG", 10)
    with pytest.raises(DescriptionError) as caught:
        node_tree("f", f"rails:\n{RAILS}{end}".encode())
    place, _, _ = said.partition(": ")
    assert str(caught.value).startswith(f"{place}: ")
    assert "cannot be read as YAML" not in str(caught.value)


@pytest.mark.parametrize("text", ["!x {a: 1}\n", "x-a: !x {a: 1}\n", "x-a: [!x b]\n", "!x a: 1\n", "x-a: !!str 5\n"])
def test_a_tag_is_refused_wherever_it_stands(text: str) -> None:
    (fault,) = read_yaml("f", text.encode(), PARSER).faults
    assert fault.problem in ("a tag (found '!x')", "a tag (found '!!str')", "a key that is no plain text")
