"""Text that is no YAML. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, Bad

SYNTAX: Final = (
    Bad(
        "a tab in the indentation",
        "rails:\n\tavdd:\n\t\tnominal: 1.8 V\n",
        "main.yaml:2:1: a tab; use spaces",
    ),
    Bad(
        "a tab before a value",
        RAIL + "    damage:\t2.3 V\n",
        "main.yaml:4:12: a tab; use spaces",
    ),
    Bad(
        "a brace that is not closed",
        RAIL + "    delivered: {min: 1.7 V\n    damage: 2.3 V\n",
        "main.yaml:5:11: a comma or } is missing here, for the { in line 4; close it, with a comma between its entries",
    ),
    Bad(
        "a bracket that is not closed",
        RAIL + "output_stages:\n  out: {driven_by: [uv}\n",
        "main.yaml:5:23: a comma or ] is missing here, for the [ in line 5; close it, with a comma between its entries",
    ),
    Bad(
        "a brace that closes nothing",
        RAIL + "    damage: 2.3 V}\n    note: }\n",
        "main.yaml:5:11: '}' without what it belongs to; remove it, or put the text in quotes",
    ),
    Bad(
        "a comma that is missing",
        RAIL + "    delivered: {min: 1.7 V max: 1.9 V}\n",
        "main.yaml:4:31: a comma or } is missing here, for the { in line 4; close it, with a comma between its entries",
    ),
    Bad(
        "two commas",
        RAIL + "output_stages:\n  out: {driven_by: [uv,, ov]}\n",
        "main.yaml:5:24: a comma with nothing before it; remove it",
    ),
    Bad(
        "a quote that is not closed",
        RAIL + '    note: "see review\n    damage: 2.3 V\n',
        "main.yaml:4:11: a quoted text without its end; close the quote",
    ),
    Bad(
        "a second value",
        RAIL + "    delivered: {min: 1.7 V}{max: 1.9 V}\n",
        "main.yaml:4:28: '{' after a value, or indented as no line above; write one value for each key",
    ),
    Bad(
        "text after a quote",
        RAIL + '    note: "see" review\n',
        "main.yaml:4:17: a text after the end of a value; put the whole value in one pair of quotes",
    ),
    Bad(
        "an escape that is none",
        RAIL + '    note: "C:\\quiet"\n',
        "main.yaml:4:15: an unknown escape after a backslash; write \\\\ for a backslash, or use single quotes",
    ),
    Bad(
        "two colons in a line",
        RAIL + "    note: see: review\n",
        "main.yaml:4:14: a second colon in one line; put the value in quotes, or begin a new line",
    ),
    Bad(
        "a line without a colon",
        RAIL + "  bvdd\n    nominal: 1 V\n",
        "main.yaml:4:3: a line without a key and a colon (found 'bvdd'); write key: value",
    ),
    Bad(
        "a key below a value",
        RAIL + "      damage: 2.3 V\n",
        "main.yaml:4:7: a key that is indented too far, below a value; align it with the key above",
    ),
    Bad(
        "indentation that fits nothing",
        RAIL + "   damage: 2.3 V\n",
        "main.yaml:4:4: the indentation does not fit the lines above; align it with its neighbours",
    ),
    Bad(
        "a list entry in the line of its key",
        RAIL + "waivers: - rule: a/b\n",
        "main.yaml:4:10: a list entry (-) in the line of its key; begin it in a new line",
    ),
    Bad(
        "a text that begins with @",
        RAIL + "    note: @review\n",
        "main.yaml:4:11: a text cannot begin with '@'; put the text in quotes",
    ),
    Bad(
        "a text that begins with *",
        RAIL + "    note: *important*\n",
        "main.yaml:4:11: a text cannot begin with '*'; put the text in quotes",
    ),
    Bad(
        "a text that begins with !",
        RAIL + "    note: !<x\n",
        "main.yaml:4:11: a text cannot begin with '!'; put the text in quotes",
    ),
    Bad(
        "a text that begins with >",
        RAIL + "    note: >5 V is too much\n",
        "main.yaml:4:11: nothing may follow > or | in its line; put the text in quotes",
    ),
    Bad(
        "a text that begins with ?",
        RAIL + "    note: ? why\n",
        "main.yaml:4:11: a ? that cannot stand here; put the text in quotes",
    ),
    Bad(
        "an alias without its anchor",
        RAIL + "    note: *a\n",
        "main.yaml:4:11: an alias (*) of an anchor (&) that is not there; write the value out",
    ),
    Bad(
        "an anchor set twice",
        RAIL + "    note: &a text\n    x-b: &a text\n",
        "main.yaml:5:10: an anchor (&) is set twice (first in line 4); give it another name",
    ),
    Bad(
        "a directive",
        "%YAML 2.0\n---\nrails:\n  avdd:\n    nominal: 1.8 V\n",
        "main.yaml:1:1: a line that begins with %; remove it",
    ),
    Bad(
        "a merge that was not settled",
        "<<<<<<< HEAD\n" + RAIL + "=======\n" + RAIL + ">>>>>>> theirs\n",
        "main.yaml:1:1: a mark of a merge that was not settled; settle it",
    ),
    Bad(
        "a colon without a key",
        RAIL + "    : 1 V\n",
        "main.yaml:4:5: a colon without its key; write key: value",
    ),
    Bad(
        "text after the end",
        "{rails: {avdd: }} x\n",
        "main.yaml:1:19: text after the end of the description; keep one description in a file; remove it",
    ),
    Bad(
        "a tab before a key in braces",
        RAIL + "    ripple: {\tpeak_to_peak: 10 mV}\n",
        "main.yaml:4:14: a tab; use spaces",
    ),
    Bad("a tab at the end of a line", "rails:\t\n  avdd:\n    nominal: 1.8 V\n", "main.yaml:1:7: a tab; use spaces"),
    Bad("a tab after a dash", RAIL + "waivers:\n  -\trule: a/b\n", "main.yaml:5:4: a tab; use spaces"),
    Bad("spaces, then a tab", "rails:\n  avdd:\n  \t  nominal: 1.8 V\n", "main.yaml:3:3: a tab; use spaces"),
    Bad(
        "a second document after its end mark",
        RAIL + "...\n---\n" + RAIL,
        "main.yaml:5:1: a second document begins here; keep one description in a file; remove the ---",
    ),
    Bad(
        "a text after the end mark",
        RAIL + "...\ndomains: {}\n",
        "main.yaml:5:1: text after the end of the description; keep one description in a file; remove it",
    ),
    Bad(
        "a directive with a tag handle",
        "%TAG ! tag:example.invalid,2026:\n---\n" + RAIL + "    note: !x y\n",
        "main.yaml:6:11: rails.avdd.note: a tag (found 'tag:example.invalid,2026:x'); remove it",
    ),
    Bad(
        "two directives of the version",
        "%YAML 1.1\n%YAML 1.1\n---\n" + RAIL,
        "main.yaml:2:1: a line that begins with %; remove it",
    ),
    Bad(
        "a directive in the middle",
        RAIL + "%YAML 1.2\n",
        "main.yaml:5:1: text after the end of the description; keep one description in a file; remove it",
    ),
    Bad(
        "a block of text with a number for its indentation",
        RAIL + "    note: |0\n      text\n",
        "main.yaml:4:11: nothing may follow > or | in its line; put the text in quotes",
    ),
    Bad(
        "a block of text that is not indented",
        RAIL + "    note: |\n    text\n",
        "main.yaml:5:5: a line without a key and a colon (found 'text'); write key: value",
    ),
    Bad(
        "a quote inside quotes",
        RAIL + "    note: 'it's here'\n",
        "main.yaml:4:15: a text after the end of a value; put the whole value in one pair of quotes",
    ),
    Bad(
        "a quote that ends too early",
        RAIL + '    note: "5" below nominal\n',
        "main.yaml:4:15: a text after the end of a value; put the whole value in one pair of quotes",
    ),
    Bad(
        "a double quote that is not closed in braces",
        RAIL + '    delivered: {min: "1.7 V, max: 1.9 V}\n',
        "main.yaml:4:22: a quoted text without its end; close the quote",
    ),
    Bad(
        "a quoted key without its colon",
        RAIL + '    "note" text\n',
        "main.yaml:4:5: a line without a key and a colon (found '\"note\" text'); write key: value",
    ),
    Bad(
        "an escape of a letter that is too short",
        RAIL + '    note: "\\u12"\n',
        "main.yaml:4:14: an unknown escape after a backslash; write \\\\ for a backslash, or use single quotes",
    ),
    Bad(
        "an escape of hexadecimal digits that are none",
        RAIL + '    note: "\\xzz"\n',
        "main.yaml:4:14: an unknown escape after a backslash; write \\\\ for a backslash, or use single quotes",
    ),
    Bad(
        "a backquote", RAIL + "    note: `x`\n", "main.yaml:4:11: a text cannot begin with '`'; put the text in quotes"
    ),
    Bad(
        "a percent sign before a value",
        RAIL + "    accuracy: %5\n",
        "main.yaml:4:15: a text cannot begin with '%'; put the text in quotes",
    ),
    Bad(
        "a text that begins with &",
        RAIL + "    note: & more\n",
        "main.yaml:4:11: a text cannot begin with '&'; put the text in quotes",
    ),
    Bad(
        "an anchor without a value at the end of braces",
        RAIL + "    ripple: {frequency: &}\n",
        "main.yaml:4:25: a text cannot begin with '&'; put the text in quotes",
    ),
    Bad(
        "an anchor on an alias",
        RAIL + "    note: &a x\n    x-b: &b *a\n",
        "main.yaml:5:13: '*' after a value, or indented as no line above; write one value for each key",
    ),
    Bad(
        "square brackets that are crossed with braces",
        RAIL + "output_stages:\n  out: {driven_by: [uv}]\n",
        "main.yaml:5:23: a comma or ] is missing here, for the [ in line 5; close it, with a comma between its entries",
    ),
    Bad(
        "a closing bracket too many",
        RAIL + "output_stages:\n  out: {driven_by: [uv]]}\n",
        "main.yaml:5:24: a comma or } is missing here, for the { in line 5; close it, with a comma between its entries",
    ),
    Bad(
        "braces never closed at the end of the file",
        RAIL + "domains: {aon: {rail: avdd\n",
        "main.yaml:5:1: a comma or } is missing here, for the { in line 4; close it, with a comma between its entries",
    ),
    Bad(
        "a colon at the end of a value",
        RAIL + "    damage: 2.3 V:\n",
        "main.yaml:4:18: a second colon in one line; put the value in quotes, or begin a new line",
    ),
    Bad(
        "a mapping in the line of its key",
        RAIL + "domains: aon: {rail: avdd}\n",
        "main.yaml:4:13: a second colon in one line; put the value in quotes, or begin a new line",
    ),
    Bad(
        "a dash without a space",
        RAIL + "waivers:\n  -rule: a/b\n",
        "main.yaml:5:3: waivers: a list is due (found a mapping); write it as in [{rule: bypass/readable, ...}]",
    ),
    Bad(
        "a list item below a mapping entry",
        RAIL + "    damage: 2 V\n    - avdd\n",
        "main.yaml:5:5: the indentation does not fit the lines above; align it with its neighbours",
    ),
    Bad(
        "a mapping entry below a list",
        RAIL + "waivers:\n  - rule: a/b\n  element: uv\n",
        "main.yaml:6:3: the indentation does not fit the lines above; align it with its neighbours",
    ),
    Bad(
        "an entry indented by one blank more",
        RAIL + "domains:\n  aon:\n    rail: avdd\n     kind: always_on\n",
        "main.yaml:7:6: a key that is indented too far, below a value; align it with the key above",
    ),
    Bad(
        "an entry indented by one blank less",
        RAIL + "domains:\n  aon:\n    rail: avdd\n   kind: always_on\n",
        "main.yaml:7:4: the indentation does not fit the lines above; align it with its neighbours",
    ),
    Bad(
        "the first section indented",
        "  rails:\n    avdd: {nominal: 1.8 V}\ndomains: {}\n",
        "main.yaml:3:1: text after the end of the description; keep one description in a file; remove it",
    ),
    Bad(
        "a comment without its space swallowed by a value",
        RAIL + "    damage: 2.3 V#worst case\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 V#worst case' is no voltage; put a space before the # of a comment",
    ),
    Bad(
        "equals signs for colons",
        "rails:\n  avdd:\n    nominal = 1.8 V\n",
        "main.yaml:3:5: rails.avdd: a mapping of keys is due (found 'nominal = 1.8 V'); write it as in "
        "{nominal: 1.8 V, delivered: {min: 1.71 V, max: 1.89 V}}",
    ),
    Bad(
        "semicolons at the ends of lines",
        "rails: {\n  avdd: {nominal: 1.8 V};\n}\n",
        "main.yaml:2:25: a comma or } is missing here, for the { in line 1; close it, with a comma between its entries",
    ),
    Bad(
        "a JSON text with a comment",
        '{"rails": {"avdd": {"nominal": "1.8 V"}} // core\n}\n',
        "main.yaml:1:42: a comma or } is missing here, for the { in line 1; close it, with a comma between its entries",
    ),
    Bad(
        "a JSON text that breaks off",
        '{"rails": {"avdd": {"nominal": "1.8 V"',
        "main.yaml:1:39: a comma or } is missing here, for the { in line 1; close it, with a comma between its entries",
    ),
    Bad(
        "a JSON text with two commas",
        '{"rails": {"avdd": {"nominal": "1.8 V"}},, "domains": {}}\n',
        "main.yaml:1:42: a comma with nothing before it; remove it",
    ),
    Bad(
        "marks of a merge in the middle",
        RAIL + "<<<<<<< HEAD\n    damage: 2 V\n=======\n    damage: 3 V\n>>>>>>> b\n",
        "main.yaml:4:1: a mark of a merge that was not settled; settle it",
    ),
    Bad(
        "a question mark for a key that has no value",
        "rails:\n  ? avdd\n  ? [vcore]\n",
        "main.yaml:3:5: rails: a key that is no plain text; write a name followed by a colon",
    ),
    Bad("old line ends with a fault", "rails:\r  avdd:\r\tnominal: 1.8 V\r", "main.yaml:3:1: a tab; use spaces"),
    Bad(
        "line ends of Windows with a fault",
        "rails:\r\n  avdd:\r\n    nominal: 1.8 V}\r\n    damage: }\r\n",
        "main.yaml:4:13: '}' without what it belongs to; remove it, or put the text in quotes",
    ),
    Bad(
        "a typed text",
        "rails:\n  avdd: !!python/object:os.system {nominal: 1.8 V}\n",
        "main.yaml:2:9: rails.avdd: a tag (found '!!python/object:os.system'); remove it",
    ),
    Bad(
        "a Python call",
        "rails: !!python/object/apply:os.system ['true']\n",
        "main.yaml:1:8: rails: a tag (found '!!python/object/apply:os.system'); remove it",
    ),
    Bad("a set", "rails: !!set {avdd}\n", "main.yaml:1:8: rails: a tag (found '!!set'); remove it"),
    Bad(
        "an ordered mapping",
        "rails: !!omap [avdd: {nominal: 1.8 V}]\n",
        "main.yaml:1:8: rails: a tag (found '!!omap'); remove it",
    ),
    Bad(
        "a tag of one's own on a quantity",
        RAIL + "    damage: !volt 2.3\n",
        "main.yaml:4:13: rails.avdd.damage: a tag (found '!volt'); remove it",
    ),
    Bad(
        "a text forced to be a number",
        RAIL + "    damage: !!float 2.3\n",
        "main.yaml:4:13: rails.avdd.damage: a tag (found '!!float'); remove it",
    ),
    Bad("a tag on the whole file", "!chip\n" + RAIL, "main.yaml:1:1: a tag (found '!chip'); remove it"),
    Bad(
        "a tag on a key",
        "rails:\n  avdd:\n    !!str nominal: 1.8 V\n",
        "main.yaml:3:5: rails.avdd: a key that is no plain text; write a name followed by a colon",
    ),
    Bad(
        "a JSON text that is closed by the wrong bracket",
        '{"rails": {"avdd": {"nominal": "1.8 V"},\n]',
        "main.yaml:2:1: ']' where something else is open; close what was opened last",
    ),
    Bad(
        "a list that is closed by the wrong brace",
        RAIL + "output_stages:\n  out: {driven_by: [uv, }}\n",
        "main.yaml:5:25: '}' where something else is open; close what was opened last",
    ),
)
