"""The page in a browser (headless Chromium): no error, no request, filter, sort, links, keyboard, print, hostile text.

Needs chromium and chromium-driver; skipped where they are not there. What depends on the widths of letters is tested
with two families of fonts, each skipped by name where it is not installed; with no font at all everything fails.
"""

from __future__ import annotations

import base64
import importlib.resources
import shutil
import tempfile
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from tests.reports.page.fonts import FAMILIES, demand_a_font, force
from tests.reports.page.pages import ATTACKS, BROKEN, hostile, part_of, written

webdriver = pytest.importorskip("selenium.webdriver", reason="selenium is not installed")
CHROMIUM = shutil.which("chromium") or shutil.which("chromium-browser")
DRIVER = shutil.which("chromedriver")
FLAGS = (
    "--headless=new", "--no-sandbox", "--disable-gpu", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync", "--disable-quic", "--disable-dev-shm-usage", "--hide-scrollbars",
)  # fmt: skip

if CHROMIUM is None or DRIVER is None:
    pytest.skip("chromium and chromium-driver are not installed", allow_module_level=True)

pytestmark = pytest.mark.xdist_group("browser")


class Pages:
    """One browser, and the addresses of the pages."""

    def __init__(self, browser: Any, folder: Path) -> None:
        self.browser = browser
        self.sound = written(folder, "sound", "")
        self.broken = written(folder, "broken", BROKEN)
        self.hostile = written(folder, "hostile", hostile())
        self.several = written(folder, "several", "", BROKEN)

    def open(self, address: str, *, width: int = 1280, fonts: str = "") -> None:
        """Open a page at a width, with a family of fonts; what the browser complained about before is forgotten."""
        self.command("Emulation.setDeviceMetricsOverride", width=width, height=900, deviceScaleFactor=1, mobile=False)
        self.browser.get_log("browser")
        self.browser.get("about:blank")
        self.browser.get(address)
        if fonts:
            force(self.browser, FAMILIES[fonts])

    def command(self, name: str, **arguments: Any) -> Any:
        return self.browser.execute_cdp_cmd(name, arguments)

    def run(self, script: str, *arguments: Any) -> Any:
        return self.browser.execute_script(script, *arguments)


@pytest.fixture(scope="module")
def pages(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Pages]:
    from selenium.webdriver.chrome.service import Service

    options = webdriver.ChromeOptions()
    options.binary_location = CHROMIUM
    options.set_capability("goog:loggingPrefs", {"browser": "ALL", "performance": "ALL"})
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as profile:
        for flag in (*FLAGS, f"--user-data-dir={profile}"):
            options.add_argument(flag)
        browser = webdriver.Chrome(options=options, service=Service(DRIVER))
        try:
            demand_a_font(browser)
            yield Pages(browser, tmp_path_factory.mktemp("pages"))
        finally:
            browser.quit()


@pytest.mark.parametrize("name", ["sound", "broken", "hostile", "several"])
def test_no_error_and_no_request(pages: Pages, name: str) -> None:
    pages.browser.get_log("performance")
    address = getattr(pages, name)
    pages.open(address)
    assert pages.browser.get_log("browser") == []
    messages = [entry["message"] for entry in pages.browser.get_log("performance")]
    asked = [message for message in messages if '"Network.requestWillBeSent"' in message]
    assert all(address in message or "about:blank" in message for message in asked)
    assert pages.run("return performance.getEntriesByType('resource').length") == 0


with_each_family = pytest.mark.parametrize("fonts", sorted(FAMILIES))
at_each_width = pytest.mark.parametrize("width", [1280, 1101, 800, 400])
UNFOLD = "document.querySelectorAll('details').forEach(d => { d.open = true; });"


@with_each_family
@at_each_width
def test_nothing_is_wider_than_the_window(pages: Pages, width: int, fonts: str) -> None:
    for address in (pages.broken, pages.hostile, pages.several):
        pages.open(address, width=width, fonts=fonts)
        assert pages.run("return document.documentElement.scrollWidth") <= width
        pages.run(UNFOLD)
        assert pages.run("return document.documentElement.scrollWidth") <= width


SIDEWAYS = """
return Array.from(document.querySelectorAll('.scroll')).filter(n => n.firstElementChild.tagName === 'TABLE')
  .filter(n => n.scrollWidth > n.clientWidth).map(n => n.getAttribute('aria-label'))
"""


@with_each_family
@at_each_width
def test_tables_are_whole(pages: Pages, width: int, fonts: str) -> None:
    """From 800 px on no table is cut off; on a telephone the tables of five columns and more move sideways."""
    allowed = {"Table of margins", "Table to sign", "Index of descriptions"} if width == 400 else set()
    for address in (pages.several, pages.broken):
        pages.open(address, width=width, fonts=fonts)
        assert set(pages.run(SIDEWAYS)) <= allowed


