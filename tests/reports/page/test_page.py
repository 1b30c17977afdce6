"""The page as text: content and order, digests, nothing from elsewhere, nothing but text from a description."""

from __future__ import annotations

import base64
import hashlib
import pickle
import re
import subprocess
import sys
from html.parser import HTMLParser
from pathlib import Path

import pytest

from tests.reports.page.pages import ATTACKS, BROKEN, hostile, page_of, part_of
from tests.rules.sound import SOUND
from tidegate.lint.cli import main
from tidegate.lint.reports.order import CAUTION
from tidegate.lint.reports.plain_text import plain
from tidegate.lint.version import VERSION

ORDER = (
    "judged", "open", "findings", "ladders", "timelines", "graph", "ledger", "waivers", "facts", "inputs", "signoff",
)  # fmt: skip
_VOID = {"meta", "input", "img", "br", "hr", "link", "wbr"}


class _Read(HTMLParser):
    """Tags, attributes and texts of a page; tags must be closed in the order in which they were opened."""

    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.texts: list[str] = []
        self.open: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))
        if tag not in _VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        self.texts.append(data)

    @property
    def text(self) -> str:
        return " ".join(" ".join(self.texts).split())


def read(page: str) -> _Read:
    reader = _Read()
    reader.feed(page)
    reader.close()
    assert reader.open == []
    return reader


@pytest.mark.parametrize("patch", ["", BROKEN], ids=["sound", "broken"])
def test_parts_stand_in_the_order_a_reviewer_asks(patch: str) -> None:
    ids = [attributes["id"] for tag, attributes in read(page_of(patch)).tags if attributes.get("class") == "part"]
    assert tuple(ids) == ORDER


def test_ids_are_unique_and_every_link_leads_somewhere() -> None:
    for patches in (("",), (BROKEN,), ("", BROKEN)):
        tags = read(page_of(*patches)).tags
        ids = [attributes["id"] for _, attributes in tags if "id" in attributes]
        assert len(ids) == len(set(ids))
        links = {attributes["href"] for _, attributes in tags if attributes.get("href")}
        assert {link for link in links if link} <= {f"#{name}" for name in ids}


def test_the_first_screen_says_where_the_worst_margin_is_and_what_to_do() -> None:
    head = read(page_of(BROKEN)).text.partition("How much was judged")[0]
    part = part_of(BROKEN)
    assert part.closest is not None
    assert part.closest.subject == "uv"
    assert part.closest.rule == "hysteresis/covers_disturbance"
    margin = " ".join(part for part in (part.closest.margin, part.closest.margin_note) if part)
    assert f"Worst margin {margin} at uv {part.closest_says} To do: {part.closest_mend}" in head
    assert "NOT KEPT" in head
    assert "por_n: hold the output of rst_out low through a resistor" in head
    assert "find out time to be ready of adc" in head


def test_a_sound_description_says_that_nothing_is_to_be_done() -> None:
    head = read(page_of("")).text.partition("How much was judged")[0]
    assert "Nothing to mend, nothing open, no question left." in head
    assert "Closest margin" in head


def test_every_judgement_that_says_something_is_on_the_page() -> None:
    part, text = part_of(BROKEN), read(page_of(BROKEN)).text
    findings = [finding for element in part.elements for finding in element.findings]
    assert {finding.kind for finding in findings} >= {"fail", "open"}
    for finding in findings:
        assert finding.rule in text
        without = finding.kind == "open" and not finding.margin
        said = finding.missing[0] if without else " ".join(finding.message.split())
        assert said in text
    counted = sum(number for _, _, number in part.counts)
    shown = sum(len(e.findings) + len(e.explained) + len(e.kept) + e.not_applicable for e in part.elements)
    shown += len(part.waivers)
    assert counted == shown


def test_caution_version_and_digest(capsys: pytest.CaptureFixture[str]) -> None:
    main(["review", "--as", "html", str(SOUND)])
    text = read(capsys.readouterr().out).text
    assert CAUTION in text
    assert f"tidegate {VERSION}" in text
    for file in (SOUND, SOUND.with_name("process.yaml")):
        assert hashlib.sha256(file.read_bytes()).hexdigest() in text


def test_the_policy_allows_the_pages_own_style_and_script_and_nothing_else() -> None:
    # Content Security Policy Level 3: the digest is that of the text between the tags.
    page = page_of(BROKEN)
    found = re.search(r'Content-Security-Policy" content="([^"]+)"', page)
    assert found is not None
    directives = [directive.split(" ") for directive in found[1].replace("&#39;", "'").split("; ")]
    policy = {name: sources for name, *sources in directives}
    (style,), (script,) = (
        re.findall(r"<style>(.*?)</style>", page, re.S),
        re.findall(r"<script>(.*?)</script>", page, re.S),
    )
    for name, text in (("style-src", style), ("script-src", script)):
        digest = base64.b64encode(hashlib.sha256(text.encode()).digest()).decode()
        assert policy[name] == [f"'sha256-{digest}'"]
    assert policy["default-src"] == policy["base-uri"] == policy["form-action"] == ["'none'"]
    tags = read(page).tags
    assert not [a for _, attributes in tags for a in attributes if a.startswith("on") or a in ("style", "src")]
    assert all((attributes.get("href") or "#").startswith("#") for _, attributes in tags)
    assert "://" not in re.sub(r'xmlns="http://www\.w3\.org/2000/svg"', "", page)


