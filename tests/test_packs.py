"""Rule packs: they cannot end the run, hide a finding or speak for other rules; wrong ones: `bad_input/packs.py`."""

from __future__ import annotations

import datetime
import json
from pathlib import Path

import pytest

from tests.commands.calling import tidegate
from tidegate.lint.description.load import load
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Kind
from tidegate.lint.packs import load_packs
from tidegate.lint.rule import PackError
from tidegate.rules import hysteresis

ROOT = Path(__file__).resolve().parents[1]
HOUSE = (ROOT / "examples" / "house_rules.py").read_text("utf-8")
CHIP = "rails: {avdd: {nominal: 1.8 V}}\n"

PACK = """
from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.rule import Example, Rule, rule

@rule(
    "house/low", title="rails are low", level=Level.ERROR, applies_to="rails", proves="Nothing.", facts=("rails",),
    mend="lower it", sources=("invented",), example=Example(fails="rails: {}", holds="rails: {}"),
)
def low(rail, case):
    BODY

RULES: tuple[Rule, ...] = (low,)
"""


def loaded(tmp_path: Path, text: str, *, most_seconds: float = 5.0) -> tuple[tuple[object, ...], ...]:
    (tmp_path / "pack.py").write_text(text, "utf-8")
    families = {rule.family for rule in hysteresis.RULES}
    return tuple(load_packs(["pack.py"], (), families, folder=tmp_path, most_seconds=most_seconds))


def judged(tmp_path: Path, body: str, *, most_seconds: float = 5.0) -> Review:
    (tmp_path / "chip.yaml").write_text(CHIP, "utf-8")
    packs = loaded(tmp_path, PACK.replace("BODY", body), most_seconds=most_seconds)
    catalogue = Catalogue([hysteresis.RULES, *packs])  # type: ignore[list-item]
    return review(load(tmp_path / "chip.yaml"), catalogue, today=datetime.date(2026, 1, 1))


def test_a_pack_that_keeps_to_the_rules(tmp_path: Path) -> None:
    found = judged(tmp_path, 'return case.passes("well")')
    assert found.faults == ()
    assert [(j.rule, j.subject, j.kind) for j in found.judgements] == [("house/low", "avdd", Kind.PASS)]


def test_a_function_may_take_more_that_has_a_default(tmp_path: Path) -> None:
    assert loaded(tmp_path, PACK.replace("(rail, case)", "(rail, case, limit=3)").replace("BODY", "pass"))


def test_a_pack_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(PackError, match=r"^rule pack no.py: no such file$"):
        load_packs(["no.py"], (), (), folder=tmp_path)
    (tmp_path / "pack.txt").write_text("", "utf-8")
    with pytest.raises(PackError, match=r"^rule pack pack.txt: not a Python file \(its name ends in .py\)$"):
        load_packs(["pack.txt"], (), (), folder=tmp_path)
    with pytest.raises(PackError, match=r"^rule pack nobody: not installed; installed: "):
        load_packs((), ["nobody"], ())


def test_a_pack_that_does_not_end_while_it_is_loaded(tmp_path: Path) -> None:
    text = "def wait():\n    while True: pass\nwait()\n"
    with pytest.raises(PackError, match=r"^rule pack pack.py: loading it took more than 0.05 s$"):
        loaded(tmp_path, text, most_seconds=0.05)


@pytest.mark.parametrize(
    ("body", "error"),
    [
        ("return 1 // 0", "ZeroDivisionError: integer division or modulo by zero"),
        ("return None", "answered NoneType, not a judgement"),
        ("return case", "answered Case, not a judgement"),
        ("raise SystemExit(0)", "SystemExit: 0"),
        ("raise BaseException('gone')", "BaseException: gone"),
        ("return low.judge(rail, case)", "RecursionError: maximum recursion depth exceeded"),
        ("while True: rail = rail", "TimeLimitError: house/low took more than 0.2 s"),
        (
            "return Judgement(rule='hysteresis/present', subject='avdd', kind='pass', level='note', message='', at='')",
            "answered for hysteresis/present on avdd",
        ),
        ("rail.nominal = 3", "AttributeError: immutable type: 'Rail'"),
    ],
)
def test_a_rule_that_misbehaves_is_at_fault_and_nothing_else(tmp_path: Path, body: str, error: str) -> None:
    found = judged(tmp_path, body, most_seconds=0.2)
    (fault,) = found.faults
    assert (fault.rule, fault.subject) == ("house/low", "avdd")
    assert fault.error.startswith(error)


