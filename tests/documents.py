"""The documents made from code and schema: rule catalogue, description reference, formula sheet."""

from __future__ import annotations

import ast
import json
import textwrap
from collections.abc import Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parents[1]
MADE = "<!-- Made from code: python tests/record.py writes this file. -->"


def rule_catalogue() -> str:
    """`rules/README.md`: every rule in full."""
    from tidegate.lint.waivers import STILL_RIGHT
    from tidegate.rules.catalogue import FAMILIES

    lines = [MADE, "", "# The rules", "", "Every rule says something about every element of the section it judges."]
    lines += ["", "| rule | level | judges | holds when |", "| --- | --- | --- | --- |"]
    rules = [*(rule for family in FAMILIES for rule in family), STILL_RIGHT]
    for rule in rules:
        anchor = rule.id.replace("/", "")
        section = rule.judges
        lines.append(f"| [`{rule.id}`](#{anchor}) | {rule.level.value} | {section} | {_cell(rule.title)} |")
    for rule in rules:
        lines += ["", f"## {rule.id}", "", *_wrapped(f"{rule.title[0].upper()}{rule.title[1:]}. {rule.proves}")]
        if rule.formulas:
            names = ", ".join(_formula_link(formula) for formula in rule.formulas)
            lines += ["", f"Formulas: {names}."]
        lines += ["", f"Facts: {_listed(rule.facts)}.", "", *_wrapped(f"Mend: {rule.mend}.")]
        lines += ["", *_wrapped(f"Sources: {'; '.join(rule.sources)}.")]
        lines += ["", "Laid over the sound example, this fails, and the second holds:", ""]
        lines += ["```yaml", rule.example.fails, "```", "", "```yaml", rule.example.holds, "```"]
    return "\n".join(lines) + "\n"


def _formula_link(formula: Any) -> str:
    module = formula.__module__.rpartition(".")[2]
    return f"[`{module}.{formula.__name__}`](../lint/physics/{module}.py)"


def _listed(facts: Sequence[str]) -> str:
    return ", ".join(f"`{fact}`" if " " not in fact else fact for fact in facts)


def _wrapped(text: str) -> list[str]:
    return textwrap.wrap(text, 118, break_on_hyphens=False, break_long_words=False)


def _cell(text: str) -> str:
    return text.replace("|", "\\|")


def description_reference() -> str:
    """`schema/README.md`: every key of the language."""
    schema = json.loads((ROOT / "schema" / "description.schema.json").read_text("utf-8"))
    defs = schema["$defs"]
    quantities = {name: node for name, node in defs.items() if "x-quantity" in node}
    lines = [MADE, "", f"# {schema['title']}", "", *_wrapped(schema["description"])]
    lines += ["", "## Quantities", "", "A text with its unit, or `{min: ..., typ: ..., max: ..., basis: ...}`.", ""]
    lines += ["| quantity | units | example |", "| --- | --- | --- |"]
    for name, node in quantities.items():
        units = node["description"].partition("(")[2].partition(")")[0]
        lines.append(f"| {name.replace('_', ' ')} | {_cell(units)} | `{node['examples'][0]}` |")
    lines += ["", "## What is not there", "", *_wrapped(_NOT_THERE)]
    lines += ["", "## What a fact is for", "", *_wrapped(_USES)]
    lines += ["", "## Limits", "", *_limits()]
    lines += ["", "## The file", "", *_table(schema["properties"], defs)]
    for name, node in defs.items():
        if "properties" in node:
            lines += ["", f"## {name}", "", f"{node['title']}. {node['description']}", ""]
            lines += _table(node["properties"], defs, node.get("required", ()))
    return "\n".join(lines) + "\n"


_NOT_THERE = (
    "A key that is left out, or has no value, is a fact that is not given: it may be anything, and what it decides is "
    "open. `none` says that there is nothing: no ripple, no filter, no reference. It can be written where the tables "
    "offer it. A section without entries, or left out, says nothing of what there may be; `none` in place of its "
    "entries, or its name in the list `complete`, says that all there is has been described."
)


