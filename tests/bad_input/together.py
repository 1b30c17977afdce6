"""Several faults at once. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import Bad

TOGETHER: Final = (
    Bad(
        "all faults at once, sorted by place",
        "rails:\n  avdd:\n    nominal: 1.8\n    delivered: on\n    nominal: 2 V\n    dammage: 3 V\n"
        "    after: bvdd\ndomains:\n  aon: {rail: avd}\n",
        "main.yaml:3:14: rails.avdd.nominal: 1.8 has no unit; write its unit, such as 1.8 V\n"
        "main.yaml:4:16: rails.avdd.delivered: on is read as true or false by some and as a word by others; "
        'write true or false, or put it in quotes: "on"\n'
        "main.yaml:5:5: rails.avdd.nominal: given twice (first in line 3); keep one of them\n"
        "main.yaml:6:5: rails.avdd: unknown key 'dammage'; did you mean damage?\n"
        "main.yaml:7:12: rails.avdd.after: no rail is called 'bvdd'; did you mean avdd?\n"
        "main.yaml:9:15: domains.aon.rail: no rail is called 'avd'; did you mean avdd?",
    ),
    Bad(
        "a section of another name does not make its names wrong",
        "rail:\n  avdd: {nominal: 1.8 V}\ndomains:\n  aon: {rail: avdd, kind: alway_on}\n",
        "main.yaml:1:1: unknown key 'rail'; did you mean rails?\n"
        "main.yaml:4:27: domains.aon.kind: no such choice (found 'alway_on'); did you mean always_on? choices: "
        "always_on, switched",
    ),
)