def test_two_packs_may_not_share_a_family(tmp_path: Path) -> None:
    for name in ("one.py", "two.py"):
        (tmp_path / name).write_text(HOUSE, "utf-8")
    with pytest.raises(PackError, match=r"^rule pack two.py: house/quick_detectors: the family house is taken"):
        load_packs(["one.py", "two.py"], (), (), folder=tmp_path)


def test_packs_of_the_same_file_name_and_with_data_classes(tmp_path: Path) -> None:
    classes = "from dataclasses import dataclass\n\n@dataclass\nclass Limit:\n    most: float = 5e-6\n\n"
    head, _, rest = PACK.partition("@rule(")
    for folder, family in (("a", "one"), ("b", "two")):
        (tmp_path / folder).mkdir()
        text = f"{head}{classes}@rule({rest}".replace("house/", f"{family}/").replace("BODY", "pass")
        (tmp_path / folder / "pack.py").write_text(text, "utf-8")
    first, second = load_packs(["a/pack.py", "b/pack.py"], (), (), folder=tmp_path)
    assert (first[0].id, second[0].id) == ("one/low", "two/low")


# Through the command line


def test_a_rule_that_leaves_or_prints_spoils_no_report(tmp_path: Path) -> None:
    (tmp_path / "chip.yaml").write_text(CHIP, "utf-8")
    (tmp_path / "pack.py").write_text(PACK.replace("BODY", 'print("here"); raise SystemExit(0)'), "utf-8")
    done = tidegate("review", "--as", "json", "--pack", "pack.py", "chip.yaml", cwd=tmp_path)
    assert done.returncode == 3
    assert done.stderr == "here\n"
    faults = json.loads(done.stdout)["files"][0]["rule_faults"]
    assert faults == [{"rule": "house/low", "subject": "avdd", "error": "SystemExit: 0"}]


def test_the_catalogue_shows_the_rules_of_a_pack() -> None:
    done = tidegate("rules", "--pack", "examples/house_rules.py", "house/quick_detectors", cwd=ROOT)
    assert done.returncode == 0
    assert "every detector answers within 5 us" in done.stdout
    assert tidegate("rules", "--pack", "none.py", cwd=ROOT).stderr == "rule pack none.py: no such file\n"


def test_an_installed_pack_is_used_when_the_settings_name_it(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    site = tmp_path / "site"
    (site / "house_rules").mkdir(parents=True)
    (site / "house_rules" / "__init__.py").write_text(HOUSE, "utf-8")
    info = site / "house_rules-1.0.dist-info"
    info.mkdir()
    (info / "METADATA").write_text("Metadata-Version: 2.1\nName: house-rules\nVersion: 1.0\n", "utf-8")
    (info / "entry_points.txt").write_text("[tidegate.rules]\nhouse = house_rules\nbroken = house_gone\n", "utf-8")
    monkeypatch.syspath_prepend(site)
    for name in ("sound.yaml", "process.yaml"):
        (tmp_path / name).write_text((ROOT / "examples" / name).read_text("utf-8"), "utf-8")

    def rules(settings: str) -> tuple[int, set[str], str]:
        (tmp_path / "tidegate.settings.yaml").write_text(settings, "utf-8")
        done = tidegate("review", "--as", "json", "sound.yaml", cwd=tmp_path)
        judgements = json.loads(done.stdout)["files"][0].get("judgements", [])
        return done.returncode, {judgement["rule"] for judgement in judgements}, done.stdout

    assert "house/quick_detectors" not in rules("x-note: installed, but not named\n")[1]
    status, named, _ = rules("packs_installed: [house]\n")
    assert (status, "house/quick_detectors" in named) == (0, True)
    status, _, said = rules("packs_installed: [broken]\n")
    assert status == 2
    assert "cannot be loaded (ModuleNotFoundError: No module named 'house_gone')" in said
    assert "not installed; installed: broken, house" in rules("packs_installed: [nobody]\n")[2]
