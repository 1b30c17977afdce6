"""``tidegate rules``: the catalogue, and one rule in full."""

from __future__ import annotations

import argparse
import ast
import inspect
import textwrap
from collections.abc import Callable, Iterator, Sequence
from difflib import get_close_matches
from pathlib import Path

from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.packs import MODULE_PREFIX, load_packs
from tidegate.lint.reports.columns import wrapped
from tidegate.lint.reports.plain_text import plain
from tidegate.lint.rule import PackError, Rule
from tidegate.lint.waivers import STILL_RIGHT

_WIDTH = 78


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument("id", nargs="?", metavar="ID", help="a rule (family/name) or a family; all of them if left out")
    parser.add_argument(
        "--pack", action="append", default=[], metavar="FILE", help="Python file with rules of your own"
    )


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print the catalogue, a family of it, or one rule with formula, facts, sources, example and mend."""
    try:
        rules = _rules(streams, options.pack)
    except PackError as error:
        streams.say(str(error))
        return Exit.UNUSABLE
    if options.id is None or any(rule.family == options.id for rule in rules):
        shown = [rule for rule in rules if options.id in (None, rule.family)]
        streams.out.write("\n".join(_listed(shown)) + "\n")
        return Exit.KEPT
    rule = next((rule for rule in rules if rule.id == options.id), None)
    if rule is None:
        known = [rule.id for rule in rules] + sorted({rule.family for rule in rules})
        near = get_close_matches(options.id, known, 1)
        hint = f"did you mean {near[0]}?" if near else "tidegate rules lists them"
        streams.say(f"no rule or family is called {options.id!r}; {hint}")
        return Exit.UNUSABLE
    streams.out.write("\n".join(_in_full(rule)) + "\n")
    return Exit.KEPT


def _rules(streams: Streams, packs: Sequence[str]) -> list[Rule]:
    """The rules that come with the tool and those of packs."""
    own = [*(rule for family in streams.families() for rule in family), STILL_RIGHT]
    if packs:
        own += [rule for pack in load_packs(packs, (), {rule.family for rule in own}) for rule in pack]
    return own


def _listed(rules: Sequence[Rule]) -> Iterator[str]:
    family = ""
    longest = max(len(rule.id) for rule in rules)
    for rule in rules:
        if rule.family != family:
            if family:
                yield ""
            family = rule.family
            yield family.replace("_", " ")
        yield f"  {rule.id.ljust(longest)}  {rule.level.value.ljust(7)}  {plain(rule.title)}"


def _in_full(rule: Rule) -> Iterator[str]:
    yield f"{rule.id}   ({rule.level.value}, judges {rule.judges})"
    yield f"  {plain(rule.title)}"
    yield ""
    yield from _part("proves", [rule.proves])
    for formula in rule.formulas:
        yield from _formula(formula)
    yield from _part("facts", rule.facts)
    yield from _part("mend", [rule.mend])
    yield from _part("sources", rule.sources)
    yield from _part("fails with", [rule.example.fails], fill=False)
    yield from _part("holds with", [rule.example.holds], fill=False)
    yield from _part("code", [_named(rule.judge).partition("._")[0]])


def _part(label: str, texts: Sequence[str], *, fill: bool = True) -> Iterator[str]:
    """A label, and texts that keep clear of it."""
    head = f"  {label}".ljust(14)
    for text in texts:
        lines = wrapped(plain(text), _WIDTH - 14) if fill else map(plain, text.split("\n"))
        for line in lines:
            yield head + line
            head = " " * 14


def _formula(formula: Callable[..., object]) -> Iterator[str]:
    """The contract of a formula as its documentation states it, with the module to read on in."""
    yield from _part("formula", [_named(formula)])
    for line in _documented(formula).split("\n"):
        yield (" " * 16 + plain(line)).rstrip()


def _named(function: Callable[..., object]) -> str:
    """The module and the name of a function; of a rule pack, whose module has a name for this run alone, the file."""
    module = inspect.getmodule(function)
    name = getattr(module, "__name__", "")
    if name.startswith(MODULE_PREFIX):
        name = Path(inspect.getsourcefile(function) or "").stem
    return f"{name}.{getattr(function, '__name__', '')}"


def _documented(function: Callable[..., object]) -> str:
    """The documentation of a function, from its source where Python was told to do without (-OO)."""
    text = inspect.getdoc(function)
    if text is None:
        (tree,) = ast.parse(textwrap.dedent(inspect.getsource(function))).body
        text = ast.get_docstring(tree) if isinstance(tree, ast.FunctionDef) else None
    return text or ""
