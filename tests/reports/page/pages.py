"""What the tests of the page share: descriptions, sound and broken and hostile, and the pages made of them."""

from __future__ import annotations

import datetime
import json
from functools import cache
from pathlib import Path
from typing import Final

from tests.rules.sound import patched
from tidegate.lint.batch import Judged
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.reports.page.contents import DescriptionPart
from tidegate.lint.reports.page.gather import gather
from tidegate.lint.reports.page.render import page
from tidegate.lint.settings import Settings
from tidegate.rules.catalogue import FAMILIES

TODAY: Final = datetime.date(2026, 1, 1)
BROKEN: Final = """
comparators: {uv: {trip: {falling: 1.669 V}, hysteresis: {amount: {min: 6 mV, typ: 8 mV, max: 10 mV}}}}
output_stages: {rst_out: {hold: none}}
loads: {adc: {ready: null}}
"""
"""Hysteresis too small, nothing that holds a net, and a fact that is missing."""

ATTACKS: Final = (
    "<script>window.hostile = 1</script>",
    "<img src=x onerror='window.hostile = 2'>",
    "\"><svg onload=window.hostile=3><a href='javascript:window.hostile=4'>",
    "</style></title></textarea><style>body{display:none}</style>",
    "{{ 7 * 7 }}{% raw %}",
    "\u202egnirts desrever\u202c \u200b",
    "x" * 9_000,
    "]]>--><!--&lt;&#x3c;",
)


def hostile() -> str:
    """A patch with hostile text wherever a description takes free text."""
    text = " ".join(ATTACKS)
    return json.dumps(
        {
            "subsystem": text,
            "revision": text,
            "note": text,
            "rails": {"avdd": {"note": text}},
            "bypasses": {"skip_resets": {"note": text}},
            "comparators": {"uv": {"note": text, "delay": {"min": "1 us", "max": "2 us", "basis": {"source": text}}}},
            "scenarios": {"plug_in": {"note": text}},
            "waivers": [
                {
                    "rule": "bypass/over_voltage_caution", "element": "skip_resets", "why": text, "agreed_by": text,
                    "until": "2031-12-31",
                },
                {"rule": text, "element": text, "why": text, "agreed_by": text, "until": "2031-12-31"},
            ],
        }
    )  # fmt: skip


@cache
def part_of(patch: str, file: str = "patched.yaml") -> DescriptionPart:
    """What the page shows of the sound example with a patch laid over it."""
    judged = review(patched(patch), Catalogue(FAMILIES), today=TODAY)
    found = gather(Judged(file, Settings(), judged))
    assert isinstance(found, DescriptionPart)
    return found


@cache
def page_of(*patches: str) -> str:
    """The page of one description, or of several."""
    return page([part_of(patch) for patch in patches], [rule for family in FAMILIES for rule in family])


def written(folder: Path, name: str, *patches: str) -> str:
    """The address of a page written to a folder."""
    path = folder / f"{name}.html"
    path.write_text(page_of(*patches), "utf-8")
    return path.as_uri()
