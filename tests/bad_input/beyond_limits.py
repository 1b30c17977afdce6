"""Descriptions beyond the limits. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, UV, Bad

ALIASES: Final = f"x-0: &x0 [{', '.join(['lorem ipsum'] * 100)}]\n" + "".join(
    f"x-{level}: &x{level} [{', '.join([f'*x{level - 1}'] * 10)}]\n" for level in range(1, 10)
)

STAGES: Final = UV + "}\noutput_stages:\n"
MANY: Final = 1001

BEYOND_LIMITS: Final = (
    Bad(
        "deep nesting",
        RAIL + "    x-a: " + "[" * 40 + "]" * 40 + "\n",
        "main.yaml:4:40: nested more than 32 levels deep; a description needs far fewer",
    ),
    Bad(
        "an alias inside what it stands for",
        RAIL + "    x-a: &a [*a]\n",
        "main.yaml:4:10: rails.avdd.x-a[0]: an alias (*) inside what it stands for; write the values out",
    ),
    Bad(
        "aliases without end",
        ALIASES,
        "main.yaml:1:1: aliases (*) make 1850 characters stand for more than 1000000; write the values out",
    ),
    Bad(
        "a hundred thousand brackets",
        RAIL + "x-a: " + "[" * 100_000 + "\n",
        "main.yaml:4:38: nested more than 32 levels deep; a description needs far fewer",
    ),
    Bad(
        "a hundred thousand braces",
        RAIL + "x-a: " + "{a: " * 100_000 + "\n",
        "main.yaml:4:134: nested more than 32 levels deep; a description needs far fewer",
    ),
    Bad(
        "a hundred thousand dashes",
        RAIL + "x-a:\n  " + "- " * 100_000 + "a\n",
        "main.yaml:5:67: nested more than 32 levels deep; a description needs far fewer",
    ),
    Bad(
        "a hundred thousand question marks",
        RAIL + "x-a:\n  " + "? " * 100_000 + "a\n",
        "main.yaml:5:67: nested more than 32 levels deep; a description needs far fewer",
    ),
    Bad(
        "two thousand indented keys",
        RAIL + "".join(" " * level + "x-a:\n" for level in range(2000)),
        "main.yaml:37:34: nested more than 32 levels deep; a description needs far fewer",
    ),
    Bad(
        "brackets that are all closed",
        RAIL + "x-a: " + "[" * 33 + "]" * 33 + "\n",
        "main.yaml:4:38: nested more than 32 levels deep; a description needs far fewer",
    ),
    Bad(
        "aliases of empty lists without end",
        RAIL
        + "x-0: &x0 ["
        + "[], " * 9
        + "[]]\n"
        + "".join(f"x-{n}: &x{n} [{', '.join([f'*x{n - 1}'] * 10)}]\n" for n in range(1, 9)),
        "main.yaml:1:1: aliases (*) make 564 characters stand for more than 1000000; write the values out",
    ),
    Bad(
        "aliases in a mapping of which each holds the one before twice",
        RAIL + "x-0: &x0 {a: b}\n" + "".join(f"x-{n}: &x{n} {{a: *x{n - 1}, b: *x{n - 1}}}\n" for n in range(1, 30)),
        "main.yaml:1:1: aliases (*) make 882 characters stand for more than 1000000; write the values out",
    ),
    Bad(
        "an alias of the whole file",
        "&a\n" + RAIL + "x-b: *a\n",
        "main.yaml:1:1: x-b: an alias (*) inside what it stands for; write the values out",
    ),
    Bad(
        "an alias of its section in an element",
        "rails: &a\n  avdd: *a\n",
        "main.yaml:1:8: rails.avdd: an alias (*) inside what it stands for; write the values out",
    ),
    Bad(
        "an alias of a mapping as its own key",
        RAIL + "x-a: &a {*a : 1}\n",
        "main.yaml:4:6: x-a: a key that is no plain text; write a name followed by a colon",
    ),
    Bad(
        "a text of more than ten thousand characters",
        RAIL + "    note: " + "x" * 10_001 + "\n",
        "main.yaml:4:11: rails.avdd.note: a text of 10001 characters, where at most 10000 are read; shorten it, "
        "or name the document that says it",
    ),
    Bad(
        "a text in quotes that is too long",
        RAIL + '    note: "' + "word " * 2_001 + '"\n',
        "main.yaml:4:11: rails.avdd.note: a text of 10005 characters, where at most 10000 are read; shorten it, "
        "or name the document that says it",
    ),
    Bad(
        "a block of text that is too long",
        RAIL + "    note: |\n" + "      word word word\n" * 1_000,
        "main.yaml:4:11: rails.avdd.note: a text of 15000 characters, where at most 10000 are read; shorten it, "
        "or name the document that says it",
    ),
    Bad(
        "a key of one's own that is too long",
        RAIL + "x-a: " + "y" * 10_001 + "\n",
        "main.yaml:4:6: x-a: a text of 10001 characters, where at most 10000 are read; shorten it, or name the "
        "document that says it",
    ),
    Bad(
        "a number of ten thousand and one digits",
        RAIL + "x-a: " + "9" * 10_001 + "\n",
        "main.yaml:4:6: x-a: a text of 10001 characters, where at most 10000 are read; shorten it, or name the "
        "document that says it",
    ),
    Bad(
        "a name of a thousand characters",
        "rails:\n  " + "n" * 1000 + ": {nominal: 1 V}\n",
        "main.yaml:2:3: rails: 'nnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnn...' is no name; a "
        "name has letters, digits, - and _, begins with a letter or _, and has at most 64 characters",
    ),
    Bad(
        "a quantity of a thousand digits",
        RAIL + "    damage: 2." + "0" * 1000 + " V\n",
        "main.yaml:4:13: rails.avdd.damage: '2.0000000000000000000000000000000000000000000000000000000000...' "
        "is longer than 64 characters; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a plain number beyond 1e300",
        "conditions: {power_cycles: 1e301}\n" + RAIL,
        "main.yaml:1:28: conditions.power_cycles: too large a number (found '1e301'); write a smaller one",
    ),
    Bad(
        "a plain number below what a number holds",
        "conditions: {false_trips: 1e-400}\n" + RAIL,
        "main.yaml:1:27: conditions.false_trips: too small a number (found '1e-400'); write a larger one",
    ),
    Bad(
        "a chain of seventeen includes",
        {"main.yaml": "include: [f1.yaml]\n", **{f"f{n}.yaml": f"include: [f{n + 1}.yaml]\n" for n in range(1, 20)}},
        "f16.yaml:1:11: include[0]: a chain of more than 16 includes (found 'f17.yaml'); include the files side "
        "by side",
    ),
)

ROWS: Final = (
    Bad(
        "a chain of output stages",
        STAGES + "".join(f"  s{n}: {{driven_by: [{f's{n - 1}' if n else 'uv'}]}}\n" for n in range(MANY)),
        "main.yaml:1006:3: output_stages.s999: more than 1000 elements stand in a row behind it; describe "
        "elements that decide nothing as one",
    ),
    Bad(
        "a ring of output stages",
        STAGES + "".join(f"  s{n}: {{driven_by: [s{(n - 1) % MANY}]}}\n" for n in range(MANY)),
        "main.yaml:7:3: output_stages.s0: more than 1000 elements lean on each other in a ring; describe "
        "elements that decide nothing as one",
    ),
    Bad(
        "a chain of references",
        RAIL
        + "references:\n"
        + "".join(
            f"  r{n}: {{leans_on: [{f'r{n - 1}' if n else ''}]}}\n".replace("[]", "[r1]")
            if n > 1
            else f"  r{n}: {{}}\n"
            for n in range(MANY + 1)
        ),
        "main.yaml:1006:3: references.r1001: more than 1000 elements stand in a row behind it; describe "
        "elements that decide nothing as one",
    ),
    Bad(
        "a ring of biases",
        RAIL + "biases:\n" + "".join(f"  b{n}: {{source: b{(n - 1) % MANY}}}\n" for n in range(MANY)),
        "main.yaml:5:3: biases.b0: more than 1000 elements lean on each other in a ring; describe elements that "
        "decide nothing as one",
    ),
    Bad(
        "rails of which each comes after the next",
        "rails:\n" + "".join(f"  a{n}: {{after: a{n + 1}}}\n" for n in range(MANY)) + f"  a{MANY}: {{nominal: 1 V}}\n",
        "main.yaml:3:3: rails.a1: more than 1000 elements stand in a row behind it; describe elements that "
        "decide nothing as one",
    ),
    Bad(
        "more detectors of one rail than are compared",
        RAIL + "comparators:\n" + "".join(f"  c{n}: {{role: under_voltage, watches: avdd}}\n" for n in range(101)),
        "main.yaml:2:3: rails.avdd: more than 100 detectors watch it (found 101); describe the codes of one "
        "detector as codes, or split the description",
    ),
    Bad(
        "a chain, traced",
        STAGES + "".join(f"  s{n}: {{driven_by: [{f's{n - 1}' if n else 'uv'}]}}\n" for n in range(MANY)),
        "main.yaml:1006:3: output_stages.s999: more than 1000 elements stand in a row behind it; describe "
        "elements that decide nothing as one",
        call="trace main.yaml uv",
    ),
    Bad(
        "a chain, in time",
        STAGES + "".join(f"  s{n}: {{driven_by: [{f's{n - 1}' if n else 'uv'}]}}\n" for n in range(MANY)),
        "main.yaml:1006:3: output_stages.s999: more than 1000 elements stand in a row behind it; describe "
        "elements that decide nothing as one",
        call="ramp main.yaml",
    ),
    Bad(
        "a chain, drawn",
        STAGES + "".join(f"  s{n}: {{driven_by: [{f's{n - 1}' if n else 'uv'}]}}\n" for n in range(MANY)),
        "main.yaml:1006:3: output_stages.s999: more than 1000 elements stand in a row behind it; describe "
        "elements that decide nothing as one",
        call="draw main.yaml graph",
    ),
)
"""Descriptions whose graph is beyond the limits."""
