"""Which faces a page is laid out with: forced by a style sheet, and asked of the browser itself.

A layout holds for the faces it was seen with and for no others. The two families are those of Debian's
``fonts-dejavu-core`` (wide; what a bare browser brings with it) and ``fonts-liberation`` (the widths of Arial, Times
New Roman and Courier New).
"""

from __future__ import annotations

from typing import Any, Final, NamedTuple

import pytest

PROBE: Final = "data:text/html,<p>reset</p>"
NO_FONT: Final = "the browser finds no font at all, so no layout can be tested: install fonts-dejavu-core"


class Family(NamedTuple):
    """The faces for text, headings and code, and the package that brings them."""

    text: str
    head: str
    mono: str
    package: str


DEJAVU: Final = Family("DejaVu Sans", "DejaVu Serif", "DejaVu Sans Mono", "fonts-dejavu-core")
LIBERATION: Final = Family("Liberation Sans", "Liberation Serif", "Liberation Mono", "fonts-liberation")
FAMILIES: Final = {"dejavu": DEJAVU, "liberation": LIBERATION}

FORCE: Final = """
const [text, head, mono] = arguments;
const sheet = new CSSStyleSheet();
sheet.replaceSync(`
  :root { --text: "${text}" !important; --head: "${head}" !important; --mono: "${mono}" !important; }
  svg text { font-family: "${text}" !important; }`);
document.adoptedStyleSheets = [sheet];
"""


def drawn_with(browser: Any, selector: str) -> set[str]:
    """The families that the glyphs of an element are really drawn with, as the browser tells."""
    browser.execute_cdp_cmd("DOM.enable", {})
    browser.execute_cdp_cmd("CSS.enable", {})
    root = browser.execute_cdp_cmd("DOM.getDocument", {})["root"]["nodeId"]
    node = browser.execute_cdp_cmd("DOM.querySelector", {"nodeId": root, "selector": selector})["nodeId"]
    fonts = browser.execute_cdp_cmd("CSS.getPlatformFontsForNode", {"nodeId": node})["fonts"]
    return {font["familyName"] for font in fonts if font["glyphCount"] > 0}


def demand_a_font(browser: Any) -> None:
    """Fail, in words, where text has nothing to be drawn with: without a font the browser's tab crashes."""
    from selenium.common.exceptions import WebDriverException

    try:
        browser.get(PROBE)
        found = drawn_with(browser, "p")
    except WebDriverException as error:
        if "crashed" not in str(error):
            raise
        found = set()
    if not found:
        pytest.fail(NO_FONT, pytrace=False)


def force(browser: Any, family: Family) -> None:
    """Lay the page out with a family; skipped, and said so, where it is not installed."""
    browser.execute_script(FORCE, family.text, family.head, family.mono)
    for selector, face in (("main p.revision", family.text), ("h1", family.head), ("p.file", family.mono)):
        found = drawn_with(browser, selector)
        if found != {face}:
            pytest.skip(f"{face} is not installed (package {family.package}); the browser took {sorted(found)}")
