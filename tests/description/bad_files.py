"""Bad files, and the whole message about each. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.description.bad_input import RAIL, Bad

ALIASES: Final = f"x-0: &x0 [{', '.join(['lorem ipsum'] * 100)}]\n" + "".join(
    f"x-{level}: &x{level} [{', '.join([f'*x{level - 1}'] * 10)}]\n" for level in range(1, 10)
)

FILES: Final = (
    Bad(
        "an empty file",
        "",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "comments alone",
        "# nothing yet\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "null alone",
        "~\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "a list",
        "- a\n- b\n",
        "main.yaml:1:1: the file holds a list; begin with a section, such as rails:",
    ),
    Bad(
        "a text",
        "hello\n",
        "main.yaml:1:1: the file holds a text; begin with a section, such as rails:",
    ),
    Bad(
        "sections without elements",
        "subsystem: x\nrails:\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "a second document",
        RAIL + "---\nrails:\n  avdd:\n    nominal: 1.8 V\n",
        "main.yaml:4:1: a second document begins here; keep one description in a file; remove the ---",
    ),
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
        "an include that is a text",
        RAIL + "include: process.yaml\n",
        "main.yaml:4:10: include: a list is due (found 'process.yaml'); write [process.yaml]",
    ),
    Bad(
        "an include that is not there",
        RAIL + "include: [proces.yaml]\n",
        "main.yaml:4:11: include[0]: no such file (found 'proces.yaml'); did you mean 'process.yaml'?",
    ),
    Bad(
        "an include by an absolute path",
        RAIL + "include: [/etc/hostname]\n",
        "main.yaml:4:11: include[0]: leaves the folder of the description (found '/etc/hostname'); "
        "name a file below the folder of main.yaml",
    ),
    Bad(
        "an include outside the folder",
        RAIL + "include: [../process.yaml]\n",
        "main.yaml:4:11: include[0]: leaves the folder of the description (found '../process.yaml'); "
        "name a file below the folder of main.yaml",
    ),
    Bad(
        "an include of the file itself",
        RAIL + "include: [main.yaml]\n",
        "main.yaml:4:11: include[0]: a file that includes itself (found 'main.yaml'); remove one of the includes",
    ),
    Bad(
        "an include of a folder",
        RAIL + "include: ['.']\n",
        "main.yaml:4:11: include[0]: a folder (found '.'); name the files in it",
    ),
    Bad(
        "an include with an impossible name",
        RAIL + "include: [" + "n" * 300 + "]\n",
        "main.yaml:4:11: include[0]: no usable file name (found "
        "'nnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnn...'); "
        "name a file below the folder of main.yaml",
    ),
)

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
        "main.yaml:1:19: a text after the end of a value; put the whole value in one pair of quotes",
    ),
)

TOGETHER: Final = (
    Bad(
        "all faults at once, sorted by place",
        "rails:\n  avdd:\n    nominal: 1.8\n    delivered: on\n    nominal: 2 V\n    dammage: 3 V\n"
        "    after: bvdd\ndomains:\n  aon: {rail: avd}\n",
        "main.yaml:3:14: rails.avdd.nominal: 1.8 has no unit; write its unit, such as 1.8 V\n"
        "main.yaml:4:16: rails.avdd.delivered: on is read as true or false by some and as a word by "
        'others; write true or false, or put it in quotes: "on"\n'
        "main.yaml:5:5: rails.avdd.nominal: given twice (first in line 3); keep one of them\n"
        "main.yaml:6:5: rails.avdd: unknown key 'dammage'; did you mean damage?\n"
        "main.yaml:7:12: rails.avdd.after: no rail is called 'bvdd'; did you mean avdd?\n"
        "main.yaml:9:15: domains.aon.rail: no rail is called 'avd'; did you mean avdd?",
    ),
    Bad(
        "a section of another name does not make its names wrong",
        "rail:\n  avdd: {nominal: 1.8 V}\ndomains:\n  aon: {rail: avdd, kind: alway_on}\n",
        "main.yaml:1:1: unknown key 'rail'; did you mean rails?\n"
        "main.yaml:4:27: domains.aon.kind: no such choice (found 'alway_on'); "
        "did you mean always_on? choices: always_on, switched",
    ),
)
