"""Settings that cannot be used. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import CHIP, FOLDER, Bad, Content, Link


def under(settings: str | bytes, **more: Content) -> dict[str, Content]:
    """A description under these settings, and more files."""
    return {"main.yaml": CHIP, "tidegate.settings.yaml": settings, **more}


SETTINGS: Final = (
    Bad(
        "an unknown key",
        under("fail_att: error\n"),
        "tidegate.settings.yaml:1:1: unknown key 'fail_att'; did you mean fail_at?",
    ),
    Bad(
        "a key far from any known one",
        under("colour: true\n"),
        "tidegate.settings.yaml:1:1: unknown key 'colour'; known here: levels, least_margins, leave_out, "
        "fail_at, also, conditions, waivers, packs, packs_installed; your own keys begin with x-",
    ),
    Bad(
        "a key given twice",
        under("fail_at: error\nfail_at: note\n"),
        "tidegate.settings.yaml:2:1: fail_at: given twice (first in line 1); keep one of them",
    ),
    Bad(
        "a level that is none",
        under("fail_at: fatal\n"),
        "tidegate.settings.yaml:1:10: fail_at: no such choice (found 'fatal'); choices: error, warning, note",
    ),
    Bad(
        "a level with a capital",
        under("fail_at: Error\n"),
        "tidegate.settings.yaml:1:10: fail_at: no such choice (found 'Error'); did you mean error? choices: "
        "error, warning, note",
    ),
    Bad(
        "a level as a number",
        under("fail_at: 2\n"),
        "tidegate.settings.yaml:1:10: fail_at: no such choice (found 2); choices: error, warning, note",
    ),
    Bad(
        "a level that is a list",
        under("fail_at: [error]\n"),
        "tidegate.settings.yaml:1:10: fail_at: no such choice (found a list); did you mean error? choices: "
        "error, warning, note",
    ),
    Bad(
        "levels that are a list",
        under("levels: [hysteresis]\n"),
        "tidegate.settings.yaml:1:9: levels: a mapping of keys is due (found a list); write it as in "
        "{hysteresis/feedback_in_time: error}",
    ),
    Bad(
        "a level of a rule that is none",
        under("levels: {hysteresis: fatal}\n"),
        "tidegate.settings.yaml:1:22: levels.hysteresis: no such choice (found 'fatal'); choices: error, warning, note",
    ),
    Bad(
        "a level of a rule that is off",
        under("levels: {hysteresis: off}\n"),
        "tidegate.settings.yaml:1:22: levels.hysteresis: off is read as true or false by some and as a word by "
        'others; write true or false, or put it in quotes: "off"',
    ),
    Bad(
        "a level of a rule left empty",
        under("levels: {hysteresis: }\n"),
        "tidegate.settings.yaml:1:10: levels.hysteresis: no value; give it one, or remove the key",
    ),
    Bad(
        "a level of a rule that nobody has",
        under("levels: {hysteresis/presant: note}\n"),
        "tidegate.settings.yaml:1:10: levels: no rule or family is called 'hysteresis/presant'; did you mean "
        "hysteresis/present?",
    ),
    Bad(
        "a level of a family that nobody has",
        under("levels: {histeresis: note}\n"),
        "tidegate.settings.yaml:1:10: levels: no rule or family is called 'histeresis'; did you mean hysteresis?",
    ),
    Bad(
        "a rule in capitals",
        under("levels: {HYSTERESIS: note}\n"),
        "tidegate.settings.yaml:1:10: levels: 'HYSTERESIS' does not fit; write it as in hysteresis/false_trips",
    ),
    Bad(
        "a rule with a dot",
        under("levels: {hysteresis.present: note}\n"),
        "tidegate.settings.yaml:1:10: levels: 'hysteresis.present' does not fit; write it as in hysteresis/false_trips",
    ),
    Bad(
        "a rule with a star",
        under("levels: {'hysteresis/*': note}\n"),
        "tidegate.settings.yaml:1:10: levels: 'hysteresis/*' does not fit; write it as in hysteresis/false_trips",
    ),
    Bad(
        "a rule left out that nobody has",
        under("leave_out: [bypas]\n"),
        "tidegate.settings.yaml:1:13: leave_out: no rule or family is called 'bypas'; did you mean bypass?",
    ),
    Bad(
        "what is left out as a text",
        under("leave_out: coupling\n"),
        "tidegate.settings.yaml:1:12: leave_out: a list is due (found 'coupling'); write [coupling]",
    ),
    Bad(
        "what is left out as a mapping",
        under("leave_out: {coupling: true}\n"),
        "tidegate.settings.yaml:1:12: leave_out: a list is due (found a mapping); write it as in [electromigration]",
    ),
    Bad(
        "a number left out",
        under("leave_out: [5]\n"),
        "tidegate.settings.yaml:1:13: leave_out[0]: a text is due (found 5); write it as in hysteresis/false_trips",
    ),
    Bad(
        "one rule left out twice",
        under("leave_out: [coupling, coupling]\n"),
        "tidegate.settings.yaml:1:12: leave_out: a list that names something twice; keep one of them",
    ),
    Bad(
        "a margin that is a plain number",
        under("least_margins: {bypass: 5}\n"),
        'tidegate.settings.yaml:1:25: least_margins.bypass: a text is due (found 5); put it in quotes: "5"',
    ),
    Bad(
        "a margin that is no quantity",
        under("least_margins: {bypass: some}\n"),
        "tidegate.settings.yaml:1:25: least_margins.bypass: 'some' is no margin; write a quantity, such as 5 "
        "mV, or a share of the need, such as 2 %",
    ),
    Bad(
        "a margin below zero",
        under("least_margins: {bypass: -1 %}\n"),
        "tidegate.settings.yaml:1:25: least_margins.bypass: '-1 %' is less than a rule asks for by itself; "
        "write zero or more, or leave it out",
    ),
    Bad(
        "a margin with a decimal comma",
        under("least_margins: {bypass: '1,5 %'}\n"),
        "tidegate.settings.yaml:1:25: least_margins.bypass: '1,5 %' is no margin; write a quantity, such as 5 "
        "mV, or a share of the need, such as 2 %",
    ),
    Bad(
        "a margin that is a range",
        under("least_margins: {bypass: {min: 1 %}}\n"),
        "tidegate.settings.yaml:1:25: least_margins.bypass: a text is due (found a mapping); write it as in 5 mV",
    ),
    Bad(
        "a margin of a rule that nobody has",
        under("least_margins: {zzz/zzz: 1 %}\n"),
        "tidegate.settings.yaml:1:17: least_margins: no rule or family is called 'zzz/zzz'; tidegate rules lists them",
    ),
    Bad(
        "a kind that cannot be added",
        under("also: [pass]\n"),
        "tidegate.settings.yaml:1:8: also[0]: no such choice (found 'pass'); choices: open, review",
    ),
    Bad(
        "a kind that is a text",
        under("also: open\n"),
        "tidegate.settings.yaml:1:7: also: a list is due (found 'open'); write [open]",
    ),
    Bad(
        "one kind twice",
        under("also: [open, open]\n"),
        "tidegate.settings.yaml:1:7: also: a list that names something twice; keep one of them",
    ),
    Bad(
        "conditions out of order",
        under("conditions: {junction_temperature: {min: 125 degC, max: -40 degC}}\n"),
        "tidegate.settings.yaml:1:36: conditions.junction_temperature: min 125 degC, max -40 degC are out of "
        "order; min <= typ <= max is due",
    ),
    Bad(
        "conditions with a wrong unit",
        under("conditions: {service_life: 10 V}\n"),
        "tidegate.settings.yaml:1:28: conditions.service_life: '10 V' is a voltage; write a duration, such as 20 us",
    ),
    Bad(
        "conditions that are not known",
        under("conditions: {humidity: 50 %}\n"),
        "tidegate.settings.yaml:1:14: conditions: unknown key 'humidity'; known here: junction_temperature, "
        "service_life, power_cycles, combine, coverage, false_trips, note; your own keys begin with x-",
    ),
    Bad(
        "conditions that are a text",
        under("conditions: worst\n"),
        "tidegate.settings.yaml:1:13: conditions: a mapping of keys is due (found 'worst'); write it as in "
        "{combine: worst_case, coverage: 3}",
    ),
    Bad(
        "a list for the file",
        under("- fail_at: error\n"),
        "tidegate.settings.yaml:1:1: the file holds a list; begin with a key, such as fail_at:",
    ),
    Bad(
        "a text for the file",
        under("error\n"),
        "tidegate.settings.yaml:1:1: the file holds a text; begin with a key, such as fail_at:",
    ),
    Bad(
        "a file that is no YAML",
        under("fail_at: {error\n"),
        "tidegate.settings.yaml:2:1: a comma or } is missing here, for the { in line 1; close it, with a comma "
        "between its entries",
    ),
    Bad(
        "a file that is no text",
        under(b"\x00\x01\x02\x03\x04"),
        "tidegate.settings.yaml: the file is no text; name a description in YAML or JSON",
    ),
    Bad(
        "a file in UTF-16",
        under("fail_at: error\n".encode("utf-16")),
        "tidegate.settings.yaml:1:1: the file is UTF-16 or UTF-32; save it as UTF-8",
    ),
    Bad("a file with a tab", under("levels:\n\thysteresis: note\n"), "tidegate.settings.yaml:2:1: a tab; use spaces"),
    Bad(
        "nesting without end",
        under("x-a: " + "[" * 100_000 + "\n"),
        "tidegate.settings.yaml:1:38: nested more than 32 levels deep; a description needs far fewer",
    ),
    Bad(
        "aliases without end",
        under(
            "x-0: &x0 ["
            + "[], " * 9
            + "[]]\n"
            + "".join(f"x-{n}: &x{n} [{', '.join([f'*x{n - 1}'] * 10)}]\n" for n in range(1, 9))
        ),
        "tidegate.settings.yaml:1:1: aliases (*) make 530 characters stand for more than 1000000; write the values out",
    ),
    Bad(
        "a tag",
        under("fail_at: !!python/name:os.system error\n"),
        "tidegate.settings.yaml:1:10: fail_at: a tag (found '!!python/name:os.system'); remove it",
    ),
    Bad(
        "a merge key",
        under("<<: {fail_at: error}\n"),
        "tidegate.settings.yaml:1:1: a merge key (<<); write the values out, or use include",
    ),
    Bad(
        "a section of a description",
        under("rails: {avdd: {nominal: 1 V}}\n"),
        "tidegate.settings.yaml:1:1: unknown key 'rails'; known here: levels, least_margins, leave_out, "
        "fail_at, also, conditions, waivers, packs, packs_installed; your own keys begin with x-",
    ),
    Bad(
        "a waiver file that is not there",
        under("waivers: [no.yaml]\n"),
        "tidegate.settings.yaml:1:11: waivers[0]: no such file (found 'no.yaml'); name a file with a section waivers",
    ),
    Bad(
        "a waiver file that is a folder",
        under("waivers: [agreed]\n", agreed=FOLDER),
        "tidegate.settings.yaml:1:11: waivers[0]: a folder (found 'agreed'); name a file with a section waivers",
    ),
    Bad(
        "a waiver file that is a link to nothing",
        under("waivers: [w.yaml]\n", **{"w.yaml": Link("nowhere")}),
        "tidegate.settings.yaml:1:11: waivers[0]: no such file (found 'w.yaml'); name a file with a section waivers",
    ),
    Bad(
        "a waiver file that is a text",
        under("waivers: w.yaml\n"),
        "tidegate.settings.yaml:1:10: waivers: a list is due (found 'w.yaml'); write [w.yaml]",
    ),
    Bad(
        "a waiver in the settings",
        under("waivers: [{rule: bypass/readable}]\n"),
        "tidegate.settings.yaml:1:11: waivers[0]: a text is due (found a mapping); write it as in waivers.yaml",
    ),
    Bad(
        "a waiver file with an empty name",
        under("waivers: ['']\n"),
        "tidegate.settings.yaml:1:11: waivers[0]: nothing in it (found ''); write it as in: waivers.yaml",
    ),
    Bad(
        "a waiver file with a null in its name",
        under('waivers: ["a\\0b"]\n'),
        "tidegate.settings.yaml:1:11: waivers[0]: the character U+0000 is not allowed in a text; remove it",
    ),
    Bad(
        "a pack that is not there",
        under("packs: [no.py]\n"),
        "tidegate.settings.yaml:1:9: packs[0]: rule pack no.py: no such file; correct the pack, or do not name it",
    ),
    Bad(
        "packs that are a text",
        under("packs: no.py\n"),
        "tidegate.settings.yaml:1:8: packs: a list is due (found 'no.py'); write [no.py]",
    ),
    Bad(
        "a settings file that is named and not there",
        {"main.yaml": CHIP},
        "no.yaml: cannot be read (No such file or directory); name a file",
        call="review --settings no.yaml main.yaml",
    ),
    Bad(
        "a settings file that is a folder",
        {"main.yaml": CHIP, "s": FOLDER},
        "s: cannot be read (Is a directory); name a file",
        call="review --settings s main.yaml",
    ),
    Bad(
        "a settings file that is a link to itself",
        {"main.yaml": CHIP, "s.yaml": Link("s.yaml")},
        "s.yaml: cannot be read (Too many levels of symbolic links); name a file",
        call="review --settings s.yaml main.yaml",
    ),
    Bad(
        "a settings file that is named and wrong",
        {"main.yaml": CHIP, "s.yaml": "fail_at: fatal\n"},
        "s.yaml:1:10: fail_at: no such choice (found 'fatal'); choices: error, warning, note",
        call="margins --settings s.yaml main.yaml",
    ),
    Bad(
        "wrong settings of a comparison",
        {"main.yaml": CHIP, "s.yaml": "fail_at: fatal\n"},
        "s.yaml:1:10: fail_at: no such choice (found 'fatal'); choices: error, warning, note",
        call="compare --settings s.yaml main.yaml main.yaml",
    ),
    Bad(
        "wrong settings of a placement",
        {"main.yaml": CHIP, "s.yaml": "fail_at: fatal\n"},
        "s.yaml:1:10: fail_at: no such choice (found 'fatal'); choices: error, warning, note",
        call="place --settings s.yaml main.yaml",
    ),
    Bad(
        "wrong settings of a picture",
        {"main.yaml": CHIP, "s.yaml": "fail_at: fatal\n"},
        "s.yaml:1:10: fail_at: no such choice (found 'fatal'); choices: error, warning, note",
        call="draw --settings s.yaml main.yaml graph",
    ),
    Bad(
        "a description for settings",
        {"main.yaml": CHIP},
        "main.yaml:1:1: unknown key 'subsystem'; known here: levels, least_margins, leave_out, fail_at, also, "
        "conditions, waivers, packs, packs_installed; your own keys begin with x-\n"
        "main.yaml:2:1: unknown key 'rails'; known here: levels, least_margins, leave_out, fail_at, also, "
        "conditions, waivers, packs, packs_installed; your own keys begin with x-\n"
        "main.yaml:3:1: unknown key 'domains'; known here: levels, least_margins, leave_out, fail_at, also, "
        "conditions, waivers, packs, packs_installed; your own keys begin with x-\n"
        "main.yaml:4:1: unknown key 'comparators'; known here: levels, least_margins, leave_out, fail_at, also, "
        "conditions, waivers, packs, packs_installed; your own keys begin with x-\n"
        "main.yaml:5:1: unknown key 'bypasses'; known here: levels, least_margins, leave_out, fail_at, also, "
        "conditions, waivers, packs, packs_installed; your own keys begin with x-",
        call="review --settings main.yaml main.yaml",
    ),
    Bad(
        "a wrong file of settings two folders above",
        {"a/b/main.yaml": CHIP, "tidegate.settings.yaml": "fail_at: fatal\n"},
        "tidegate.settings.yaml:1:10: fail_at: no such choice (found 'fatal'); choices: error, warning, note",
        call="review a/b/main.yaml",
    ),
    Bad(
        "a folder in the place of the settings",
        {"main.yaml": CHIP, "tidegate.settings.yaml": FOLDER},
        "tidegate.settings.yaml: cannot be read (Is a directory); name a file",
    ),
    Bad(
        "a link to nothing in the place of the settings",
        {"main.yaml": CHIP, "tidegate.settings.yaml": Link("gone.yaml")},
        "tidegate.settings.yaml: cannot be read (No such file or directory); name a file",
    ),
    Bad(
        "a link to itself in the place of the settings",
        {"main.yaml": CHIP, "tidegate.settings.yaml": Link("tidegate.settings.yaml")},
        "tidegate.settings.yaml: cannot be read (Too many levels of symbolic links); name a file",
    ),
)
