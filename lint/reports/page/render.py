"""Makes the page: templates, one style and one script, both allowed by their digests and nothing else."""

from __future__ import annotations

import base64
import hashlib
from collections.abc import Iterable, Mapping, Sequence
from pathlib import Path
from typing import Final

from markupsafe import Markup

from tidegate.lint.reports.drawing.templates import environment, picture_css
from tidegate.lint.reports.order import CAUTION
from tidegate.lint.reports.page.contents import DescriptionPart, UnusablePart
from tidegate.lint.rule import Rule
from tidegate.lint.version import VERSION

_HERE: Final = Path(__file__).parent


class _Section:
    """A description on the page: what it shows, and the anchors that are its own."""

    def __init__(self, part: DescriptionPart | UnusablePart, prefix: str) -> None:
        self.part = part
        self.prefix = prefix
        self.usable = isinstance(part, DescriptionPart)
        self.links: Mapping[str, str] = {}
        if isinstance(part, DescriptionPart):
            self.links = {element.id: f"{prefix}{element.anchor}" for element in part.elements}


def page(parts: Sequence[DescriptionPart | UnusablePart], rules: Iterable[Rule]) -> str:
    """The whole page: one description, or several with an index before them."""
    style = f"{picture_css()}\n{(_HERE / 'page.css').read_text('utf-8')}"
    script = (_HERE / "page.js").read_text("utf-8")
    several = len(parts) > 1
    sections = [_Section(part, f"d{number}-" if several else "") for number, part in enumerate(parts, 1)]
    return environment().get_template("page.html.j2").render(
        sections=sections,
        several=several,
        titles={rule.id: rule.title for rule in rules},
        version=VERSION,
        caution=CAUTION,
        policy=_policy(style, script),
        style=Markup(style),
        script=Markup(script),
        heading=_heading(parts),
    )  # fmt: skip


def _heading(parts: Sequence[DescriptionPart | UnusablePart]) -> str:
    if len(parts) != 1:
        return f"{len(parts)} descriptions"
    part = parts[0]
    if isinstance(part, UnusablePart):
        return part.file
    return f"{part.name}, revision {part.revision}" if part.revision else part.name


def _policy(style: str, script: str) -> str:
    """The Content-Security-Policy: this style, this script, and nothing from anywhere."""
    return (
        f"default-src 'none'; style-src '{_source(style)}'; script-src '{_source(script)}'; "
        "base-uri 'none'; form-action 'none'"
    )


def _source(text: str) -> str:
    """The digest of an inline style or script as the policy names it (W3C Content Security Policy Level 3)."""
    return f"sha256-{base64.b64encode(hashlib.sha256(text.encode('utf-8')).digest()).decode('ascii')}"
