"""Bad descriptions give messages an engineer can act on, the same with both parsers; whole in `tests/bad_input/`."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.bad_input.beyond_limits import BEYOND_LIMITS
from tests.bad_input.corpus import BY_KIND
from tests.bad_input.form import RAIL, Bad
from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError, Fault
from tidegate.lint.description.yaml_nodes import PARSER, Parser, PureParser

KINDS = ("text", "syntax", "keys", "names", "quantities", "values", "contradictions", "together", "includes")
EVERY = [*(bad for kind in KINDS for bad in BY_KIND[kind]), *BEYOND_LIMITS]
BAD = [bad for bad in EVERY if isinstance(bad.files, str | bytes) and bad.status == 2]
PARSERS = tuple(dict.fromkeys((PARSER, PureParser)))


def faults_of(folder: Path, text: str | bytes, parser: type[Parser] = PARSER) -> tuple[Fault, ...]:
    """The faults of a description beside which a file of process data lies."""
    (folder / "process.yaml").write_text("process: {}\n", "utf-8")
    file = folder / "main.yaml"
    file.write_bytes(text.encode() if isinstance(text, str) else text)
    with pytest.raises(DescriptionError) as caught:
        load(file, shown="main.yaml", parser=parser)
    assert str(caught.value) == "\n".join(map(str, caught.value.faults))
    return caught.value.faults


@pytest.mark.parametrize("bad", BAD, ids=[bad.what for bad in BAD])
def test_the_slower_parser_leads_to_the_same_message(bad: Bad, tmp_path: Path) -> None:
    assert isinstance(bad.files, str | bytes)
    assert "\n".join(map(str, faults_of(tmp_path, bad.files, PureParser))) == bad.said


@pytest.mark.parametrize("bad", BAD, ids=[bad.what for bad in BAD])
def test_a_message_says_where_what_and_what_would_be_right(bad: Bad, tmp_path: Path) -> None:
    assert isinstance(bad.files, str | bytes)
    faults = faults_of(tmp_path, bad.files)
    assert list(faults) == sorted(faults)
    for fault in faults:
        assert fault.place.file == "main.yaml"
        assert fault.problem
        assert fault.advice
        message = str(fault)
        assert message.isprintable()
        assert len(message) < 500
        assert message == f"{fault.place}: {fault.path}{': ' if fault.path else ''}{fault.problem}; {fault.advice}"


def test_a_wrong_name_is_compared_once_and_not_without_end(tmp_path: Path) -> None:
    rails = "".join(f"  rail_{number}: {{nominal: 1 V}}\n" for number in range(200))
    domains = "".join(f"  domain_{number}: {{rail: rial_{number}}}\n" for number in range(60))
    faults = faults_of(tmp_path, f"rails:\n{rails}domains:\n{domains}")
    assert len(faults) == 60
    assert faults[0].advice == "did you mean rail_0 or rail_90 or rail_80?"
    assert {fault.advice for fault in faults[50:]} == {"correct the name"}


def test_text_of_the_file_cannot_steer_the_terminal(tmp_path: Path) -> None:
    nasty = "\\e]0;owned\\a\\x9b31m\\u202e\\r"
    text = (
        f'"{nasty}": 1\nrails:\n  avdd:\n    "{nasty}": 1 V\n    damage: "1 {nasty}"\n    after: "{nasty}"\n'
        f'    delivered: {{min: "{nasty}"}}\n  "{nasty}": {{nominal: 1 V}}\ninclude: ["{nasty}"]\n'
        f'domains:\n  aon: {{rail: "{nasty}", kind: "{nasty}"}}\nprocess: {{kit: "{nasty}"}}\n'
    )
    for fault in faults_of(tmp_path, text):
        assert str(fault).isprintable()


@pytest.mark.parametrize("sign", ["\u202e", "\u200b", "\u2066", "\u00ad", "\U000e0041"])
def test_invisible_signs_are_made_visible(sign: str, tmp_path: Path) -> None:
    (fault,) = faults_of(tmp_path, f"{RAIL}    after: avdd{sign}x\n")
    assert sign not in str(fault)
    assert repr(sign)[1:-1] in str(fault)


def test_the_name_of_the_file_is_made_printable(tmp_path: Path) -> None:
    file = tmp_path / "a\x1b[31mb.yaml"
    file.write_text("rails: 5\n", "utf-8")
    with pytest.raises(DescriptionError) as caught:
        load(file, shown=file.name)
    assert str(caught.value).startswith("a\\x1b[31mb.yaml:1:8: rails: a mapping of keys is due (found 5)")
