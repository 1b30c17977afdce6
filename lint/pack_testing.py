"""For authors of rule packs: judge a small description with a rule, in a test of their own.

from tidegate.lint.pack_testing import judged

def test_a_small_hysteresis_is_found() -> None:
    said = judged(RULES, "chip.yaml", over="comparators: {uv: {hysteresis: {amount: 5 mV}}}")
    assert said["house/hysteresis", "uv"].kind == "fail"
"""

from __future__ import annotations

import datetime
import json
import tempfile
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any, Final

from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.description.sources import read_sources
from tidegate.lint.description.yaml_text import read_yaml
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.rule import Rule

_DAY: Final = datetime.date(2026, 1, 1)


def judged(
    rules: Sequence[Rule], description: str | Path, *, over: str = "", today: datetime.date = _DAY
) -> dict[tuple[str, str], Judgement]:
    """What rules say about a description: judgements by rule and subject.

    ``description`` is a file, or the text of one.  ``over`` is a fragment laid over it, as ``laid_over`` says.
    Raises: DescriptionError: if the description or the fragment cannot be used.
        AssertionError: if a rule raises instead of answering.
    """
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "description.json"
        path.write_text(json.dumps(laid_over(_data(description), _plain(over, "over"))), "utf-8")
        result = review(load(path, shown="description"), Catalogue([tuple(rules)]), today=today)
    if result.faults:
        raise AssertionError("; ".join(f"{fault.rule} on {fault.subject}: {fault.error}" for fault in result.faults))
    own = {rule.id for rule in rules}
    return {(said.rule, said.subject): said for said in result.judgements if said.rule in own}


def examples_hold(rules: Sequence[Rule], description: str | Path) -> None:
    """Check that the examples of rules say what they should of a description: fail with the one, hold with the other.

    Raises:
        AssertionError: naming the rule whose example does not.
        DescriptionError: if a fragment cannot be laid over the description.
    """
    for rule in rules:
        for fragment, wanted in ((rule.example.fails, Kind.FAIL), (rule.example.holds, Kind.PASS)):
            kinds = {said.kind for said in judged([rule], description, over=fragment).values()}
            found = ", ".join(sorted(kind.value for kind in kinds)) or "nothing"
            if wanted not in kinds:
                raise AssertionError(f"{rule.id}: with {fragment} it says {found}, and never {wanted.value}")


def laid_over(base: Any, patch: Any) -> Any:
    """Data with a fragment laid over them: mappings are joined, everything else is replaced."""
    if not isinstance(base, dict) or not isinstance(patch, dict) or patch.keys() & {"min", "typ", "max"}:
        return patch
    return {**base, **{key: laid_over(base.get(key), value) for key, value in patch.items()}}


def _data(description: str | Path) -> Mapping[str, Any]:
    if isinstance(description, Path) or ("\n" not in description and ":" not in description):
        sources = read_sources(Path(description), str(description))
        if sources.faults:
            raise DescriptionError(sources.faults)
        return {key: value for key, value in sources.data.items() if key != "include"}
    return _plain(description, "description")


def _plain(text: str, name: str) -> Mapping[str, Any]:
    file = read_yaml(name, text.encode())
    if file.faults:
        raise DescriptionError(file.faults)
    return file.data
