"""Writing values into a description: the value changes, and not one other byte."""

from __future__ import annotations

import os
import stat
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tidegate.lint.description.place import DescriptionError
from tidegate.lint.description.rewrite import replace_file, rewritten

FALLING = ("comparators", "uv", "trip", "falling")
RISING = ("comparators", "uv", "trip", "rising")

# Layouts in which a value may stand; OLD and NEW are put in place of @.
LAYOUTS = {
    "flow": "comparators: {uv: {trip: {rising: 1.662 V, falling: @}}}\n",
    "block": "comparators:\n  uv:\n    trip:\n      falling: @\n      rising: 1.662 V\n",
    "comment behind": "comparators:\n  uv:\n    trip:\n      falling: @   # chosen in review\n",
    "comments before": "# a\n\n---\n# b\ncomparators:\n\n  uv: # c\n    trip:\n\n      falling: @\n",
    "double quotes": 'comparators: {uv: {trip: {falling: "@"}}}\n',
    "single quotes": "comparators: {uv: {trip: {falling: '@'}}}\n",
    "json": '{"comparators": {"uv": {"trip": {"falling": "@"}}}}',
    "json with tabs": '{\n\t"comparators": {\n\t\t"uv": {"trip": {"falling":\t"@"}}\n\t}\n}\n',
    "windows line ends": "comparators:\r\n  uv:\r\n    trip:\r\n      falling: @\r\n      rising: 1.662 V\r\n",
    "byte order mark": "\ufeffcomparators: {uv: {trip: {falling: @}}}\n",
    "wide characters before": "# \U0001f30a\nsubsystem: Höhe\ncomparators: {uv: {note: ü, trip: {falling: @}}}\n",
    "no line end": "comparators: {uv: {trip: {falling: @}}}",
    "odd spaces": "comparators:   {  uv :   {trip:{falling:      @      }}}\n",
    "the same text elsewhere": "subsystem: 1.612 V\ncomparators: {uv: {note: 1.612 V, trip: {falling: @}}} # 1.612 V\n",
}


@pytest.mark.parametrize("layout", LAYOUTS.values(), ids=LAYOUTS)
def test_only_the_value_changes(layout: str) -> None:
    old, new = (layout.replace("@", value).encode() for value in ("1.612 V", "1.6345 V"))
    assert rewritten("chip.yaml", old, {FALLING: "1.6345 V"}) == new


def test_two_values_at_once() -> None:
    old = b"comparators: {uv: {trip: {rising: 1.7 V, falling: 1.612 V}}} # end\n"
    new = b"comparators: {uv: {trip: {rising: 1.684 V, falling: 1.634 V}}} # end\n"
    assert rewritten("chip.yaml", old, {FALLING: "1.634 V", RISING: "1.684 V"}) == new


@pytest.mark.parametrize(
    ("old", "new"),
    [
        (b"      falling:\n", b"      falling: 1.634 V\n"),
        (b"      falling:        # a comment\n", b"      falling: 1.634 V        # a comment\n"),
        (b"      falling: ~\n", b"      falling: 1.634 V\n"),
        (b"      falling:\r\n", b"      falling: 1.634 V\r\n"),
    ],
    ids=["nothing", "comment", "tilde", "windows"],
)
def test_a_key_without_a_value_gets_one(old: bytes, new: bytes) -> None:
    before = b"comparators:\n  uv:\n    trip:\n"
    assert rewritten("chip.yaml", before + old, {FALLING: "1.634 V"}) == before + new


@settings(max_examples=40, deadline=None)
@given(
    before=st.text("abcäß€\U0001f30a #'\"-", max_size=30),
    behind=st.text("abcäß€ #'", max_size=30),
    end=st.sampled_from(["\n", "\r\n"]),
    bom=st.booleans(),
)
def test_whatever_stands_in_comments_stays(before: str, behind: str, end: str, bom: bool) -> None:
    def text(value: str) -> bytes:
        lines = (f"# {before}", "comparators:", "  uv:", f"    trip: {{falling: {value}}}  # {behind}", "")
        return (b"\xef\xbb\xbf" if bom else b"") + end.join(lines).encode()

    assert rewritten("chip.yaml", text("1.612 V"), {FALLING: "1.634 V"}) == text("1.634 V")


