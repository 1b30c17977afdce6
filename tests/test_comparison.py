"""Two reviews side by side: the facts that changed are those that were edited, and every change agrees with both."""

from __future__ import annotations

import datetime
import math
import random
import re
from collections.abc import Iterator
from pathlib import Path

import pytest

from tidegate.lint.comparison import Comparison, Harm, JudgementChange, compare
from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.quantity import Dimension
from tidegate.rules.catalogue import FAMILIES

ROOT = Path(__file__).resolve().parents[1]
DAY = datetime.date(2026, 1, 1)
SOUND = (ROOT / "examples" / "sound.yaml").read_text("utf-8")
CATALOGUE = Catalogue(FAMILIES)
NUMBER = re.compile(r"(?<=[:,\[ ])(\d+(?:\.\d+)?)(?= (?:[munpk]?(?:V|s|A|ohm|F)|yr|%)\b)")


def reviewed(folder: Path, text: str) -> Review:
    (folder / "process.yaml").write_text((ROOT / "examples" / "process.yaml").read_text("utf-8"), "utf-8")
    (folder / "chip.yaml").write_text(text, "utf-8")
    return review(load(folder / "chip.yaml", shown="chip.yaml"), CATALOGUE, today=DAY)


def edited(seed: int) -> str:
    """The sound example with some of its numbers changed."""
    dice = random.Random(seed)
    chosen = dice.sample(list(NUMBER.finditer(SOUND)), dice.randint(1, 4))
    text = SOUND
    for match in sorted(chosen, key=lambda match: -match.start()):
        number = f"{float(match[0]) * dice.choice([0.5, 0.9, 0.97, 1.02, 1.1, 2.0]):.4g}"
        text = f"{text[: match.start()]}{number}{text[match.end() :]}"
    return text


@pytest.fixture(scope="module")
def old(tmp_path_factory: pytest.TempPathFactory) -> Review:
    return reviewed(tmp_path_factory.mktemp("old"), SOUND)


@pytest.mark.parametrize("seed", range(12))
def test_seeded_edits(seed: int, old: Review, tmp_path: Path) -> None:
    text = edited(seed)
    try:
        new = reviewed(tmp_path, text)
    except DescriptionError:
        pytest.skip("the edit puts a range out of order")
    found = compare(old, new)
    changed_lines = [(a, b) for a, b in zip(SOUND.splitlines(), text.splitlines(), strict=True) if a != b]
    # Every fact that is said to have changed stands in a line that did, and every such line holds one.
    for fact in found.facts:
        assert any(str(fact.old) in a and str(fact.new) in b for a, b in changed_lines), fact
    for a, b in changed_lines:
        assert any(str(fact.old) in a and str(fact.new) in b for fact in found.facts), (a, b)
    before = {(j.rule, j.subject): j for j in old.judgements}
    after = {(j.rule, j.subject): j for j in new.judgements}
    told = {(change.rule, change.subject): change for change in found.judgements}
    for key, now in after.items():
        was = before[key]
        change = told.get(key)
        if now.kind is not was.kind:
            assert change is not None
        if change is None:
            assert same_margin(was, now), key
        else:
            assert (change.old, change.new) == (was, now)
    assert found.got_worse == any(change.harm is Harm.WORSE for change in found.judgements)
    assert list(found.judgements) == sorted(found.judgements, key=lambda change: -change.harm)


def same_margin(was: Judgement, now: Judgement) -> bool:
    if was.measure is None or now.measure is None:
        return True
    return math.isclose(was.measure.margin, now.measure.margin, rel_tol=1e-6, abs_tol=1e-9)


def test_nothing_changed(old: Review, tmp_path: Path) -> None:
    assert compare(old, old) == Comparison((), ())
    moved = "# moved\n\n" + SOUND
    assert compare(old, reviewed(tmp_path, moved)) == Comparison((), ())


def test_a_waiver_before_the_others_changes_no_judgement_of_theirs(old: Review, tmp_path: Path) -> None:
    new = "  - {rule: bypass/locked, element: skip_core, why: x, agreed_by: x, until: '2031-01-01'}\n"
    found = compare(old, reviewed(tmp_path, SOUND.replace("\nwaivers:\n", f"\nwaivers:\n{new}")))
    assert [change.subject for change in found.judgements] == ["bypass/locked on skip_core"]


# Harm, one pair at a time


def said(
    kind: Kind = Kind.PASS, margin: float | None = None, *, need: float = 1.0, waiver: str = "", message: str = "says",
    level: Level = Level.ERROR, sure: float | None = None, best: float | None = None, under: str = "",
) -> Judgement:  # fmt: skip
    measure = (
        None
        if margin is None
        else Measure(need, need + margin, Dimension.VOLTAGE, Relation.AT_LEAST, sure=sure, best=best)
    )
    return Judgement(
        rule="a/b", subject="uv", kind=kind, level=level, message=message, at="comparators.uv", measure=measure,
        waiver=waiver, under=under,
    )  # fmt: skip


