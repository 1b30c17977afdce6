"""Rule packs whose rules are not complete. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import Bad
from tests.bad_input.packs import BY_NAME, PACK, pack

PACK_RULES: Final = (
    Bad(
        "no rules",
        pack("pass\n"),
        "main.yaml: --pack: rule pack pack.py: RULES must be a tuple of rules, at least one; correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "no rule in the tuple",
        pack("RULES = ()\n"),
        "main.yaml: --pack: rule pack pack.py: RULES must be a tuple of rules, at least one; correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "rules that are a list",
        pack(PACK.replace("(low,)", "[low]")),
        "main.yaml: --pack: rule pack pack.py: RULES must be a tuple of rules, at least one; correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "rules that are a mapping",
        pack("RULES = {}\n"),
        "main.yaml: --pack: rule pack pack.py: RULES must be a tuple of rules, at least one; correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a rule that is a function",
        pack("def low(rail, case): ...\nRULES = (low,)\n"),
        "main.yaml: --pack: rule pack pack.py: RULES must be a tuple of rules, at least one; correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a rule that is a number",
        pack(PACK.replace("(low,)", "(low, 1)")),
        "main.yaml: --pack: rule pack pack.py: RULES must be a tuple of rules, at least one; correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "one rule twice",
        pack(PACK.replace("(low,)", "(low, low)")),
        "main.yaml: --pack: rule pack pack.py: house/low: given twice; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an id in capitals",
        pack(PACK.replace("house/low", "House/Low")),
        "main.yaml: --pack: rule pack pack.py: House/Low: an id is family/name, in small letters, digits and "
        "underscores; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an id without a family",
        pack(PACK.replace("house/low", "low")),
        "main.yaml: --pack: rule pack pack.py: low: an id is family/name, in small letters, digits and "
        "underscores; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an id of three parts",
        pack(PACK.replace("house/low", "house/low/er")),
        "main.yaml: --pack: rule pack pack.py: house/low/er: an id is family/name, in small letters, digits and "
        "underscores; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an id with a hyphen",
        pack(PACK.replace("house/low", "house/too-low")),
        "main.yaml: --pack: rule pack pack.py: house/too-low: an id is family/name, in small letters, digits "
        "and underscores; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an empty id",
        pack(PACK.replace("house/low", "")),
        "main.yaml: --pack: rule pack pack.py: '': an id is family/name, in small letters, digits and "
        "underscores; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an id that is a number",
        pack(PACK.replace('"house/low"', "5")),
        "main.yaml: --pack: rule pack pack.py: 5: an id is family/name, in small letters, digits and "
        "underscores; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a family that is taken",
        pack(PACK.replace("house/low", "hysteresis/low")),
        "main.yaml: --pack: rule pack pack.py: hysteresis/low: the family hysteresis is taken; a pack has "
        "families of its own; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a rule that is taken",
        pack(PACK.replace("house/low", "hysteresis/present")),
        "main.yaml: --pack: rule pack pack.py: hysteresis/present: the family hysteresis is taken; a pack has "
        "families of its own; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "the family of waivers",
        pack(PACK.replace("house/low", "waiver/still_right")),
        "main.yaml: --pack: rule pack pack.py: waiver/still_right: the family waiver is taken; a pack has "
        "families of its own; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a section that is none",
        pack(PACK.replace('applies_to="rails"', 'applies_to="scenarios"')),
        "main.yaml: --pack: rule pack pack.py: house/low: applies to 'scenarios'; sections are rails, domains, "
        "references, biases, comparators, output_stages, resets, loads, bypasses, neighbours; correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a level that is none",
        pack(PACK.replace("Level.ERROR", "'fatal'")),
        "main.yaml: --pack: rule pack pack.py: house/low: its level is 'fatal'; levels are Level.ERROR, "
        "Level.WARNING and Level.NOTE; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an empty title",
        pack(PACK.replace("rails are low", "")),
        "main.yaml: --pack: rule pack pack.py: house/low: its title is empty; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "no sources",
        pack(PACK.replace('("invented",)', "()")),
        "main.yaml: --pack: rule pack pack.py: house/low: its sources are empty; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "sources that are a text",
        pack(PACK.replace('("invented",)', '"invented"')),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (TypeError: the sources of house/low are a "
        "tuple of texts, such as ('invented',), in line 13); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "no facts",
        pack(PACK.replace('facts=("rails",)', "facts=()")),
        "main.yaml: --pack: rule pack pack.py: house/low: its facts are empty; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an empty example",
        pack(PACK.replace('holds="rails: {}"', 'holds=""')),
        "main.yaml: --pack: rule pack pack.py: house/low: its example is empty; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an example that is a text",
        pack(PACK.replace('Example(fails="rails: {}", holds="rails: {}")', '"rails: {}"')),
        "main.yaml: --pack: rule pack pack.py: house/low: its example is no Example(fails=..., holds=...); "
        "correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a part of the rule that is missing",
        pack(PACK.replace('proves="Nothing.", ', "")),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (TypeError: rule() missing 1 required "
        "keyword-only argument: 'proves', in line 13); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a part of the rule that nobody knows",
        pack(PACK.replace('proves="Nothing."', 'proves="Nothing.", colour="red"')),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (TypeError: rule() got an unexpected keyword "
        "argument 'colour', in line 13); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a function of one argument",
        pack(PACK.replace("(rail, case)", "(rail)")),
        "main.yaml: --pack: rule pack pack.py: house/low: its function takes the element and the case; correct "
        "the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a function of three arguments",
        pack(PACK.replace("(rail, case)", "(rail, case, more)")),
        "main.yaml: --pack: rule pack pack.py: house/low: its function takes the element and the case; correct "
        "the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a generator",
        pack(PACK.replace("BODY", "yield case.passes('well')")),
        "main.yaml: --pack: rule pack pack.py: house/low: its function takes the element and the case; correct "
        "the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a coroutine",
        pack(PACK.replace("def low", "async def low")),
        "main.yaml: --pack: rule pack pack.py: house/low: its function takes the element and the case; correct "
        "the pack, or do not name it",
        call=BY_NAME,
    ),
)
