"""Mappings, lists and texts in each other's place. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, UV, Bad

SHAPES: Final = (
    Bad(
        "a text for a list",
        RAIL + "output_stages:\n  out: {driven_by: uv}\n",
        "main.yaml:5:20: output_stages.out.driven_by: a list is due (found 'uv'); write [uv]",
    ),
    Bad(
        "a text for a section",
        RAIL + "domains: aon\n",
        "main.yaml:4:10: domains: a mapping of keys is due (found 'aon'); write it as in {aon: {rail: avdd, "
        "kind: always_on}}",
    ),
    Bad(
        "a list for a section",
        RAIL + "domains: [aon]\n",
        "main.yaml:4:10: domains: a mapping of keys is due (found a list); write it as in {aon: {rail: avdd, "
        "kind: always_on}}",
    ),
    Bad(
        "an empty entry of a list",
        RAIL + "output_stages:\n  out:\n    driven_by:\n      -\n",
        "main.yaml:7:8: output_stages.out.driven_by[0]: an empty entry of a list; remove it or fill it in",
    ),
    Bad(
        "a number for a name of the subsystem",
        "subsystem: 42\n" + RAIL,
        'main.yaml:1:12: subsystem: a text is due (found 42); put it in quotes: "42"',
    ),
    Bad(
        "a flag for a name of the subsystem",
        "subsystem: true\n" + RAIL,
        'main.yaml:1:12: subsystem: a text is due (found true); put it in quotes: "true"',
    ),
    Bad(
        "a list for a name of the subsystem",
        "subsystem: [a, b]\n" + RAIL,
        "main.yaml:1:12: subsystem: a text is due (found a list); write it as in tide gauge supervisor",
    ),
    Bad(
        "an empty name of the subsystem",
        "subsystem: ''\n" + RAIL,
        "main.yaml:1:12: subsystem: nothing in it (found ''); write it as in: tide gauge supervisor",
    ),
    Bad(
        "a revision that is a date in a list",
        "revision: [2026-12-01]\n" + RAIL,
        "main.yaml:1:11: revision: a text is due (found a list); write it as in A2",
    ),
    Bad(
        "a section that is a number",
        RAIL + "domains: 3\n",
        "main.yaml:4:10: domains: a mapping of keys is due (found 3); write it as in {aon: {rail: avdd, kind: "
        "always_on}}",
    ),
    Bad(
        "a section that is a flag",
        RAIL + "domains: true\n",
        "main.yaml:4:10: domains: a mapping of keys is due (found true); write it as in {aon: {rail: avdd, "
        "kind: always_on}}",
    ),
    Bad(
        "an element that is a number",
        RAIL + "  bvdd: 1\n",
        "main.yaml:4:9: rails.bvdd: a mapping of keys is due (found 1); write it as in {nominal: 1.8 V, "
        "delivered: {min: 1.71 V, max: 1.89 V}}",
    ),
    Bad(
        "an element that is a quantity",
        RAIL + "  bvdd: 1.2 V\n",
        "main.yaml:4:9: rails.bvdd: a mapping of keys is due (found '1.2 V'); write it as in {nominal: 1.8 V, "
        "delivered: {min: 1.71 V, max: 1.89 V}}",
    ),
    Bad(
        "an element that is a list",
        RAIL + "  bvdd: [nominal, 1.2 V]\n",
        "main.yaml:4:9: rails.bvdd: a mapping of keys is due (found a list); write it as in {nominal: 1.8 V, "
        "delivered: {min: 1.71 V, max: 1.89 V}}",
    ),
    Bad(
        "an element that is a list of pairs",
        RAIL + "  bvdd:\n    - nominal: 1.2 V\n",
        "main.yaml:5:5: rails.bvdd: a mapping of keys is due (found a list); write it as in {nominal: 1.8 V, "
        "delivered: {min: 1.71 V, max: 1.89 V}}",
    ),
    Bad(
        "an element that is true",
        RAIL + "  bvdd: true\n",
        "main.yaml:4:9: rails.bvdd: a mapping of keys is due (found true); write it as in {nominal: 1.8 V, "
        "delivered: {min: 1.71 V, max: 1.89 V}}",
    ),
    Bad(
        "a part that is a text",
        RAIL + "    ripple: small\n",
        "main.yaml:4:13: rails.avdd.ripple: neither none nor a mapping of keys (found 'small'); write none, or as in "
        "{peak_to_peak: 10 mV, frequency: 2 MHz}",
    ),
    Bad(
        "a part that is a list",
        RAIL + "    ripple: [10 mV, 1 MHz]\n",
        "main.yaml:4:13: rails.avdd.ripple: neither none nor a mapping of keys (found a list); write none, or as in "
        "{peak_to_peak: 10 mV, frequency: 2 MHz}",
    ),
    Bad(
        "a process that is a text",
        RAIL + "process: cmos\n",
        "main.yaml:4:10: process: a mapping of keys is due (found 'cmos'); write it as in {kit: ihp-sg13g2, "
        "activation_energy: 0.9 eV}",
    ),
    Bad(
        "a kit that is a list",
        RAIL + "process: {kit: [gf180mcu]}\n",
        "main.yaml:4:16: process.kit: no such choice (found a list); did you mean gf180mcu? choices: "
        "ihp-sg13g2, gf180mcu",
    ),
    Bad(
        "a kit that is a mapping",
        RAIL + "process: {kit: {name: gf180mcu}}\n",
        "main.yaml:4:16: process.kit: no such choice (found a mapping); choices: ihp-sg13g2, gf180mcu",
    ),
    Bad(
        "a kit with capitals",
        RAIL + "process: {kit: GF180MCU}\n",
        "main.yaml:4:16: process.kit: no such choice (found 'GF180MCU'); did you mean gf180mcu? choices: "
        "ihp-sg13g2, gf180mcu",
    ),
    Bad(
        "layers that are a list",
        RAIL + "process: {layers: [metal1]}\n",
        "main.yaml:4:19: process.layers: a mapping of keys is due (found a list); write it as in {metal1: "
        "{limits: [{temperature: 110 degC, life: 100000 h}], ...}}",
    ),
    Bad(
        "limits that are a mapping",
        RAIL + "process: {layers: {metal1: {limits: {dc: 1 mA/um}}}}\n",
        "main.yaml:4:37: process.layers.metal1.limits: a list is due (found a mapping); write it as in "
        "[{temperature: 110 degC, life: 100000 h}]",
    ),
    Bad(
        "an activation energy in joules",
        RAIL + "process: {activation_energy: 1.4e-19 J}\n",
        "main.yaml:4:30: process.activation_energy: '1.4e-19 J' has the unknown unit 'J'; units of an energy: meV, eV",
    ),
    Bad(
        "needs that are a mapping",
        RAIL + "loads:\n  core: {needs: {rail: avdd}}\n",
        "main.yaml:5:17: loads.core.needs: a list is due (found a mapping); write it as in [{rail: avdd}]",
    ),
    Bad(
        "needs that are names",
        RAIL + "loads:\n  core: {needs: [avdd]}\n",
        "main.yaml:5:18: loads.core.needs[0]: a mapping of keys is due (found 'avdd'); write it as in {rail: avdd}",
    ),
    Bad(
        "a need without its rail",
        RAIL + "loads:\n  core: {needs: [{works: {min: 1 V}}]}\n",
        "main.yaml:5:18: loads.core.needs[0]: no rail; rail is needed here, such as avdd",
    ),
    Bad(
        "a waveform without points",
        RAIL + "scenarios:\n  s: {waveforms: [{rail: avdd}]}\n",
        "main.yaml:5:19: scenarios.s.waveforms[0]: no points; points is needed here, such as [{at: 1 ms, level: "
        "1.8 V}]",
    ),
    Bad(
        "a waveform with no point",
        RAIL + "scenarios:\n  s: {waveforms: [{rail: avdd, points: []}]}\n",
        "main.yaml:5:40: scenarios.s.waveforms[0].points: nothing in it (found an empty list); write it as in: "
        "[{at: 1 ms, level: 1.8 V}]",
    ),
    Bad(
        "points that are pairs",
        RAIL + "scenarios:\n  s: {waveforms: [{rail: avdd, points: [[0 s, 0 V]]}]}\n",
        "main.yaml:5:41: scenarios.s.waveforms[0].points[0]: a mapping of keys is due (found a list); write it "
        "as in {at: 1 ms, level: 1.8 V}",
    ),
    Bad(
        "a point without its level",
        RAIL + "scenarios:\n  s: {waveforms: [{rail: avdd, points: [{at: 0 s}]}]}\n",
        "main.yaml:5:41: scenarios.s.waveforms[0].points[0]: no level; level is needed here, such as 1.8 V",
    ),
    Bad(
        "waveforms by rail",
        RAIL + "scenarios:\n  s: {waveforms: {avdd: [{at: 0 s, level: 0 V}]}}\n",
        "main.yaml:5:18: scenarios.s.waveforms: a list is due (found a mapping); write it as in [{rail: avdd, "
        "points: [{at: 1 ms, level: 1.8 V}]}]",
    ),
    Bad(
        "a pair without its victim",
        UV + "}\nneighbours:\n  pair: {kind: capacitance, aggressor: uv}\n",
        "main.yaml:7:3: neighbours.pair: no victim; victim is needed here, such as ov_core",
    ),
    Bad(
        "a pair without anything",
        UV + "}\nneighbours:\n  pair:\n",
        "main.yaml:7:3: neighbours.pair: no aggressor; aggressor is needed here, such as uv_core\n"
        "main.yaml:7:3: neighbours.pair: no kind; kind is needed here, such as capacitance\n"
        "main.yaml:7:3: neighbours.pair: no victim; victim is needed here, such as ov_core",
    ),
    Bad(
        "a switch without a word",
        UV + "hysteresis: {amount: 50 mV, switches: [{turned_by: uv, closed_when: yes}]}}\n",
        "main.yaml:5:112: comparators.uv.hysteresis.switches[0].closed_when: yes is read as true or false by "
        'some and as a word by others; write true or false, or put it in quotes: "yes"',
    ),
    Bad(
        "switches that are a mapping",
        UV + "hysteresis: {amount: 50 mV, switches: {turned_by: uv}}}\n",
        "main.yaml:5:82: comparators.uv.hysteresis.switches: a list is due (found a mapping); write it as in "
        "[{turned_by: uv_core, closed_when: high}]",
    ),
    Bad(
        "an error without its kind",
        UV + "errors: {offset: 3 mV}}\n",
        "main.yaml:5:61: comparators.uv.errors.offset: a mapping of keys is due (found '3 mV'); write it as in "
        "{of: offset, amount: 3 mV, is: bound, at: input}",
    ),
    Bad(
        "errors that are a list",
        UV + "errors: [{amount: 3 mV}]}\n",
        "main.yaml:5:52: comparators.uv.errors: neither none nor a mapping of keys (found a list); write none, or as "
        "in {offset: {of: offset, amount: 3 mV, is: bound, at: input}}",
    ),
    Bad(
        "an error of an unknown kind",
        UV + "errors: {offset: {amount: 3 mV, is: maximum}}}\n",
        "main.yaml:5:80: comparators.uv.errors.offset.is: no such choice (found 'maximum'); choices: bound, sigma",
    ),
    Bad(
        "codes that are a list",
        UV + "codes: [{rising: 1 V}]}\n",
        "main.yaml:5:51: comparators.uv.codes: a mapping of keys is due (found a list); write it as in {code_2: "
        "{rising: 1.66 V, falling: 1.61 V}}",
    ),
    Bad(
        "a code that is a quantity",
        UV + "codes: {c0: 1.6 V}}\n",
        "main.yaml:5:56: comparators.uv.codes.c0: a mapping of keys is due (found '1.6 V'); write it as in "
        "{rising: 1.66 V, falling: 1.61 V}",
    ),
    Bad(
        "a level for both edges",
        UV + "trip: 1.6 V}\n",
        "main.yaml:5:50: comparators.uv.trip: a mapping of keys is due (found '1.6 V'); write it as in {rising: "
        "1.66 V, falling: 1.61 V}",
    ),
    Bad(
        "a list of levels",
        UV + "trip: [1.6 V, 1.5 V]}\n",
        "main.yaml:5:50: comparators.uv.trip: a mapping of keys is due (found a list); write it as in {rising: "
        "1.66 V, falling: 1.61 V}",
    ),
    Bad(
        "a waiver that is a text",
        RAIL + "waivers: [bypass/readable]\n",
        "main.yaml:4:11: waivers[0]: a mapping of keys is due (found 'bypass/readable'); write it as in {rule: "
        "bypass/readable, ...}",
    ),
    Bad(
        "waivers by name",
        RAIL + "waivers: {bypass/readable: {element: avdd}}\n",
        "main.yaml:4:10: waivers: a list is due (found a mapping); write it as in [{rule: bypass/readable, ...}]",
    ),
    Bad(
        "modes that are a list",
        RAIL + "modes: [sleep]\n",
        "main.yaml:4:8: modes: neither none nor a mapping of keys (found a list); write none, or as in {sleep: {off: "
        "[ref_main], sampled: [uv_core]}}",
    ),
    Bad(
        "a mode that is a list",
        UV + "}\nmodes: {sleep: [uv]}\n",
        "main.yaml:6:16: modes.sleep: a mapping of keys is due (found a list); write it as in {off: [ref_main], "
        "sampled: [uv_core]}",
    ),
    Bad(
        "an empty entry between two",
        UV + "}\noutput_stages:\n  out: {driven_by: [uv, , uv]}\n",
        "main.yaml:7:25: a comma with nothing before it; remove it",
    ),
    Bad(
        "a null in a list",
        UV + "}\noutput_stages:\n  out: {driven_by: [uv, null]}\n",
        "main.yaml:7:25: output_stages.out.driven_by[1]: an empty entry of a list; remove it or fill it in",
    ),
    Bad(
        "a date that has no day",
        RAIL + "waivers:\n  - {rule: a/b, element: avdd, why: x, agreed_by: board, until: 2026-12}\n",
        "main.yaml:5:65: waivers[0].until: '2026-12' does not fit; write it as in 2027-06-30",
    ),
    Bad(
        "a date of another country",
        RAIL + "waivers:\n  - {rule: a/b, element: avdd, why: x, agreed_by: board, until: 12/01/2026}\n",
        "main.yaml:5:65: waivers[0].until: '12/01/2026' does not fit; write it as in 2027-06-30",
    ),
)