NOT_APPLICABLE = Kind.NOT_APPLICABLE
INF = math.inf
PAIRS: tuple[tuple[str, Judgement | None, Judgement | None, Harm | None], ...] = (
    ("same", said(), said(), None),
    ("pass to fail", said(), said(Kind.FAIL), Harm.WORSE),
    ("pass to open", said(), said(Kind.OPEN), Harm.WORSE),  # a fact taken away must not get past a ratchet
    ("pass to review", said(), said(Kind.REVIEW), Harm.WORSE),
    ("open to fail", said(Kind.OPEN), said(Kind.FAIL), Harm.WORSE),
    ("new element fails", None, said(Kind.FAIL), Harm.WORSE),
    ("new element passes", None, said(), None),
    ("failing element gone", said(Kind.FAIL), None, Harm.BETTER),
    ("fail to pass", said(Kind.FAIL), said(), Harm.BETTER),
    ("fail to waived", said(Kind.FAIL), said(Kind.FAIL, waiver="agreed"), Harm.BETTER),
    ("waiver gone", said(Kind.FAIL, waiver="agreed"), said(Kind.FAIL), Harm.WORSE),
    ("waived to pass", said(Kind.FAIL, waiver="agreed"), said(), Harm.OTHER),
    ("pass to not applicable", said(), said(Kind.NOT_APPLICABLE), Harm.OTHER),
    ("margin shrank", said(margin=0.2), said(margin=0.1), Harm.MARGIN_SHRANK),
    ("margin grew", said(margin=0.1), said(margin=0.2), Harm.MARGIN_GREW),
    ("margin moved by rounding", said(margin=0.2), said(margin=0.2 + 1e-12), None),
    ("failure got worse", said(Kind.FAIL, -0.1), said(Kind.FAIL, -0.2), Harm.WORSE),
    ("failure got milder", said(Kind.FAIL, -0.2), said(Kind.FAIL, -0.1), Harm.MARGIN_GREW),
    # 0.1 V short of 1 V is 10 %, 0.11 V short of 2 V is 5.5 %: it is further to go all the same.
    ("failure of another need", said(Kind.FAIL, -0.1), said(Kind.FAIL, -0.11, need=2.0), Harm.WORSE),
    ("waived margin shrank", said(Kind.FAIL, -0.1, waiver="a"), said(Kind.FAIL, -0.2, waiver="a"), Harm.MARGIN_SHRANK),
    ("both unlimited", said(margin=math.inf), said(margin=math.inf), None),
    ("unlimited to limited", said(margin=math.inf), said(margin=0.1), Harm.MARGIN_SHRANK),
    ("fails for another reason", said(Kind.FAIL, message="one"), said(Kind.FAIL, message="two"), Harm.OTHER),
    ("number gone", said(Kind.FAIL, -0.1), said(Kind.FAIL), Harm.OTHER),
    # A fact taken away: what failed for sure is open, and a failure less is no harm.
    ("fail to open", said(Kind.FAIL, -0.1), said(Kind.OPEN, 0.1, sure=-INF, best=0.1), Harm.BETTER),
    # A fact added: the margin that there surely is was none, and is one.
    ("sure end known", said(margin=0.1, sure=0.0, best=INF), said(margin=0.1), Harm.MARGIN_GREW),
    ("sure end lost", said(margin=0.1), said(margin=0.1, sure=0.0, best=0.1), Harm.MARGIN_SHRANK),
    (
        "best end grew, sure end shrank",
        said(margin=0.1, sure=0.1, best=0.2), said(margin=0.1, sure=0.05, best=0.9), Harm.MARGIN_SHRANK,
    ),
    (
        "nothing sure, best end shrank",
        said(Kind.OPEN, 0.2, sure=-INF, best=0.2), said(Kind.OPEN, 0.1, sure=-INF, best=0.1), Harm.MARGIN_SHRANK,
    ),
    (
        "surely short by more",
        said(Kind.FAIL, -0.1, sure=-INF, best=-0.1), said(Kind.FAIL, -0.2, sure=-INF, best=-0.2), Harm.WORSE,
    ),
    ("told under another failure", said(Kind.FAIL, -0.1), said(NOT_APPLICABLE, -0.1, under="a/c"), Harm.OTHER),
    ("no longer told under another", said(NOT_APPLICABLE, -0.1, under="a/c"), said(Kind.FAIL, -0.1), Harm.OTHER),
    ("worse under another", said(Kind.FAIL, -0.1), said(NOT_APPLICABLE, -0.2, under="a/c"), Harm.WORSE),
    ("pass to under another", said(margin=0.1), said(NOT_APPLICABLE, -0.1, under="a/c"), Harm.WORSE),
    ("under another to pass", said(NOT_APPLICABLE, -0.1, under="a/c"), said(margin=0.1), Harm.BETTER),
    ("passes in other words", said(message="one"), said(message="two"), None),
)  # fmt: skip


@pytest.mark.parametrize(("name", "was", "now", "harm"), PAIRS, ids=[pair[0] for pair in PAIRS])
def test_harm(name: str, was: Judgement | None, now: Judgement | None, harm: Harm | None, old: Review) -> None:
    assert [change.harm for change in changes(old, was, now)] == ([] if harm is None else [harm])


def changes(base: Review, was: Judgement | None, now: Judgement | None) -> Iterator[JudgementChange]:
    def with_only(judgement: Judgement | None) -> Review:
        kept = () if judgement is None else (judgement,)
        return Review(base.loaded, base.graph, base.settings, kept, ())

    yield from compare(with_only(was), with_only(now)).judgements


def test_the_worst_comes_first(old: Review) -> None:
    def many(*judgements: Judgement) -> Review:
        import msgspec

        named = tuple(msgspec.structs.replace(j, subject=f"e{number}") for number, j in enumerate(judgements))
        return Review(old.loaded, old.graph, old.settings, named, ())

    before = many(said(), said(margin=0.2), said(), said(), said(Kind.FAIL), said(margin=0.3))
    after = many(
        said(Kind.OPEN), said(margin=0.1), said(Kind.FAIL, level=Level.NOTE), said(Kind.FAIL), said(), said(margin=0.1)
    )
    assert [change.subject for change in compare(before, after).judgements] == ["e3", "e2", "e0", "e5", "e1", "e4"]