_USES = (
    "Most facts vary over parts, corners, temperature and life: a narrower range is a better part. The others say what "
    "they are. *Ability*: what a part stands or works over; a narrower one is a worse part. *Promise*: what nobody "
    "promises is not relied on, so that one promise more may turn a failure into a pass. *Policy*: how a house judges; "
    "it has a default, and is never missing."
)


def _limits() -> Iterator[str]:
    from tidegate.lint.limits import LIMITS

    yield "What lies beyond them is refused, with exit status 2 and a message that says what was found; a rule of a"
    yield "pack that takes too long fails itself, with exit status 3."
    yield ""
    yield "| what | at most |"
    yield "| --- | --- |"
    for what, most in LIMITS:
        yield f"| {_cell(what)} | {_cell(most)} |"


def _table(properties: Mapping[str, Any], defs: Mapping[str, Any], required: Sequence[str] = ()) -> Iterator[str]:
    yield "| key | what | meaning | example |"
    yield "| --- | --- | --- | --- |"
    for key, node in properties.items():
        needed = " (needed)" if key in required else ""
        example = json.dumps(node["examples"][0], ensure_ascii=False) if "examples" in node else ""
        meaning = _cell(" ".join((node.get("description", ""), *_more(node)))).strip()
        yield f"| `{key}`{needed} | {_kind(node, defs)} | {meaning} | `{_cell(example)}` |"


def _more(node: Mapping[str, Any]) -> Iterator[str]:
    """What a fact reads as where it is said to be none, and what holds where it is not given."""
    if node.get("x-none", "none") != "none" and node["x-none"]:
        yield f"`none` reads as `{json.dumps(node['x-none'], ensure_ascii=False)}`."
    if "x-use" in node:
        yield f"*{node['x-use'].capitalize()}.*"
    if "default" in node:
        yield f"Where not given, `{json.dumps(node['default'])}`."


def _kind(node: Mapping[str, Any], defs: Mapping[str, Any]) -> str:
    inner = node.get("$ref", "").rpartition("/")[2]
    if "x-names" in node:
        many = "names of " if node.get("type") == "array" else "name of "
        none = "`none` or " if "x-none" in node else ""
        return none + many + " or ".join(section.replace("_", " ") for section in node["x-names"])
    if inner:
        shown = inner.replace("_", " ")
        return shown if "x-quantity" in defs[inner] or inner == "id" else f"[{shown}](#{inner})"
    if "enum" in node:
        return ", ".join(f"`{value}`" for value in node["enum"])
    if "anyOf" in node:
        return " or ".join(f"`{b['const']}`" if "const" in b else _kind(b, defs) for b in node["anyOf"])
    if isinstance(node.get("additionalProperties"), dict):
        return f"{_kind(node['additionalProperties'], defs)} by name"
    if node.get("type") == "array":
        return f"list of {_kind(node['items'], defs)}"
    return {"string": "text", "boolean": "true or false"}.get(node.get("type", ""), node.get("type", "anything"))


def formula_sheet() -> str:
    """`lint/physics/README.md`: every public formula with its contract."""
    lines = [MADE, "", "# Formula sheet", "", "Numbers in, numbers out; everything in SI units without prefix."]
    for path in sorted((ROOT / "lint" / "physics").glob("*.py")):
        tree = ast.parse(path.read_text("utf-8"))
        found = [node for node in tree.body if isinstance(node, ast.FunctionDef) and not node.name.startswith("_")]
        contracts = [(node, ast.get_docstring(node) or "") for node in found]
        contracts = [(node, text) for node, text in contracts if "Formula:" in text]
        if contracts:
            lines += ["", f"## [{path.stem}]({path.name})", "", *_wrapped(ast.get_docstring(tree) or "")]
        for node, text in contracts:
            lines += ["", f"### {node.name}", "", "```text", text, "```"]
    return "\n".join(lines) + "\n"