BROKEN_WORDS = """
const found = [], range = document.createRange();
const texts = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
while (texts.nextNode()) {
  const node = texts.currentNode;
  if (node.parentElement.closest('svg, script, .code, .hide, option')) continue;
  for (const word of node.data.matchAll(/[^\\s\\/-]+/g)) {
    range.setStart(node, word.index);
    range.setEnd(node, word.index + word[0].length);
    const lines = new Set(Array.from(range.getClientRects()).map(r => Math.round(r.top)));
    if (lines.size > 1) found.push(word[0]);
  }
}
return found;
"""


@with_each_family
@at_each_width
def test_no_word_is_broken(pages: Pages, width: int, fonts: str) -> None:
    """Words break at hyphens and slashes alone. Names set as code may be longer than a line."""
    for address in (pages.several, pages.broken):
        pages.open(address, width=width, fonts=fonts)
        pages.run(UNFOLD)
        assert pages.run(BROKEN_WORDS) == []


def test_a_broken_word_is_seen(pages: Pages) -> None:
    """The same question, asked of a page with a word broken on purpose."""
    pages.open(pages.sound)
    pages.run("const h = document.querySelector('.tally tbody th'); h.textContent = 'w'.repeat(900)")
    pages.run("document.querySelector('.tally').style.cssText = 'table-layout: fixed; overflow-wrap: anywhere'")
    pages.run("document.querySelector('.tally tbody th').style.overflowWrap = 'anywhere'")
    assert pages.run(BROKEN_WORDS) == ["w" * 900]


SHOWN = "return Array.from(document.querySelectorAll('table.ledger tbody tr')).filter(r => !r.hidden)"


def test_filter(pages: Pages) -> None:
    pages.open(pages.broken)
    every = pages.run(f"{SHOWN}.length")
    assert every == len(part_of(BROKEN).ledger)
    pages.browser.find_element("css selector", ".find").send_keys("uv_core hysteresis")
    found = pages.run(f"{SHOWN}.map(r => r.textContent)")
    assert 0 < len(found) < every
    assert all("uv_core" in text and "hysteresis" in text for text in found)
    assert pages.run("return document.querySelector('.shown').textContent") == f"{len(found)} of {every} margins"
    pages.run("const f = document.querySelector('.find'); f.value = ''; f.dispatchEvent(new Event('input'))")
    pages.run("const k = document.querySelector('.kinds'); k.value = 'fail'; k.dispatchEvent(new Event('input'))")
    assert set(pages.run(f"{SHOWN}.map(r => r.dataset.kind)")) == {"fail"}


def test_sort(pages: Pages) -> None:
    pages.open(pages.broken)
    slacks = f"{SHOWN}.map(r => Number(r.dataset.slack))"
    before = pages.run(slacks)
    assert before == sorted(before)
    head = pages.browser.find_elements("css selector", ".ledger thead button")[4]
    head.click()
    head.click()
    assert pages.run(slacks) == sorted(before, reverse=True)
    assert pages.run("return document.querySelector('[aria-sort]').getAttribute('aria-sort')") == "descending"
    pages.browser.find_elements("css selector", ".ledger thead button")[0].click()
    names = pages.run(f"{SHOWN}.map(r => r.cells[0].textContent)")
    assert names[0] <= names[-1]
    assert sorted(pages.run(slacks)) == before


def test_permalink_leads_to_the_finding_and_opens_what_hides_it(pages: Pages) -> None:
    part = part_of(BROKEN)
    finding = next(finding for element in part.elements for finding in element.findings if finding.kind == "fail")
    kept = next(kept for element in part.elements for kept in element.kept)
    for anchor in (finding.anchor, kept.anchor):
        pages.open(f"{pages.broken}#{anchor}")
        top, bottom, height = pages.run(
            "const b = document.getElementById(arguments[0]).getBoundingClientRect();"
            "return [b.top, b.bottom, innerHeight]",
            anchor,
        )
        assert 0 <= top < height
        assert bottom > top  # a closed part has no extent


def test_pointing_at_an_element_lights_it_up_everywhere(pages: Pages) -> None:
    pages.open(pages.broken)
    pages.run(
        "document.querySelector('svg.graph [data-element=uv] rect').dispatchEvent("
        "new PointerEvent('pointerover', {bubbles: true}))"
    )
    lit = "return Array.from(document.querySelectorAll('.picked')).map(n => n.dataset.element)"
    assert set(pages.run(lit)) == {"uv"}
    for where in ("svg.graph", "svg.ladder", "svg.timeline", "table.ledger", "#findings"):
        assert pages.run("return document.querySelectorAll(arguments[0] + ' .picked').length", where) > 0, where
    pages.run(
        "document.querySelector('svg.graph [data-element=por] rect').dispatchEvent("
        "new PointerEvent('pointerover', {bubbles: true}))"
    )
    assert set(pages.run(lit)) == {"por"}