def test_hostile_text_stays_text() -> None:
    tame, page = read(page_of("")), page_of(hostile())
    wild = read(page)
    broken = read(page_of(BROKEN))  # lists what to do, as the hostile one does
    assert {tag for tag, _ in wild.tags} <= {tag for tag, _ in (*tame.tags, *broken.tags)}
    assert {name for _, attributes in wild.tags for name in attributes} <= {
        name for _, attributes in (*tame.tags, *broken.tags) for name in attributes
    }
    assert sum(tag in ("script", "style") for tag, _ in wild.tags) == 2
    for attack in ATTACKS:
        assert " ".join(plain(attack).split()) in wild.text
    assert not re.search("[\u200b-\u200f\u202a-\u202e\u2060-\u206f\ufeff]", page)
    assert len(page) < 1_000_000


def test_a_hostile_file_name_stays_text(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    file = tmp_path / "<img src=x onerror=alert(1)>\u202e.yaml"
    file.write_text("rails: {avdd: {nominal: 1 parrot}}", "utf-8")
    assert main(["review", "--as", "html", str(file)]) == 2
    page = capsys.readouterr().out
    assert "img" not in {tag for tag, _ in read(page).tags}
    assert "CANNOT BE USED" in page
    assert "\u202e" not in page


def test_several_descriptions_have_an_index_and_anchors_of_their_own() -> None:
    reader = read(page_of("", BROKEN))
    links = [attributes["href"] for tag, attributes in reader.tags if tag == "a"]
    assert {"#d1-top", "#d2-top", "#d2-findings"} <= set(links)
    assert reader.text.partition("Revision")[0].count("NOT KEPT") == 1


def test_the_page_is_small_and_the_same_every_time() -> None:
    page = page_of("")
    assert len(page.encode("utf-8")) < 700_000
    page_of.cache_clear()
    part_of.cache_clear()
    assert page_of("") == page


def test_what_is_shown_can_come_from_another_process() -> None:
    part = part_of(BROKEN)
    assert pickle.loads(pickle.dumps(part)) == part


def test_other_forms_do_not_load_the_page() -> None:
    script = (
        "import sys\nfrom tidegate.lint.cli import main\n"
        f"try: main(['review', '--as', 'json', {str(SOUND)!r}])\nexcept SystemExit: pass\n"
        "print('\\nloaded', *sorted(sys.modules))"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    loaded = done.stdout.splitlines()[-1].split()
    assert "jinja2" not in loaded
    assert not [
        name for name in loaded if name.startswith(("tidegate.lint.reports.page", "tidegate.lint.reports.drawing"))
    ]


def test_each_number_has_its_account_folded_away() -> None:
    """A waterfall for every judgement whose number is a sum, in a part that opens without a script."""
    part, reader = part_of(BROKEN), read(page_of(BROKEN))
    told = [one for element in part.elements for one in (*element.findings, *element.explained, *element.kept)]
    accounts = [one for one in told if one.account is not None]
    assert len(accounts) > 20
    classes = [attributes.get("class") for tag, attributes in reader.tags if tag == "details"]
    assert classes.count("account") == len(accounts)
    pictures = [attributes for tag, attributes in reader.tags if attributes.get("class") == "picture waterfall"]
    assert [picture["role"] for picture in pictures] == ["group"] * len(accounts)
    assert all("margin" in (picture["aria-label"] or "") for picture in pictures)


def test_the_three_margins_stand_at_the_top_of_a_detector() -> None:
    part = part_of(BROKEN)
    three = {element.id: element.three for element in part.elements if element.three}
    assert set(three) == {"uv", "ov", "uv_core", "por"}
    assert [margin.name for margin in three["uv"]] == ["protects", "stays quiet", "comes back"]
    ledger = {(row.rule, row.subject): " ".join((row.margin, row.margin_note)).strip() for row in part.ledger}
    for margin, rule in zip(three["uv"], ("guarantee", "nuisance", "release"), strict=True):
        assert margin.margin == ledger[f"trip_window/{rule}", "uv"]


def test_what_to_find_out_next_is_asked_with_what_it_settles() -> None:
    text = read(page_of(BROKEN)).text
    asked = text.partition("What to find out next")[2].partition("Findings By element")[0]
    assert "time to be ready of adc" in asked
    assert "settles start_up/release_after_ready" in asked
    assert "write loads.adc: ready" in asked


def test_the_ledger_marks_what_is_open_and_what_another_failure_explains() -> None:
    under = "comparators: {uv: {trip: {rising: 1.752 V, falling: 1.702 V}}}"
    part = part_of(under)
    rows = [row for row in part.ledger if row.kind == "under"]
    assert rows
    assert {row.finding for row in rows} == {one.anchor for element in part.elements for one in element.explained}
    assert part.ledger == tuple(sorted(part.ledger, key=lambda row: int(row.slack)))
    anchors = {anchor for element in part.elements for one in element.findings for anchor, _ in one.explains}
    assert anchors == {row.finding for row in rows}
    so_far = part_of('{"rails": {"avdd": {"ripple": null}}}')
    notes = {(row.rule, row.subject): (row.kind, row.margin_note) for row in so_far.ledger}
    assert notes["trip_window/nuisance", "uv"] == ("open", "so far")