REFUSED = {
    "alias": (
        "comparators: {ov: {trip: {falling: &level 1.9 V}}, uv: {trip: {falling: *level}}}\n",
        "chip.yaml:1:36: comparators.uv.trip.falling: an alias (*) makes this value stand in several places; "
        "write 1.634 V there yourself",
    ),
    "alias above": (
        "comparators: {ov: &same {trip: {falling: 1.9 V}}, uv: *same}\n",
        "chip.yaml:1:42: comparators.uv.trip.falling: an alias (*) makes this value stand in several places; "
        "write 1.634 V there yourself",
    ),
    "anchor": (
        "comparators: {uv: {trip: {falling: &level 1.612 V}}}\n",
        "chip.yaml:1:36: comparators.uv.trip.falling: not written as plain text on one line; "
        "write 1.634 V there yourself",
    ),
    "range": (
        "comparators: {uv: {trip: {falling: {min: 1.6 V, max: 1.62 V}}}}\n",
        "chip.yaml:1:36: comparators.uv.trip.falling: no single value; write 1.634 V there yourself",
    ),
    "block of text": (
        "comparators:\n  uv:\n    trip:\n      falling: |\n        1.612 V\n",
        "chip.yaml:4:16: comparators.uv.trip.falling: not written as plain text on one line; "
        "write 1.634 V there yourself",
    ),
    "two lines": (
        "comparators:\n  uv:\n    trip:\n      falling: 1.612\n        V\n",
        "chip.yaml:4:16: comparators.uv.trip.falling: not written as plain text on one line; "
        "write 1.634 V there yourself",
    ),
    "escapes": (
        'comparators: {uv: {trip: {falling: "1.612\\x20V"}}}\n',
        "chip.yaml:1:36: comparators.uv.trip.falling: not written as plain text on one line; "
        "write 1.634 V there yourself",
    ),
    "no key": (
        "comparators: {uv: {role: under_voltage}}\n",
        "chip.yaml:1:19: comparators.uv.trip.falling: stands nowhere in the file; write 1.634 V there yourself",
    ),
    "empty file": (
        "",
        "chip.yaml: comparators.uv.trip.falling: stands nowhere in the file; write 1.634 V there yourself",
    ),
}


@pytest.mark.parametrize(("text", "message"), REFUSED.values(), ids=REFUSED)
def test_refused(text: str, message: str) -> None:
    with pytest.raises(DescriptionError) as caught:
        rewritten("chip.yaml", text.encode(), {FALLING: "1.634 V"})
    assert str(caught.value) == message


def test_every_refusal_is_told_at_once() -> None:
    with pytest.raises(DescriptionError) as caught:
        rewritten("chip.yaml", b"comparators: {uv: {trip: {}}}\n", {FALLING: "1.6 V", RISING: "1.7 V"})
    assert len(caught.value.faults) == 2


def test_a_file_is_replaced_whole_and_keeps_its_rights(tmp_path: Path) -> None:
    file = tmp_path / "chip.yaml"
    file.write_bytes(b"old")
    file.chmod(0o640)
    replace_file(file, b"new")
    assert file.read_bytes() == b"new"
    assert stat.S_IMODE(file.stat().st_mode) == 0o640
    assert list(tmp_path.iterdir()) == [file]


def test_a_link_stays_a_link(tmp_path: Path) -> None:
    (tmp_path / "inner").mkdir()
    file, link = tmp_path / "inner" / "chip.yaml", tmp_path / "chip.yaml"
    file.write_bytes(b"old")
    link.symlink_to(file)
    replace_file(link, b"new")
    assert link.is_symlink()
    assert file.read_bytes() == b"new"


def test_where_the_file_cannot_be_replaced_it_stays_as_it_was(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    file = tmp_path / "chip.yaml"
    file.write_bytes(b"old")

    def full(_: int) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(OSError, match="No space left"):
        replace_file(file, b"new")
    assert file.read_bytes() == b"old"
    assert list(tmp_path.iterdir()) == [file]
