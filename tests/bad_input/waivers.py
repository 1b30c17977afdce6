"""Waivers that cannot be used, or do not hold. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import CHIP, FOLDER, RAIL, Bad, Content

JSON: Final = "review --as json main.yaml"


def one(**changes: str | None) -> str:
    """A section with one waiver, whose entries can be changed or left out."""
    entries = {
        "rule": "bypass/readable", "element": "skip", "why": "seen at the pin", "agreed_by": "board",
        "until": "'2031-12-31'", **changes,
    }  # fmt: skip
    return f"waivers:\n  - {{{', '.join(f'{key}: {text}' for key, text in entries.items() if text is not None)}}}\n"


def shared(waivers: Content) -> dict[str, Content]:
    """A description under settings that name a file of waivers."""
    return {"main.yaml": CHIP, "tidegate.settings.yaml": "waivers: [agreed.yaml]\n", "agreed.yaml": waivers}


WAIVERS: Final = (
    Bad(
        "no reason",
        CHIP + one(why=None),
        "main.yaml:7:5: waivers[0]: no why; why is needed here, such as state is visible on the test port",
    ),
    Bad(
        "an empty reason",
        CHIP + one(why="''"),
        "main.yaml:7:49: waivers[0].why: nothing in it (found ''); write it as in: state is visible on the test port",
    ),
    Bad(
        "nobody who agreed",
        CHIP + one(agreed_by=None),
        "main.yaml:7:5: waivers[0]: no agreed_by; agreed_by is needed here, such as design review board",
    ),
    Bad(
        "no day",
        CHIP + one(until=None),
        "main.yaml:7:5: waivers[0]: no until; until is needed here, such as 2027-06-30",
    ),
    Bad(
        "no rule",
        CHIP + one(rule=None),
        "main.yaml:7:5: waivers[0]: no rule; rule is needed here, such as bypass/readable",
    ),
    Bad(
        "no element",
        CHIP + one(element=None),
        "main.yaml:7:5: waivers[0]: no element; element is needed here, such as skip_uv",
    ),
    Bad(
        "nothing",
        CHIP + "waivers:\n  - {}\n",
        "main.yaml:7:5: waivers[0]: no agreed_by; agreed_by is needed here, such as design review board\n"
        "main.yaml:7:5: waivers[0]: no element; element is needed here, such as skip_uv\n"
        "main.yaml:7:5: waivers[0]: no rule; rule is needed here, such as bypass/readable\n"
        "main.yaml:7:5: waivers[0]: no until; until is needed here, such as 2027-06-30\n"
        "main.yaml:7:5: waivers[0]: no why; why is needed here, such as state is visible on the test port",
    ),
    Bad(
        "an empty entry",
        CHIP + "waivers:\n  -\n",
        "main.yaml:7:4: waivers[0]: an empty entry of a list; remove it or fill it in",
    ),
    Bad(
        "an unknown key",
        CHIP + one(reason="seen at the pin", why=None),
        "main.yaml:7:5: waivers[0]: no why; why is needed here, such as state is visible on the test port\n"
        "main.yaml:7:83: waivers[0]: unknown key 'reason'; known here: rule, element, subsystem, why, "
        "agreed_by, until, margin, note; your own keys begin with x-",
    ),
    Bad(
        "a key given twice",
        CHIP + one().replace("why:", "rule: bypass/readable, why:"),
        "main.yaml:7:44: waivers[0].rule: given twice (first in line 7); keep one of them",
    ),
    Bad(
        "a rule that is a list",
        CHIP + one(rule="[bypass/readable]"),
        "main.yaml:7:12: waivers[0].rule: a text is due (found a list); write it as in bypass/readable",
    ),
    Bad(
        "a rule without its family",
        CHIP + one(rule="readable"),
        "main.yaml:7:5: no rule is called readable; remove the waiver, or correct the rule",
        call=JSON,
        status=1,
    ),
    Bad(
        "a rule with a star",
        CHIP + one(rule="'bypass/*'"),
        "main.yaml:7:5: no rule is called bypass/*; remove the waiver, or correct the rule",
        call=JSON,
        status=1,
    ),
    Bad(
        "an element that is a list",
        CHIP + one(element="[skip]"),
        "main.yaml:7:38: waivers[0].element: a text is due (found a list); write it as in skip_uv",
    ),
    Bad(
        "an element with its section",
        CHIP + one(element="bypasses.skip"),
        "main.yaml:7:5: no element is called bypasses.skip; remove the waiver, or correct the element",
        call=JSON,
        status=1,
    ),
    Bad(
        "a reason that is a number",
        CHIP + one(why="42"),
        'main.yaml:7:49: waivers[0].why: a text is due (found 42); put it in quotes: "42"',
    ),
    Bad(
        "a day that is no text",
        CHIP + one(until="20261231"),
        "main.yaml:7:91: waivers[0].until: a text is due (found 20261231); write it as in 2027-06-30",
    ),
    Bad(
        "a day without its zeros",
        CHIP + one(until="2031-1-1"),
        "main.yaml:7:91: waivers[0].until: '2031-1-1' does not fit; write it as in 2027-06-30",
    ),
    Bad(
        "a day with its time",
        CHIP + one(until="2031-01-01T12:00:00Z"),
        "main.yaml:7:91: waivers[0].until: '2031-01-01T12:00:00Z' does not fit; write it as in 2027-06-30",
    ),
    Bad(
        "forever",
        CHIP + one(until="never"),
        "main.yaml:7:91: waivers[0].until: 'never' does not fit; write it as in 2027-06-30",
    ),
    Bad(
        "a margin without unit",
        CHIP + one(margin="5"),
        'main.yaml:7:113: waivers[0].margin: a text is due (found 5); put it in quotes: "5"',
    ),
    Bad(
        "a margin that is a mapping",
        CHIP + one(margin="{min: 1 mV}"),
        "main.yaml:7:113: waivers[0].margin: a text is due (found a mapping); write it as in -3 mV",
    ),
    Bad(
        "waivers that are none",
        CHIP + "waivers: none\n",
        "main.yaml:6:10: waivers: none cannot be said here; write [] where there is none",
    ),
    Bad(
        "a day that is over",
        CHIP + one(until="2020-12-31"),
        "main.yaml:7:5: the waiver of bypass/readable on skip ended on 2020-12-31; mend the finding, or agree "
        "on it again",
        call=JSON,
        status=1,
    ),
    Bad(
        "a day that no calendar has",
        CHIP + one(until="2031-02-30"),
        "main.yaml:7:5: 2031-02-30 is no day of the calendar; write year-month-day",
        call=JSON,
        status=1,
    ),
    Bad(
        "the thirteenth month",
        CHIP + one(until="2031-13-01"),
        "main.yaml:7:91: waivers[0].until: '2031-13-01' does not fit; write it as in 2027-06-30",
        call=JSON,
    ),
    Bad(
        "a rule that nobody has",
        CHIP + one(rule="bypass/readible"),
        "main.yaml:7:5: no rule is called bypass/readible; remove the waiver, or correct the rule",
        call=JSON,
        status=1,
    ),
    Bad(
        "a family alone",
        CHIP + one(rule="bypass"),
        "main.yaml:7:5: no rule is called bypass; remove the waiver, or correct the rule",
        call=JSON,
        status=1,
    ),
    Bad(
        "an element that is not there",
        CHIP + one(element="skipp"),
        "main.yaml:7:5: no element is called skipp; remove the waiver, or correct the element",
        call=JSON,
        status=1,
    ),
    Bad(
        "an element that the rule does not judge",
        CHIP + one(element="uv"),
        "main.yaml:7:5: nothing is left to waive: bypass/readable does not judge it on uv; remove the waiver",
        call=JSON,
        status=1,
    ),
    Bad(
        "a rule that passes",
        CHIP.replace("readable: false", "readable: true") + one(),
        "main.yaml:7:5: nothing is left to waive: bypass/readable says pass on skip; remove the waiver",
        call=JSON,
        status=1,
    ),
    Bad(
        "one finding waived twice",
        CHIP + one() + one().removeprefix("waivers:\n"),
        "main.yaml:8:5: nothing is left to waive: another waiver covers bypass/readable on skip already; keep "
        "one of them",
        call=JSON,
        status=1,
    ),
    Bad(
        "a margin on a rule that has no number",
        CHIP + one(margin="-3 mV"),
        "main.yaml:7:5: agreed at a margin of -3 mV, but bypass/readable has no number on skip any more; mend "
        "the finding, or agree on it again as it is now",
        call=JSON,
        status=1,
    ),
    Bad(
        "a waiver of the waivers",
        CHIP + one(rule="waiver/still_right"),
        "main.yaml:7:5: nothing is left to waive: waiver/still_right does not judge it on skip; remove the waiver",
        call=JSON,
        status=1,
    ),
    Bad(
        "another subsystem",
        CHIP + one(subsystem="lamp"),
        "main.yaml:7:5: meant for the subsystem lamp; this is tide gauge; remove the waiver, or correct the subsystem",
        call=JSON,
        status=1,
    ),
    Bad(
        "a file with more than waivers",
        shared(RAIL + one()),
        "agreed.yaml:1:1: rails: a file of waivers holds nothing else; keep the section waivers only",
    ),
    Bad(
        "a file that is a list of waivers",
        shared("- {rule: a/b}\n"),
        "agreed.yaml:1:1: the file holds a list; begin with waivers:",
    ),
    Bad(
        "a file with an unknown section",
        shared("waiver: []\n"),
        "agreed.yaml:1:1: unknown key 'waiver'; did you mean waivers?",
    ),
    Bad(
        "a file with a fault in an entry",
        shared(one(why=None)),
        "agreed.yaml:2:5: waivers[0]: no why; why is needed here, such as state is visible on the test port",
    ),
    Bad("a file that is no YAML", shared("waivers: [\n"), "agreed.yaml:2:1: a { or [ without its end; close it"),
    Bad(
        "a file that is no text",
        shared(b"\x00\x01\x02\x03"),
        "agreed.yaml: the file is no text; name a description in YAML or JSON",
    ),
    Bad(
        "a file with a tag",
        shared("waivers: !!set {}\n"),
        "agreed.yaml:1:10: waivers: a tag (found '!!set'); remove it",
    ),
    Bad(
        "a file that is a folder",
        shared(FOLDER),
        "tidegate.settings.yaml:1:11: waivers[0]: a folder (found 'agreed.yaml'); name a file with a section waivers",
    ),
    Bad(
        "an element of this subsystem that is gone",
        shared(one(subsystem="tide gauge", element="gone")),
        "agreed.yaml:2:5: no element is called gone; remove the waiver, or correct the element",
        call=JSON,
        status=1,
    ),
    Bad(
        "a day of a shared waiver that is over",
        shared(one(until="2020-12-31")),
        "agreed.yaml:2:5: the waiver of bypass/readable on skip ended on 2020-12-31; mend the finding, or agree "
        "on it again",
        call=JSON,
        status=1,
    ),
)
