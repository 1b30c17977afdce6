"""Rule packs that cannot be used, and rules that misbehave. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import CHIP, FOLDER, Bad, Content, Link

BY_NAME: Final = "review --pack pack.py main.yaml"
JUDGED: Final = "review --as json --pack pack.py main.yaml"
PACK: Final = """\
from msgspec.structs import replace

from tidegate.lint.judgement import Level
from tidegate.lint.quantity import Dimension
from tidegate.lint.rule import Example, rule


class Mute(Exception):
    def __str__(self):
        raise ValueError


@rule(
    "house/low", title="rails are low", level=Level.ERROR, applies_to="rails", proves="Nothing.", facts=("rails",),
    mend="lower it", sources=("invented",), example=Example(fails="rails: {}", holds="rails: {}"),
)
def low(rail, case):
    BODY


RULES = (low,)
"""


def pack(content: str | bytes | None) -> dict[str, Content]:
    """A description, and a rule pack beside it."""
    files: dict[str, Content] = {"main.yaml": CHIP}
    if content is None:
        return files
    text = content.replace("BODY", "return case.passes('well')") if isinstance(content, str) else content
    return {**files, "pack.py": text}


PACKS: Final = (
    Bad(
        "no such file",
        pack(None),
        "main.yaml: --pack: rule pack no.py: no such file; correct the pack, or do not name it",
        call="review --pack no.py main.yaml",
    ),
    Bad(
        "a folder",
        {"main.yaml": CHIP, "pack.py": FOLDER},
        "main.yaml: --pack: rule pack pack.py: a folder; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a link to nothing",
        {"main.yaml": CHIP, "pack.py": Link("nowhere.py")},
        "main.yaml: --pack: rule pack pack.py: no such file; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a link to itself",
        {"main.yaml": CHIP, "pack.py": Link("pack.py")},
        "main.yaml: --pack: rule pack pack.py: cannot be read (Too many levels of symbolic links); correct the "
        "pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a device",
        {"main.yaml": CHIP, "pack.py": Link("/dev/zero")},
        "main.yaml: --pack: rule pack pack.py: a pipe or a device; correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "another kind of file",
        {"main.yaml": CHIP, "pack.txt": "RULES = ()\n"},
        "main.yaml: --pack: rule pack pack.txt: not a Python file (its name ends in .py); correct the pack, or "
        "do not name it",
        call="review --pack pack.txt main.yaml",
    ),
    Bad(
        "more than a mebibyte",
        pack("#" * 2**21),
        "main.yaml: --pack: rule pack pack.py: too large (found 2.0 MiB, at most 1 MiB are read); correct the "
        "pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an empty file",
        pack(""),
        "main.yaml: --pack: rule pack pack.py: RULES must be a tuple of rules, at least one; correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "what is no Python",
        pack("def f(:\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (SyntaxError: invalid syntax (pack.py, line "
        "1)); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a tab among blanks",
        pack("if 1:\n        a = 1\n\tb = 2\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (TabError: inconsistent use of tabs and spaces "
        "in indentation (pack.py, line 3)); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a module that is not there",
        pack("import no_such_module\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (ModuleNotFoundError: No module named "
        "'no_such_module', in line 1); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an error while it is loaded",
        pack("\n1 / 0\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (ZeroDivisionError: division by zero, in line "
        "2); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an error in a function while it is loaded",
        pack("def f():\n    return {}['a']\n\nf()\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (KeyError: 'a', in line 2); correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an exit while it is loaded",
        pack("import sys\nsys.exit(0)\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (SystemExit: 0, in line 2); correct the pack, "
        "or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an exit of another kind",
        pack("raise BaseException('gone')\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (BaseException: gone, in line 1); correct the "
        "pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an error without words",
        pack("raise ValueError\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (ValueError, in line 1); correct the pack, or "
        "do not name it",
        call=BY_NAME,
    ),
    Bad(
        "an error of many lines",
        pack("raise ValueError('one\\ntwo\\x1b[31m')\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (ValueError: one\\u000atwo\\u001b[31m, in line "
        "1); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "a call of itself without end",
        pack("def f():\n    f()\nf()\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (RecursionError: maximum recursion depth "
        "exceeded, in line 2); correct the pack, or do not name it",
        call=BY_NAME,
    ),
    Bad(
        "two packs of one family",
        pack(PACK) | {"other.py": PACK},
        "main.yaml: --pack: rule pack other.py: house/low: the family house is taken; a pack has families of "
        "its own; correct the pack, or do not name it",
        call="review --pack pack.py --pack other.py main.yaml",
    ),
    Bad(
        "one pack twice",
        pack(PACK),
        "main.yaml: --pack: rule pack pack.py: house/low: the family house is taken; a pack has families of its "
        "own; correct the pack, or do not name it",
        call="review --pack pack.py --pack pack.py main.yaml",
    ),
    Bad(
        "a pack of the settings",
        pack("1 / 0\n") | {"tidegate.settings.yaml": "fail_at: error\npacks: [pack.py]\n"},
        "tidegate.settings.yaml:2:9: packs[0]: rule pack pack.py: cannot be loaded (ZeroDivisionError: division "
        "by zero, in line 1); correct the pack, or do not name it",
    ),
    Bad(
        "a pack of the settings that is not there",
        {"main.yaml": CHIP, "tidegate.settings.yaml": "packs:\n  - house.py\n"},
        "tidegate.settings.yaml:2:5: packs[0]: rule pack house.py: no such file; correct the pack, or do not name it",
    ),
    Bad(
        "a pack that is not installed",
        {"main.yaml": CHIP, "tidegate.settings.yaml": "packs_installed: [nobody]\n"},
        "tidegate.settings.yaml:1:19: packs_installed[0]: rule pack nobody: not installed; installed: none; "
        "correct the pack, or do not name it",
    ),
    Bad(
        "a pack of the settings that is a number",
        {"main.yaml": CHIP, "tidegate.settings.yaml": "packs: [5]\n"},
        'tidegate.settings.yaml:1:9: packs[0]: a text is due (found 5); put it in quotes: "5"',
    ),
    Bad(
        "the catalogue with a wrong pack",
        pack("1 / 0\n"),
        "rule pack pack.py: cannot be loaded (ZeroDivisionError: division by zero, in line 1)",
        call="rules --pack pack.py",
    ),
    Bad(
        "a comparison with a wrong pack",
        pack("1 / 0\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (ZeroDivisionError: division by zero, in line "
        "1); correct the pack, or do not name it",
        call="compare --pack pack.py main.yaml main.yaml",
    ),
    Bad(
        "margins with a wrong pack",
        pack("1 / 0\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (ZeroDivisionError: division by zero, in line "
        "1); correct the pack, or do not name it",
        call="margins --pack pack.py main.yaml",
    ),
    Bad(
        "a picture with a wrong pack",
        pack("1 / 0\n"),
        "main.yaml: --pack: rule pack pack.py: cannot be loaded (ZeroDivisionError: division by zero, in line "
        "1); correct the pack, or do not name it",
        call="draw --pack pack.py main.yaml graph",
    ),
)
