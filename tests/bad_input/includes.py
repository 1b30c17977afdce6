"""Includes that cannot be followed. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import FOLDER, RAIL, Bad, Link

INCLUDES: Final = (
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
        "main.yaml:4:11: include[0]: leaves the folder of the description (found '/etc/hostname'); name a file "
        "below the folder of main.yaml",
    ),
    Bad(
        "an include outside the folder",
        RAIL + "include: [../process.yaml]\n",
        "main.yaml:4:11: include[0]: leaves the folder of the description (found '../process.yaml'); name a "
        "file below the folder of main.yaml",
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
        "'nnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnn...'); name a file below the folder of "
        "main.yaml",
    ),
    Bad(
        "an include in another spelling of the file itself",
        RAIL + "include: [./main.yaml]\n",
        "main.yaml:4:11: include[0]: a file that includes itself (found './main.yaml'); remove one of the includes",
    ),
    Bad(
        "an include by a way round of the file itself",
        {"main.yaml": RAIL + "include: [sub/../main.yaml]\n", "sub": FOLDER},
        "main.yaml:4:11: include[0]: a file that includes itself (found 'sub/../main.yaml'); remove one of the "
        "includes",
    ),
    Bad(
        "an include by a link of the file itself",
        {"main.yaml": RAIL + "include: [same.yaml]\n", "same.yaml": Link("main.yaml")},
        "main.yaml:4:11: include[0]: a file that includes itself (found 'same.yaml'); remove one of the includes",
    ),
    Bad(
        "two files that include each other",
        {"main.yaml": RAIL + "include: [b.yaml]\n", "b.yaml": "include: [main.yaml]\n"},
        "b.yaml:1:11: include[0]: a file that includes itself (found 'main.yaml'); remove one of the includes",
    ),
    Bad(
        "three files in a ring",
        {"main.yaml": RAIL + "include: [b.yaml]\n", "b.yaml": "include: [c.yaml]\n", "c.yaml": "include: [b.yaml]\n"},
        "c.yaml:1:11: include[0]: a file that includes itself (found 'b.yaml'); remove one of the includes",
    ),
    Bad(
        "a link that leaves the folder",
        {"main.yaml": RAIL + "include: [out.yaml]\n", "out.yaml": Link("/etc/hostname")},
        "main.yaml:4:11: include[0]: leaves the folder of the description (found 'out.yaml'); name a file below "
        "the folder of main.yaml",
    ),
    Bad(
        "a folder that is a link out of the folder",
        {"main.yaml": RAIL + "include: [out/hostname]\n", "out": Link("/etc")},
        "main.yaml:4:11: include[0]: leaves the folder of the description (found 'out/hostname'); name a file "
        "below the folder of main.yaml",
    ),
    Bad(
        "a link to nothing",
        {"main.yaml": RAIL + "include: [gone.yaml]\n", "gone.yaml": Link("nowhere.yaml")},
        "main.yaml:4:11: include[0]: no such file (found 'gone.yaml'); name a description in YAML or JSON",
    ),
    Bad(
        "a link to itself",
        {"main.yaml": RAIL + "include: [loop.yaml]\n", "loop.yaml": Link("loop.yaml")},
        "main.yaml:4:11: include[0]: links that lead back to themselves (found 'loop.yaml'); name a file below "
        "the folder of main.yaml",
    ),
    Bad(
        "an include out of the folder and in again",
        {"sub/main.yaml": RAIL + "include: [../sub/x.yaml, ../process.yaml]\n", "sub/x.yaml": "x-a: 1\n"},
        "sub/main.yaml:4:26: include[1]: leaves the folder of the description (found '../process.yaml'); name a "
        "file below the folder of sub/main.yaml",
        call="review sub/main.yaml",
    ),
    Bad(
        "a device",
        RAIL + "include: [/dev/zero]\n",
        "main.yaml:4:11: include[0]: leaves the folder of the description (found '/dev/zero'); name a file "
        "below the folder of main.yaml",
    ),
    Bad(
        "an empty name",
        RAIL + "include: ['']\n",
        "main.yaml:4:11: include[0]: a folder (found ''); name the files in it",
    ),
    Bad(
        "a name with a null",
        RAIL + 'include: ["a\\0b"]\n',
        "main.yaml:4:11: include[0]: the character U+0000 is not allowed in a text; remove it",
    ),
    Bad(
        "a name with a line break",
        RAIL + 'include: ["process.yaml\\n"]\n',
        "main.yaml:4:11: include[0]: no such file (found 'process.yaml\\n'); did you mean 'process.yaml'?",
    ),
    Bad(
        "a name with other slashes",
        RAIL + "include: ['sub\\process.yaml']\n",
        "main.yaml:4:11: include[0]: no such file (found 'sub\\\\process.yaml'); did you mean 'process.yaml'?",
    ),
    Bad(
        "a name with other capitals",
        RAIL + "include: [Process.yaml]\n",
        "main.yaml:4:11: include[0]: no such file (found 'Process.yaml'); did you mean 'process.yaml'?",
    ),
    Bad(
        "a name without its ending",
        RAIL + "include: [process]\n",
        "main.yaml:4:11: include[0]: no such file (found 'process'); did you mean 'process.yaml'?",
    ),
    Bad(
        "a pattern",
        RAIL + "include: ['*.yaml']\n",
        "main.yaml:4:11: include[0]: no such file (found '*.yaml'); name a description in YAML or JSON",
    ),
    Bad(
        "the home of the user",
        RAIL + "include: ['~/process.yaml']\n",
        "main.yaml:4:11: include[0]: no such file (found '~/process.yaml'); name a description in YAML or JSON",
    ),
    Bad(
        "a variable",
        RAIL + "include: ['$KIT/process.yaml']\n",
        "main.yaml:4:11: include[0]: no such file (found '$KIT/process.yaml'); name a description in YAML or JSON",
    ),
    Bad(
        "an address",
        RAIL + "include: ['https://example.invalid/process.yaml']\n",
        "main.yaml:4:11: include[0]: no such file (found 'https://example.invalid/process.yaml'); name a "
        "description in YAML or JSON",
    ),
    Bad(
        "a number",
        RAIL + "include: [5]\n",
        'main.yaml:4:11: include[0]: a text is due (found 5); put it in quotes: "5"',
    ),
    Bad(
        "a mapping",
        RAIL + "include: [{file: process.yaml}]\n",
        "main.yaml:4:11: include[0]: a text is due (found a mapping); write it as in process.yaml",
    ),
    Bad(
        "a mapping for the list",
        RAIL + "include: {process: process.yaml}\n",
        "main.yaml:4:10: include: a list is due (found a mapping); write it as in [process.yaml]",
    ),
    Bad(
        "a tag",
        RAIL + "include: !include process.yaml\n",
        "main.yaml:4:10: include: a tag (found '!include'); remove it",
    ),
    Bad(
        "an include in a section",
        RAIL + "process:\n  include: [process.yaml]\n",
        "main.yaml:5:3: process: unknown key 'include'; known here: kit, activation_energy, current_exponent, "
        "plain_edge, layers, vias, devices, resistors, capacitors, diodes, source, note; your own keys begin "
        "with x-",
    ),
    Bad(
        "a file that is no text",
        {"main.yaml": RAIL + "include: [b.yaml]\n", "b.yaml": b"\x00\x01\x02\x03"},
        "b.yaml: the file is no text; name a description in YAML or JSON",
    ),
    Bad(
        "a file in UTF-16",
        {"main.yaml": RAIL + "include: [b.yaml]\n", "b.yaml": "rails: {}".encode("utf-16")},
        "b.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8",
    ),
    Bad(
        "a file that is a list",
        {"main.yaml": RAIL + "include: [b.yaml]\n", "b.yaml": "- a\n"},
        "b.yaml:1:1: the file holds a list; begin with a section, such as rails:",
    ),
    Bad(
        "a file that breaks off",
        {"main.yaml": RAIL + "include: [b.yaml]\n", "b.yaml": "rails: {bvdd: {nominal: 1 V\n"},
        "b.yaml:2:1: a comma or } is missing here, for the { in line 1; close it, with a comma between its entries",
    ),
    Bad(
        "a file with a fault in it",
        {"main.yaml": RAIL + "include: [sub/b.yaml]\n", "sub/b.yaml": "rails: {bvdd: {nominal: 1}}\n"},
        "sub/b.yaml:1:25: rails.bvdd.nominal: 1 has no unit; write its unit, such as 1 V",
    ),
    Bad(
        "an element that stands in both files",
        {"main.yaml": RAIL + "include: [b.yaml]\n", "b.yaml": "rails: {avdd: {nominal: 2 V}}\n"},
        "b.yaml:1:9: rails.avdd: given twice (first at main.yaml:2:3); keep one of them",
    ),
    Bad(
        "a fact that stands in both files",
        {"main.yaml": "subsystem: a\n" + RAIL + "include: [b.yaml]\n", "b.yaml": "subsystem: b\n"},
        "b.yaml:1:1: subsystem: given twice (first at main.yaml:1:1); keep one of them",
    ),
    Bad(
        "an anchor of another file",
        {"main.yaml": "x-a: &a 1 V\n" + RAIL + "include: [b.yaml]\n", "b.yaml": "rails: {bvdd: {nominal: *a}}\n"},
        "b.yaml:1:25: an alias (*) of an anchor (&) that is not there; write the value out",
    ),
    Bad(
        "a settings file",
        {"main.yaml": RAIL + "include: [s.yaml]\n", "s.yaml": "fail_at: error\n"},
        "s.yaml:1:1: unknown key 'fail_at'; known here: include, subsystem, revision, invented, note, "
        "conditions, process, rails, domains, references, biases, comparators, output_stages, resets, loads, "
        "modes, bypasses, neighbours, scenarios, complete, waivers; your own keys begin with x-",
    ),
    Bad(
        "a name that points into no file",
        {"main.yaml": RAIL + "include: [b.yaml]\n", "b.yaml": "domains: {aon: {rail: bvdd}}\n"},
        "b.yaml:1:23: domains.aon.rail: no rail is called 'bvdd'; did you mean avdd?",
    ),
    Bad(
        "one file twice, with a name that is not there",
        RAIL + "include: [process.yaml, process.yaml, proc.yaml]\n",
        "main.yaml:4:39: include[2]: no such file (found 'proc.yaml'); did you mean 'process.yaml'?",
    ),
)
