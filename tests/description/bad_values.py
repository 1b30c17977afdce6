"""Bad values, and the whole message about each. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.description.bad_input import RAIL, UV, Bad

QUANTITIES: Final = (
    Bad(
        "a number without unit",
        RAIL + "    damage: 2.3\n",
        "main.yaml:4:13: rails.avdd.damage: 2.3 has no unit; write its unit, such as 2.3 V",
    ),
    Bad(
        "a number without unit in a span",
        RAIL + "    delivered: {min: 1.7, max: 1.9 V}\n",
        "main.yaml:4:22: rails.avdd.delivered.min: 1.7 has no unit; write its unit, such as 1.7 V",
    ),
    Bad(
        "a unit of another dimension",
        RAIL + "    damage: 2.3 mA\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 mA' is a current; write a voltage, such as 1.62 V",
    ),
    Bad(
        "a unit with the wrong capitals",
        RAIL + "    damage: 2.3 v\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 v' has the unknown unit 'v'; did you mean 2.3 V?",
    ),
    Bad(
        "a decimal comma",
        RAIL + "    damage: 2,3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2,3 V' has a decimal comma; write 2.3 V",
    ),
    Bad(
        "a decimal comma in braces splits the text",
        RAIL + "    delivered: {min: 1,7 V}\n",
        "main.yaml:4:22: rails.avdd.delivered.min: 1 has no unit; write its unit, such as 1 V\n"
        "main.yaml:4:24: rails.avdd.delivered: unknown key '7 V'; "
        "write a point in a decimal number: a comma parts entries",
    ),
    Bad(
        "a magnitude below zero",
        RAIL + "    damage: -2.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '-2.3 V' is negative; a magnitude is due here, zero or more",
    ),
    Bad(
        "not a number",
        RAIL + "    damage: nan V\n",
        "main.yaml:4:13: rails.avdd.damage: 'nan V' is not a finite number; "
        "write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "an endless number",
        RAIL + "    damage: .inf\n",
        "main.yaml:4:13: rails.avdd.damage: '.inf' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "an expression",
        RAIL + "    damage: 2 V + 0.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2 V + 0.3 V' is no voltage; "
        "write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "a span in the wrong order",
        RAIL + "    delivered: {min: 1.9 V, max: 1.7 V}\n",
        "main.yaml:4:16: rails.avdd.delivered: min 1.9 V, max 1.7 V are out of order; min <= typ <= max is due",
    ),
    Bad(
        "a span without values",
        RAIL + "    delivered: {basis: {by: measured}}\n",
        "main.yaml:4:16: rails.avdd.delivered: a span without values; give at least one of min, typ, max",
    ),
    Bad(
        "a span with a key that is not known",
        RAIL + "    delivered: {min: 1.7 V, maxi: 1.9 V}\n",
        "main.yaml:4:29: rails.avdd.delivered: unknown key 'maxi'; did you mean max?",
    ),
    Bad(
        "a list for a quantity",
        RAIL + "    delivered: [1.7 V, 1.9 V]\n",
        "main.yaml:4:16: rails.avdd.delivered: a list is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a mapping for a part of a span",
        RAIL + "    delivered: {min: {typ: 1.7 V}}\n",
        "main.yaml:4:22: rails.avdd.delivered.min: a mapping is no voltage; write it as in 1.62 V",
    ),
    Bad(
        "a switch word for a quantity",
        RAIL + "    damage: yes\n",
        "main.yaml:4:13: rails.avdd.damage: yes is read as true or false by some and as a word by "
        'others; write true or false, or put it in quotes: "yes"',
    ),
    Bad(
        "true for a quantity",
        RAIL + "    damage: true\n",
        "main.yaml:4:13: rails.avdd.damage: true is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a quantity too large for a number",
        RAIL + "    damage: 1e400 V\n",
        "main.yaml:4:13: rails.avdd.damage: '1e400 V' is too large a number; no voltage is that large",
    ),
    Bad(
        "a final line break",
        RAIL + '    damage: "2.3 V\\n"\n',
        "main.yaml:4:13: rails.avdd.damage: '2.3 V\\n' is not written plainly; write 2.3 V",
    ),
    Bad(
        "a very long quantity",
        RAIL + "    damage: " + "9" * 200 + " V\n",
        "main.yaml:4:13: rails.avdd.damage: "
        "'999999999999999999999999999999999999999999999999999999999999...' is longer than 64 "
        "characters; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a range written with a dash",
        RAIL + "    delivered: 1.7-1.9 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.7-1.9 V' is no voltage; write a range as {min: 1.7 V, max: 1.9 V}",
    ),
)

WORDS: Final = (
    Bad(
        "a switch word of YAML 1.1",
        RAIL + "output_stages:\n  out: {inverting: no}\n",
        "main.yaml:5:20: output_stages.out.inverting: no is read as true or false by some and as a word "
        'by others; write true or false, or put it in quotes: "no"',
    ),
    Bad(
        "a switch letter of YAML 1.1",
        RAIL + "    note: Y\n",
        "main.yaml:4:11: rails.avdd.note: Y is read as true or false by some and as a word by others; "
        'write true or false, or put it in quotes: "Y"',
    ),
    Bad(
        "a boolean in quotes",
        RAIL + "output_stages:\n  out: {inverting: 'true'}\n",
        "main.yaml:5:20: output_stages.out.inverting: true or false is due (found 'true'); "
        "write true or false, without quotes",
    ),
    Bad(
        "an octal number",
        RAIL + "output_stages:\n  out: {output: {vias: 010}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: '010' is read as decimal by some, as octal, "
        "hexadecimal or base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a number in base 60",
        RAIL + "    rise: 1:30\n",
        "main.yaml:4:11: rails.avdd.rise: '1:30' is read as decimal by some, as octal, hexadecimal or "
        "base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a hexadecimal number",
        UV + "divider: {ratio: 0x1}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: '0x1' is read as decimal by some, as octal, "
        "hexadecimal or base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a number beyond all bounds",
        UV + "divider: {ratio: 1e999}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: too large a number (found '1e999'); write a smaller one",
    ),
    Bad(
        "a number too small",
        UV + "divider: {ratio: 0}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: too small (found 0); more than 0 is due",
    ),
    Bad(
        "a number in quotes",
        UV + "divider: {ratio: '0.5'}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '0.5'); "
        "write it without quotes, as in 0.375",
    ),
    Bad(
        "a quantity for a plain number",
        UV + "divider: {ratio: 0.5 V}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '0.5 V'); write it as in 0.375",
    ),
    Bad(
        "part of a whole",
        RAIL + "output_stages:\n  out: {output: {vias: 2.5}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: a whole number is due (found 2.5); write it as in 2",
    ),
    Bad(
        "a float for a whole number",
        RAIL + "output_stages:\n  out: {output: {vias: 1e2}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: a whole number is due (found 100.0); write it as in 2",
    ),
    Bad(
        "a choice that is near a known one",
        RAIL + "output_stages:\n  out: {kind: shmitt}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found 'shmitt'); "
        "did you mean schmitt? choices: gain, inverter, buffer, schmitt, latch, level_shifter, filter, "
        "delay",
    ),
    Bad(
        "a choice with hyphens",
        RAIL + "domains:\n  aon: {rail: avdd, kind: always-on}\n",
        "main.yaml:5:27: domains.aon.kind: no such choice (found 'always-on'); "
        "did you mean always_on? choices: always_on, switched",
    ),
    Bad(
        "a choice far from any known one",
        RAIL + "domains:\n  aon: {rail: avdd, kind: blue}\n",
        "main.yaml:5:27: domains.aon.kind: no such choice (found 'blue'); choices: always_on, switched",
    ),
    Bad(
        "none with a capital",
        UV + "hysteresis: None}\n",
        "main.yaml:5:56: comparators.uv.hysteresis: neither none nor a mapping of keys (found 'None'); "
        "did you mean none? write none, or as in {amount: {min: 44 mV, typ: 50 mV, max: 56 mV}, "
        "made_by: switched_reference}",
    ),
    Bad(
        "a quantity for none or a mapping",
        UV + "hysteresis: 50 mV}\n",
        "main.yaml:5:56: comparators.uv.hysteresis: neither none nor a mapping of keys (found '50 mV'); "
        "write none, or as in {amount: {min: 44 mV, typ: 50 mV, max: 56 mV}, made_by: "
        "switched_reference}",
    ),
    Bad(
        "a number for a text",
        "revision: 1.10\nrails:\n  avdd:\n    nominal: 1.8 V\n",
        'main.yaml:1:11: revision: a text is due (found 1.1); put it in quotes: "1.1"',
    ),
    Bad(
        "an empty text",
        RAIL + "    note: ''\n",
        "main.yaml:4:11: rails.avdd.note: nothing in it (found ''); write it as in: agreed with layout",
    ),
    Bad(
        "a text for a list",
        RAIL + "output_stages:\n  out: {driven_by: uv}\n",
        "main.yaml:5:20: output_stages.out.driven_by: a list is due (found 'uv'); write [uv]",
    ),
    Bad(
        "a text for a section",
        RAIL + "domains: aon\n",
        "main.yaml:4:10: domains: a mapping of keys is due (found 'aon'); "
        "write it as in {aon: {rail: avdd, kind: always_on}}",
    ),
    Bad(
        "a list for a section",
        RAIL + "domains: [aon]\n",
        "main.yaml:4:10: domains: a mapping of keys is due (found a list); "
        "write it as in {aon: {rail: avdd, kind: always_on}}",
    ),
    Bad(
        "an empty entry of a list",
        RAIL + "output_stages:\n  out:\n    driven_by:\n      -\n",
        "main.yaml:7:8: output_stages.out.driven_by[0]: an empty entry of a list; remove it or fill it in",
    ),
    Bad(
        "a date that is none",
        RAIL + "waivers:\n  - {rule: a/b, element: avdd, why: agreed, agreed_by: board, until: 1.6.2027}\n",
        "main.yaml:5:70: waivers[0].until: '1.6.2027' does not fit; write it as in 2027-06-30",
    ),
    Bad(
        "a tag",
        RAIL + "    note: !!binary aGVsbG8=\n",
        "main.yaml:4:11: rails.avdd.note: a tag (found '!!binary'); remove it",
    ),
    Bad(
        "a character that is no text",
        RAIL + '    note: "\\e[31mred"\n',
        "main.yaml:4:11: rails.avdd.note: the character U+001B in a text; remove it",
    ),
    Bad(
        "half of a surrogate pair",
        RAIL + '    note: "\\ud800"\n',
        "main.yaml:4:11: rails.avdd.note: the character U+D800 in a text; remove it",
    ),
)
