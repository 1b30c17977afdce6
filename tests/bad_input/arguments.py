"""Command lines that cannot be understood, or name nothing. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import CHIP, FOLDER, Bad, Link

ARGUMENTS: Final = (
    Bad(
        "a file that is not there",
        CHIP,
        "missing.yaml: cannot be read (No such file or directory); name a description in YAML or JSON",
        call="review missing.yaml",
    ),
    Bad(
        "a file with a near name",
        CHIP,
        "mian.yaml: cannot be read (No such file or directory); did you mean 'main.yaml'?",
        call="review mian.yaml",
    ),
    Bad(
        "a folder without a description",
        {"main.yaml": CHIP, "sub": FOLDER},
        "sub: the folder holds no description; descriptions in a folder have names that end in .tidegate.yaml, "
        ".tidegate.yml, .tidegate.json",
        call="review sub",
    ),
    Bad(
        "a pattern that matches nothing",
        CHIP,
        "*.tidegate.yaml: no file matches; check the pattern",
        call="review *.tidegate.yaml",
    ),
    Bad(
        "a link to itself",
        {"main.yaml": CHIP, "loop.yaml": Link("loop.yaml")},
        "loop.yaml: cannot be read (links that lead back to themselves); name a description in YAML or JSON",
        call="review loop.yaml",
    ),
    Bad(
        "a link to nothing",
        {"main.yaml": CHIP, "gone.yaml": Link("nowhere.yaml")},
        "gone.yaml: cannot be read (No such file or directory); name a description in YAML or JSON",
        call="review gone.yaml",
    ),
    Bad(
        "a file below a file",
        CHIP,
        "main.yaml/x: cannot be read (Not a directory); name a description in YAML or JSON",
        call="review main.yaml/x",
    ),
    Bad(
        "a name that is too long",
        CHIP,
        f"{'n' * 300}: cannot be read (File name too long); name a description in YAML or JSON",
        call="review " + "n" * 300,
    ),
    Bad(
        "an address",
        CHIP,
        "https://example.invalid/main.yaml: cannot be read (No such file or directory); name a description in "
        "YAML or JSON",
        call="review https://example.invalid/main.yaml",
    ),
    Bad(
        "nothing",
        CHIP,
        "tidegate review: the following arguments are required: FILE\ntidegate review --help shows what can be said",
        call="review",
    ),
    Bad(
        "a command that is none",
        CHIP,
        "tidegate: COMMAND: no such choice (found 'revieuw'); did you mean review? choices: review, margins, "
        "place, ramp, rules, draw, trace, start, compare, schema, completion\n"
        "tidegate --help shows what can be said",
        call="revieuw main.yaml",
    ),
    Bad(
        "no command",
        CHIP,
        "tidegate: the following arguments are required: COMMAND\ntidegate --help shows what can be said",
        call="",
    ),
    Bad(
        "an option that is none",
        CHIP,
        "tidegate review: unrecognized arguments: --colour\ntidegate review --help shows what can be said",
        call="review --colour main.yaml",
    ),
    Bad(
        "part of an option",
        CHIP,
        "tidegate review: unrecognized arguments: --sav\ntidegate review --help shows what can be said",
        call="review --sav out.json main.yaml",
    ),
    Bad(
        "a form that is none",
        CHIP,
        "tidegate review: --as: no such choice (found 'postcard'); choices: terminal, json, sarif, markdown, "
        "html\n"
        "tidegate review --help shows what can be said",
        call="review --as postcard main.yaml",
    ),
    Bad(
        "a level that is none",
        CHIP,
        "tidegate review: --fail-at: no such choice (found 'fatal'); choices: error, warning, note\n"
        "tidegate review --help shows what can be said",
        call="review --fail-at fatal main.yaml",
    ),
    Bad(
        "a kind that is none",
        CHIP,
        "tidegate review: --also: no such choice (found 'pass'); choices: open, review\n"
        "tidegate review --help shows what can be said",
        call="review --also pass main.yaml",
    ),
    Bad(
        "no workers",
        CHIP,
        "tidegate review: argument --workers: a whole number is due, at least 1 (found '0')\n"
        "tidegate review --help shows what can be said",
        call="review --workers 0 main.yaml",
    ),
    Bad(
        "workers in words",
        CHIP,
        "tidegate review: argument --workers: a whole number is due, at least 1 (found 'many')\n"
        "tidegate review --help shows what can be said",
        call="review --workers many main.yaml",
    ),
    Bad(
        "an option without its value",
        CHIP,
        "tidegate review: argument --save: expected one argument\ntidegate review --help shows what can be said",
        call="review main.yaml --save",
    ),
    Bad(
        "margins of nothing",
        CHIP,
        "missing.yaml: cannot be read (No such file or directory); name a description in YAML or JSON",
        call="margins missing.yaml",
    ),
    Bad(
        "margins of an element that is not there",
        CHIP,
        "main.yaml: no element is called 'uw'; known: avdd, aon, uv, skip",
        call="margins main.yaml --element uw",
    ),
    Bad(
        "margins of a family that is not there",
        CHIP,
        "main.yaml: no family of rules is called 'histeresis'; did you mean hysteresis?",
        call="margins main.yaml --family histeresis",
    ),
    Bad(
        "a place for a detector that is not there",
        CHIP,
        "main.yaml: no power-on, under- or over-voltage detector is called 'uw'; known: uv",
        call="place main.yaml uw",
    ),
    Bad(
        "a place for what is no detector",
        CHIP,
        "main.yaml: no power-on, under- or over-voltage detector is called 'aon'; known: uv",
        call="place main.yaml aon",
    ),
    Bad(
        "samples without a yield", CHIP, "--samples and --seed belong to --yield", call="place main.yaml uv --samples 5"
    ),
    Bad(
        "no samples",
        CHIP,
        "tidegate place: argument --samples: from 1 to 10000000 parts can be drawn (found '0')\n"
        "tidegate place --help shows what can be said",
        call="place main.yaml uv --yield --samples 0",
    ),
    Bad(
        "samples without end",
        CHIP,
        "tidegate place: argument --samples: from 1 to 10000000 parts can be drawn (found "
        "'99999999999999999999')\n"
        "tidegate place --help shows what can be said",
        call="place main.yaml uv --yield --samples 99999999999999999999",
    ),
    Bad(
        "samples in words",
        CHIP,
        "tidegate place: argument --samples: from 1 to 10000000 parts can be drawn (found 'many')\n"
        "tidegate place --help shows what can be said",
        call="place main.yaml uv --yield --samples many",
    ),
    Bad(
        "a seed in words",
        CHIP,
        "tidegate place: argument --seed: a whole number of at most 9 digits is due (found 'one')\n"
        "tidegate place --help shows what can be said",
        call="place main.yaml uv --yield --seed one",
    ),
    Bad(
        "a seed below zero",
        CHIP,
        "tidegate place: argument --seed: a whole number of at most 9 digits is due (found '-1')\n"
        "tidegate place --help shows what can be said",
        call="place main.yaml uv --yield --seed -1",
    ),
    Bad(
        "a scenario that is not there",
        CHIP,
        "main.yaml: no scenario is called 'plug_in'; known: none",
        call="ramp main.yaml --scenario plug_in",
    ),
    Bad(
        "an override that is not there",
        CHIP,
        "main.yaml: no override is called 'skipp'; did you mean skip?",
        call="ramp main.yaml --override skipp",
    ),
    Bad(
        "an override of what is no bypass",
        CHIP,
        "main.yaml: no override is called 'uv'; known: skip",
        call="ramp main.yaml --override uv",
    ),
    Bad(
        "a picture that is none",
        CHIP,
        "tidegate draw: PICTURE: no such choice (found 'table'); choices: ladder, timeline, graph\n"
        "tidegate draw --help shows what can be said",
        call="draw main.yaml table",
    ),
    Bad(
        "a ladder of a rail that is not there",
        CHIP,
        "no rail with a ladder is called 'avd'; known: none",
        call="draw main.yaml ladder --of avd",
    ),
    Bad(
        "a timeline of a scenario that is not there",
        CHIP,
        "no scenario is called 'plug_in'; known: none",
        call="draw main.yaml timeline --of plug_in",
    ),
    Bad(
        "a graph of one element",
        CHIP,
        "--of: a graph is drawn whole; it names a rail of a ladder or a scenario of a timeline",
        call="draw main.yaml graph --of uv",
    ),
    Bad(
        "a ladder in another form",
        CHIP,
        "--as dot: only the graph can be written so; a ladder is drawn as svg",
        call="draw main.yaml ladder --as dot",
    ),
    Bad(
        "an element that is not there",
        CHIP,
        "main.yaml: no element is called 'uw'; known: avdd, aon, uv, skip",
        call="trace main.yaml uw",
    ),
    Bad(
        "an element with its section",
        CHIP,
        "main.yaml: no element is called 'comparators.uv'; known: avdd, aon, uv, skip",
        call="trace main.yaml comparators.uv",
    ),
    Bad(
        "a rule that is not there",
        CHIP,
        "no rule or family is called 'hysteresis/presant'; did you mean hysteresis/present?",
        call="rules hysteresis/presant",
    ),
    Bad(
        "a family that is not there",
        CHIP,
        "no rule or family is called 'histeresis'; did you mean hysteresis?",
        call="rules histeresis",
    ),
    Bad(
        "a rule of one's own that is not there",
        CHIP,
        "no rule or family is called 'house/low'; tidegate rules lists them",
        call="rules house/low",
    ),
    Bad(
        "a comparison with what is not there",
        CHIP,
        "missing.yaml: cannot be read (No such file or directory); name a description in YAML or JSON",
        call="compare main.yaml missing.yaml",
    ),
    Bad(
        "a comparison with a wrong description",
        {"main.yaml": CHIP, "b.yaml": "rails: 5\n"},
        "b.yaml:1:8: rails: a mapping of keys is due (found 5); write it as in {avdd: {nominal: 1.8 V, "
        "delivered: {min: 1.71 V, max: 1.89 V}}}",
        call="compare main.yaml b.yaml",
    ),
    Bad(
        "a comparison with a report",
        {"main.yaml": CHIP, "b.json": '{"version": 1, "files": []}'},
        "b.json:1:2: unknown key 'version'; did you mean revision?\n"
        "b.json:1:16: unknown key 'files'; known here: include, subsystem, revision, invented, note, "
        "conditions, process, rails, domains, references, biases, comparators, output_stages, resets, loads, "
        "modes, bypasses, neighbours, scenarios, complete, waivers; your own keys begin with x-",
        call="compare b.json main.yaml",
    ),
    Bad(
        "a comparison with JSON that breaks off",
        {"main.yaml": CHIP, "b.json": '{"rails": {"avdd": '},
        "b.json:1:20: a { or [ without its end; close it",
        call="compare main.yaml b.json",
    ),
    Bad(
        "a comparison with a list in JSON",
        {"main.yaml": CHIP, "b.json": "[]"},
        "b.json:1:1: the file holds a list; begin with a section, such as rails:",
        call="compare main.yaml b.json",
    ),
    Bad(
        "a comparison with JSON of one's own keys alone",
        {"main.yaml": CHIP, "b.json": '{"x-a": 1}'},
        "b.json: the file describes no element; tidegate start writes a starter",
        call="compare main.yaml b.json",
    ),
    Bad(
        "a comparison with nesting without end",
        {"main.yaml": CHIP, "b.json": '{"x-a": ' + "[" * 100_000},
        "b.json:1:41: nested more than 32 levels deep; a description needs far fewer",
        call="compare main.yaml b.json",
    ),
    Bad(
        "a comparison with a folder",
        {"main.yaml": CHIP, "sub": FOLDER},
        "sub: cannot be read (Is a directory); name a description in YAML or JSON",
        call="compare main.yaml sub",
    ),
    Bad(
        "a document of which there is none",
        CHIP,
        "tidegate schema: which: no such choice (found 'rules'); choices: description, settings, report, "
        "comparison\n"
        "tidegate schema --help shows what can be said",
        call="schema rules",
    ),
    Bad(
        "a shell that is none",
        CHIP,
        "tidegate completion: shell: no such choice (found 'powershell'); choices: bash, zsh, tcsh\n"
        "tidegate completion --help shows what can be said",
        call="completion powershell",
    ),
)
