"""Words, numbers, flags, lists and texts. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, UV, Bad

VALUES: Final = (
    Bad(
        "a switch word of YAML 1.1",
        RAIL + "output_stages:\n  out: {inverting: no}\n",
        "main.yaml:5:20: output_stages.out.inverting: no is read as true or false by some and as a word by "
        'others; write true or false, or put it in quotes: "no"',
    ),
    Bad(
        "a switch letter of YAML 1.1",
        RAIL + "    note: Y\n",
        "main.yaml:4:11: rails.avdd.note: Y is read as true or false by some and as a word by others; write "
        'true or false, or put it in quotes: "Y"',
    ),
    Bad(
        "a boolean in quotes",
        RAIL + "output_stages:\n  out: {inverting: 'true'}\n",
        "main.yaml:5:20: output_stages.out.inverting: true or false is due (found 'true'); write true or false, "
        "without quotes",
    ),
    Bad(
        "a choice that is near a known one",
        RAIL + "output_stages:\n  out: {kind: shmitt}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found 'shmitt'); did you mean schmitt? "
        "choices: gain, inverter, buffer, schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "a choice with hyphens",
        RAIL + "domains:\n  aon: {rail: avdd, kind: always-on}\n",
        "main.yaml:5:27: domains.aon.kind: no such choice (found 'always-on'); did you mean always_on? choices: "
        "always_on, switched",
    ),
    Bad(
        "a choice far from any known one",
        RAIL + "domains:\n  aon: {rail: avdd, kind: blue}\n",
        "main.yaml:5:27: domains.aon.kind: no such choice (found 'blue'); choices: always_on, switched",
    ),
    Bad(
        "none with a capital",
        UV + "hysteresis: None}\n",
        "main.yaml:5:56: comparators.uv.hysteresis: neither none nor a mapping of keys (found 'None'); did you "
        "mean none? write none, or as in {amount: {min: 44 mV, typ: 50 mV, max: 56 mV}, made_by: "
        "switched_reference}",
    ),
    Bad(
        "a quantity for none or a mapping",
        UV + "hysteresis: 50 mV}\n",
        "main.yaml:5:56: comparators.uv.hysteresis: neither none nor a mapping of keys (found '50 mV'); write "
        "none, or as in {amount: {min: 44 mV, typ: 50 mV, max: 56 mV}, made_by: switched_reference}",
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
        "main.yaml:4:11: rails.avdd.note: the character U+001B is not allowed in a text; remove it",
    ),
    Bad(
        "half of a surrogate pair",
        RAIL + '    note: "\\ud800"\n',
        "main.yaml:4:11: rails.avdd.note: the character U+D800 is not allowed in a text; remove it",
    ),
    Bad(
        "Yes with a capital",
        RAIL + "output_stages:\n  out: {inverting: Yes}\n",
        "main.yaml:5:20: output_stages.out.inverting: Yes is read as true or false by some and as a word by "
        'others; write true or false, or put it in quotes: "Yes"',
    ),
    Bad(
        "TRUE in capitals",
        RAIL + "output_stages:\n  out: {inverting: TRUE}\n",
        "main.yaml:5:20: output_stages.out.inverting: TRUE is read as true or false by some and as a word by "
        'others; write true or false, or put it in quotes: "TRUE"',
    ),
    Bad(
        "one for true",
        RAIL + "output_stages:\n  out: {inverting: 1}\n",
        "main.yaml:5:20: output_stages.out.inverting: true or false is due (found 1); write true or false",
    ),
    Bad(
        "a word for a flag",
        RAIL + "output_stages:\n  out: {inverting: inverting}\n",
        "main.yaml:5:20: output_stages.out.inverting: true or false is due (found 'inverting'); write true or "
        "false, without quotes",
    ),
    Bad(
        "a list for a flag",
        RAIL + "output_stages:\n  out: {inverting: [true]}\n",
        "main.yaml:5:20: output_stages.out.inverting: true or false is due (found a list); write true or false",
    ),
    Bad(
        "a mapping for a flag",
        RAIL + "output_stages:\n  out: {inverting: {is: true}}\n",
        "main.yaml:5:20: output_stages.out.inverting: true or false is due (found a mapping); write true or false",
    ),
    Bad(
        "a flag for a choice",
        RAIL + "output_stages:\n  out: {kind: true}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found true); choices: gain, inverter, buffer, "
        "schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "a number for a choice",
        RAIL + "output_stages:\n  out: {kind: 3}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found 3); choices: gain, inverter, buffer, "
        "schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "a list for a choice",
        RAIL + "output_stages:\n  out: {kind: [buffer]}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found a list); did you mean buffer? choices: "
        "gain, inverter, buffer, schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "a mapping for a choice",
        RAIL + "output_stages:\n  out: {kind: {buffer: 1}}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found a mapping); did you mean buffer? "
        "choices: gain, inverter, buffer, schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "a choice with a capital",
        RAIL + "output_stages:\n  out: {kind: Buffer}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found 'Buffer'); did you mean buffer? choices: "
        "gain, inverter, buffer, schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "a choice with a blank",
        RAIL + "output_stages:\n  out: {kind: level shifter}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found 'level shifter'); did you mean "
        "level_shifter? choices: gain, inverter, buffer, schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "a choice in the plural",
        RAIL + "output_stages:\n  out: {kind: buffers}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found 'buffers'); did you mean buffer? "
        "choices: gain, inverter, buffer, schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "an empty choice",
        RAIL + "output_stages:\n  out: {kind: ''}\n",
        "main.yaml:5:15: output_stages.out.kind: no such choice (found ''); choices: gain, inverter, buffer, "
        "schmitt, latch, level_shifter, filter, delay",
    ),
    Bad(
        "a role in short",
        RAIL + "comparators:\n  uv: {role: uv, watches: avdd}\n",
        "main.yaml:5:14: comparators.uv.role: no such choice (found 'uv'); choices: power_on, under_voltage, "
        "over_voltage, reference_ready",
    ),
    Bad(
        "a role with hyphens",
        RAIL + "comparators:\n  uv: {role: under-voltage, watches: avdd}\n",
        "main.yaml:5:14: comparators.uv.role: no such choice (found 'under-voltage'); did you mean "
        "under_voltage? choices: power_on, under_voltage, over_voltage, reference_ready",
    ),
    Bad(
        "a role of another tool",
        RAIL + "comparators:\n  uv: {role: brown_out, watches: avdd}\n",
        "main.yaml:5:14: comparators.uv.role: no such choice (found 'brown_out'); choices: power_on, "
        "under_voltage, over_voltage, reference_ready",
    ),
    Bad(
        "a role left empty",
        RAIL + "comparators:\n  uv: {role: , watches: avdd}\n",
        "main.yaml:5:3: comparators.uv: no role; role is needed here, such as under_voltage",
    ),
    Bad(
        "an active level in words",
        UV + "}\nresets:\n  por_n: {driven_by: [uv], active: lo}\n",
        "main.yaml:7:36: resets.por_n.active: no such choice (found 'lo'); did you mean low? choices: low, high",
    ),
    Bad(
        "an active level as a number",
        UV + "}\nresets:\n  por_n: {driven_by: [uv], active: 0}\n",
        "main.yaml:7:36: resets.por_n.active: no such choice (found 0); choices: low, high",
    ),
    Bad(
        "a note that is a mapping",
        RAIL + "    note: {see: review}\n",
        "main.yaml:4:11: rails.avdd.note: a text is due (found a mapping); write it as in agreed with layout",
    ),
    Bad(
        "a note that is a number",
        RAIL + "    note: 12\n",
        'main.yaml:4:11: rails.avdd.note: a text is due (found 12); put it in quotes: "12"',
    ),
    Bad(
        "a note that is on",
        RAIL + "    note: on\n",
        "main.yaml:4:11: rails.avdd.note: on is read as true or false by some and as a word by others; write "
        'true or false, or put it in quotes: "on"',
    ),
    Bad(
        "an invented that is a word",
        "invented: partly\n" + RAIL,
        "main.yaml:1:11: invented: true or false is due (found 'partly'); write true or false, without quotes",
    ),
)