def test_keyboard_reaches_everything_in_order(pages: Pages) -> None:
    from selenium.webdriver.common.action_chains import ActionChains
    from selenium.webdriver.common.keys import Keys

    pages.open(pages.sound)
    ActionChains(pages.browser).send_keys(Keys.TAB).perform()
    assert pages.run("return document.activeElement.className") == "skip"
    assert pages.run("return document.activeElement.getBoundingClientRect().left") >= 0
    ActionChains(pages.browser).send_keys(Keys.ENTER, Keys.TAB).perform()
    assert pages.run("return document.activeElement.closest('.hero') !== null")
    pages.run("document.querySelector('.ledger thead button').focus()")
    ActionChains(pages.browser).send_keys(Keys.ENTER).perform()
    assert pages.run("return document.querySelectorAll('[aria-sort]').length") == 1
    pages.run("document.querySelector('summary').focus()")
    ActionChains(pages.browser).send_keys(Keys.ENTER).perform()
    assert pages.run("return document.querySelector('details').open")
    assert pages.run("return Array.from(document.querySelectorAll('[tabindex]')).every(n => n.tabIndex <= 0)")


def test_everything_can_be_read_with_scripting_off(pages: Pages) -> None:
    pages.command("Emulation.setScriptExecutionDisabled", value=True)
    try:
        pages.open(pages.broken)
        text = pages.browser.find_element("tag name", "main").text
        assert not pages.browser.find_element("css selector", ".controls").is_displayed()
        for word in (
            "NOT KEPT",
            "Worst margin",
            "hysteresis/covers_disturbance",
            "Margin ledger",
            "Sign-off",
            "sign-off",
        ):
            assert word.lower() in text.lower()
        rows = pages.browser.find_elements("css selector", "table.ledger tbody tr")
        assert len(rows) == len(part_of(BROKEN).ledger)
        assert rows[-1].is_displayed()
    finally:
        pages.command("Emulation.setScriptExecutionDisabled", value=False)


def test_print(pages: Pages) -> None:
    pages.open(pages.broken)
    data = base64.b64decode(
        pages.command("Page.printToPDF", printBackground=True, paperWidth=8.27, paperHeight=11.69)["data"]
    )
    assert data.startswith(b"%PDF-")
    assert len(data) < 5_000_000
    count = data.count(b"/Type /Page\n") or data.count(b"/Type /Page ")
    assert 5 < count < 40
    pages.command("Emulation.setEmulatedMedia", media="print")
    try:
        hidden = (
            "return ['nav', '.controls'].every(s => getComputedStyle(document.querySelector(s)).display === 'none')"
        )
        assert pages.run(hidden)
        assert pages.run("return document.querySelector('.signoff').getBoundingClientRect().height") > 0
    finally:
        pages.command("Emulation.setEmulatedMedia", media="")


def test_hostile_text_is_shown_and_never_run(pages: Pages) -> None:
    pages.open(pages.hostile)
    assert pages.run("return window.hostile") is None
    assert pages.run("return getComputedStyle(document.body).display") == "block"
    shown = pages.run("return document.querySelector('h1').textContent")
    for attack in ATTACKS[:5]:
        assert attack in shown
    assert pages.run("return document.scripts.length") == 1


@pytest.mark.parametrize(("scheme", "name"), [("light", "several"), ("dark", "broken")])
def test_accessibility(pages: Pages, scheme: str, name: str) -> None:
    """The axe-core rules find nothing at all: contrast, names, roles, order of headings, regions."""
    try:
        source = importlib.resources.files("axe_core_python").joinpath("axe.min.js").read_text("utf-8")
    except (ModuleNotFoundError, FileNotFoundError):
        pytest.skip("axe-core-python is not installed")
    features = [{"name": "prefers-color-scheme", "value": scheme}]
    pages.command("Emulation.setEmulatedMedia", features=features)
    try:
        pages.open(getattr(pages, name))
        pages.run(source)
        found = pages.browser.execute_async_script(
            "const done = arguments[0]; axe.run(document, {resultTypes: ['violations']}).then("
            "r => done(r.violations.map(v => [v.impact, v.id, v.nodes.slice(0, 3).map(n => n.html.slice(0, 160))])))"
        )
    finally:
        pages.command("Emulation.setEmulatedMedia", features=[])
    assert found == []
