"""Names of elements and of parts. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, UV, Bad

NAMES: Final = (
    Bad(
        "an element whose name is a number and of which nothing is said",
        "loads:\n 1:\n",
        "main.yaml:2:2: loads: '1' is no name; a name has letters, digits, - and _, begins with a letter or _, and has "
        "at most 64 characters",
    ),
    Bad(
        "an element whose name is a number with a nought in front",
        "rails:\n  '01': {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: '01' is no name; a name has letters, digits, - and _, begins with a letter or _, and "
        "has at most 64 characters",
    ),
    Bad(
        "a name that points nowhere",
        RAIL + "domains:\n  aon: {rail: avd}\n",
        "main.yaml:5:15: domains.aon.rail: no rail is called 'avd'; did you mean avdd?",
    ),
    Bad(
        "a name with other capitals",
        RAIL + "domains:\n  aon: {rail: AVDD}\n",
        "main.yaml:5:15: domains.aon.rail: no rail is called 'AVDD'; did you mean avdd?",
    ),
    Bad(
        "a name unlike any other",
        RAIL + "domains:\n  aon: {rail: zzz}\n",
        "main.yaml:5:15: domains.aon.rail: no rail is called 'zzz'; there is avdd",
    ),
    Bad(
        "a name of another kind of element",
        RAIL + "domains:\n  aon: {rail: aon}\n",
        "main.yaml:5:15: domains.aon.rail: aon is a domain where a rail is due; there is avdd",
    ),
    Bad(
        "an id given twice",
        RAIL + "domains:\n  avdd: {rail: avdd}\n",
        "main.yaml:5:3: domains: the id avdd is taken (also at main.yaml:2:3, in rails); ids are unique in the "
        "whole description",
    ),
    Bad(
        "an id that is no name",
        RAIL + "domains:\n  1st: {rail: avdd}\n",
        "main.yaml:5:3: domains: '1st' is no name; a name has letters, digits, - and _, begins with a letter or "
        "_, and has at most 64 characters",
    ),
    Bad(
        "a number for a name",
        RAIL + "domains:\n  aon: {rail: 5}\n",
        "main.yaml:5:15: domains.aon.rail: a name is due (found 5); write it as in avdd",
    ),
    Bad(
        "a list for a name",
        RAIL + "domains:\n  aon: {rail: [avdd]}\n",
        "main.yaml:5:15: domains.aon.rail: a name is due (found a list); write it as in avdd",
    ),
    Bad(
        "a name given twice in a list",
        RAIL
        + "comparators:\n  uv: {role: under_voltage, watches: avdd}\noutput_stages:\n  out: {driven_by: [uv, uv]}\n",
        "main.yaml:7:20: output_stages.out.driven_by: a list that names something twice; keep one of them",
    ),
    Bad(
        "a name of which nothing is described",
        RAIL + "modes:\n  sleep: {sampled: [uv]}\n",
        "main.yaml:5:21: modes.sleep.sampled[0]: no comparator is called 'uv'; describe it, or correct the name",
    ),
    Bad(
        "a code that is not described",
        UV + "ships_with: code_3, codes: {code_2: {rising: 1 V}}}\n",
        "main.yaml:5:56: comparators.uv.ships_with: no code is called 'code_3'; did you mean code_2?",
    ),
    Bad(
        "a layer that is not described",
        RAIL + "output_stages:\n  out: {output: {layer: metal1}}\n",
        "main.yaml:5:25: output_stages.out.output.layer: no layer of the process is called 'metal1'; describe "
        "it, or correct the name",
    ),
    Bad(
        "a resistor of another name",
        UV + "crossover: {resistor: poly_hi}}\nprocess:\n  resistors:\n    poly_high: {tc1: 1 ppm/K}\n",
        "main.yaml:5:66: comparators.uv.crossover.resistor: no resistor of the process is called 'poly_hi'; did "
        "you mean poly_high?",
    ),
    Bad(
        "a diode of another name",
        UV + "crossover: {diode: pnq}}\nprocess:\n  diodes:\n    pnp: {emission: 1}\n",
        "main.yaml:5:63: comparators.uv.crossover.diode: no diode of the process is called 'pnq'; did you mean pnp?",
    ),
    Bad(
        "a missing fact that is needed",
        RAIL + "comparators:\n  uv: {watches: avdd}\n",
        "main.yaml:5:3: comparators.uv: no role; role is needed here, such as under_voltage",
    ),
    Bad(
        "an element with nothing that is needed",
        RAIL + "comparators:\n  uv:\n",
        "main.yaml:5:3: comparators.uv: no role; role is needed here, such as under_voltage\n"
        "main.yaml:5:3: comparators.uv: no watches; watches is needed here, such as avdd",
    ),
    Bad(
        "a kit that does not come with the tool",
        RAIL + "process: {kit: gf180}\n",
        "main.yaml:4:16: process.kit: no such choice (found 'gf180'); did you mean gf180mcu? choices: "
        "ihp-sg13g2, gf180mcu",
    ),
    Bad(
        "an empty name",
        "rails:\n  '': {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: '' is no name; a name has letters, digits, - and _, begins with a letter or _, "
        "and has at most 64 characters",
    ),
    Bad(
        "a name with a blank",
        "rails:\n  a vdd: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'a vdd' is no name; a name has letters, digits, - and _, begins with a letter or "
        "_, and has at most 64 characters",
    ),
    Bad(
        "a name with a dot",
        "rails:\n  avdd.1: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'avdd.1' is no name; a name has letters, digits, - and _, begins with a letter "
        "or _, and has at most 64 characters",
    ),
    Bad(
        "a name with a slash",
        "rails:\n  top/avdd: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'top/avdd' is no name; a name has letters, digits, - and _, begins with a letter "
        "or _, and has at most 64 characters",
    ),
    Bad(
        "a name of a bus",
        "rails:\n  avdd<3>: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'avdd<3>' is no name; a name has letters, digits, - and _, begins with a letter "
        "or _, and has at most 64 characters",
    ),
    Bad(
        "a name with square brackets",
        "rails:\n  'avdd[3]': {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'avdd[3]' is no name; a name has letters, digits, - and _, begins with a letter "
        "or _, and has at most 64 characters",
    ),
    Bad(
        "a name with a dollar",
        "rails:\n  avdd$1: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'avdd$1' is no name; a name has letters, digits, - and _, begins with a letter "
        "or _, and has at most 64 characters",
    ),
    Bad(
        "a name with a line break",
        'rails:\n  "av\\ndd": {nominal: 1.8 V}\n',
        "main.yaml:2:3: rails: 'av\\ndd' is no name; a name has letters, digits, - and _, begins with a letter "
        "or _, and has at most 64 characters",
    ),
    Bad(
        "a name with a line break at its end",
        'rails:\n  "avdd\\n": {nominal: 1.8 V}\n',
        "main.yaml:2:3: rails: 'avdd\\n' is no name; write avdd",
    ),
    Bad(
        "a name with blanks around it",
        "rails:\n  ' avdd ': {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: ' avdd ' is no name; write avdd",
    ),
    Bad(
        "a name that begins with a hyphen",
        "rails:\n  '-avdd': {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: '-avdd' is no name; a name has letters, digits, - and _, begins with a letter or "
        "_, and has at most 64 characters",
    ),
    Bad(
        "a name that begins with a digit",
        "rails:\n  1v8: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: '1v8' is no name; a name has letters, digits, - and _, begins with a letter or "
        "_, and has at most 64 characters",
    ),
    Bad(
        "a number as name",
        "rails:\n  18: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: '18' is no name; a name has letters, digits, - and _, begins with a letter or _, "
        "and has at most 64 characters",
    ),
    Bad(
        "a name with an umlaut",
        "rails:\n  überspannung: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'überspannung' is no name; a name has letters, digits, - and _, begins with a "
        "letter or _, and has at most 64 characters",
    ),
    Bad(
        "a name with a letter that looks alike",
        "rails:\n  аvdd: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'аvdd' is no name; a name has letters, digits, - and _, begins with a letter or "
        "_, and has at most 64 characters",
    ),
    Bad(
        "a name of full width",
        "rails:\n  ａｖｄｄ: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'ａｖｄｄ' is no name; a name has letters, digits, - and _, begins with a letter or "
        "_, and has at most 64 characters",
    ),
    Bad(
        "a name with a sign of no width",
        "rails:\n  av\u200bdd: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'av\\u200bdd' is no name; a name has letters, digits, - and _, begins with a "
        "letter or _, and has at most 64 characters",
    ),
    Bad(
        "a name of 65 characters",
        "rails:\n  " + "n" * 65 + ": {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'nnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnn...' is no name; a "
        "name has letters, digits, - and _, begins with a letter or _, and has at most 64 characters",
    ),
    Bad(
        "none as a name",
        "rails:\n  none: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: none is no name, but says that there is nothing; give the element another name",
    ),
    Bad(
        "a name of one's own",
        "rails:\n  x-avdd:\n    nominal: 1.8 V\ndomains:\n  aon: {rail: x-avdd}\n",
        "main.yaml:2:3: rails: 'x-avdd' is no name: x- begins keys of your own; give the element another name\n"
        "main.yaml:5:15: domains.aon.rail: 'x-avdd' is no name: x- begins keys of your own; name one, or leave "
        "the key out where it is not known",
    ),
    Bad(
        "a domain and a rail of one name",
        RAIL + "domains:\n  avdd: {rail: avdd}\n",
        "main.yaml:5:3: domains: the id avdd is taken (also at main.yaml:2:3, in rails); ids are unique in the "
        "whole description",
    ),
    Bad(
        "a comparator and a load of one name",
        UV + "}\nloads:\n  uv: {needs: [{rail: avdd}]}\n",
        "main.yaml:7:3: loads: the id uv is taken (also at main.yaml:5:3, in comparators); ids are unique in "
        "the whole description",
    ),
    Bad(
        "three elements of one name",
        UV + "}\ndomains:\n  uv: {rail: avdd}\nloads:\n  uv: {needs: [{rail: avdd}]}\n",
        "main.yaml:5:3: comparators: the id uv is taken (also at main.yaml:7:3, in domains); ids are unique in "
        "the whole description\n"
        "main.yaml:9:3: loads: the id uv is taken (also at main.yaml:7:3, in domains); ids are unique in the "
        "whole description",
    ),
    Bad(
        "a rail that comes up after itself unknown",
        RAIL + "    after: vdd\n",
        "main.yaml:4:12: rails.avdd.after: no rail is called 'vdd'; did you mean avdd?",
    ),
    Bad(
        "none where there must be one",
        RAIL + "domains:\n  aon: {rail: none}\n",
        "main.yaml:5:15: domains.aon.rail: none is no name, but says that there is nothing; name one, or leave "
        "the key out where it is not known",
    ),
    Bad(
        "a reference that is nearly none",
        UV + "reference: None}\n",
        "main.yaml:5:55: comparators.uv.reference: no reference is called 'None'; describe it, or correct the name",
    ),
    Bad(
        "a reference that is a list",
        UV + "reference: [ref]}\n",
        "main.yaml:5:55: comparators.uv.reference: neither none nor a name (found a list); write none, or as "
        "in ref_fast",
    ),
    Bad(
        "none for what arms a detector",
        UV + "armed_by: none}\n",
        "main.yaml:5:54: comparators.uv.armed_by: none is no name, but says that there is nothing; name one, "
        "or leave the key out where it is not known",
    ),
    Bad(
        "none in a list",
        RAIL + "output_stages:\n  out: {driven_by: [none]}\n",
        "main.yaml:5:21: output_stages.out.driven_by[0]: none is no name, but says that there is nothing; name "
        "one, or leave the key out where it is not known",
    ),
    Bad(
        "an empty text for a name",
        RAIL + "domains:\n  aon: {rail: ''}\n",
        "main.yaml:5:15: domains.aon.rail: '' is no name; a name has letters, digits, - and _, begins with a "
        "letter or _, and has at most 64 characters",
    ),
    Bad(
        "a path for a name",
        RAIL + "domains:\n  aon: {rail: rails.avdd}\n",
        "main.yaml:5:15: domains.aon.rail: 'rails.avdd' is no name; a name has letters, digits, - and _, begins "
        "with a letter or _, and has at most 64 characters",
    ),
    Bad(
        "a name with its bracket",
        RAIL + "domains:\n  aon: {rail: '<avdd>'}\n",
        "main.yaml:5:15: domains.aon.rail: '<avdd>' is no name; a name has letters, digits, - and _, begins "
        "with a letter or _, and has at most 64 characters",
    ),
    Bad(
        "a name with a blank at its end",
        RAIL + "domains:\n  aon: {rail: 'avdd '}\n",
        "main.yaml:5:15: domains.aon.rail: 'avdd ' is no name; write avdd",
    ),
    Bad(
        "two names in one text",
        RAIL + "output_stages:\n  out: {driven_by: 'uv, ov'}\n",
        "main.yaml:5:20: output_stages.out.driven_by: a list is due (found 'uv, ov'); write [uv, ov]",
    ),
    Bad(
        "two names in one entry of a list",
        UV + "}\noutput_stages:\n  out: {driven_by: [uv ov]}\n",
        "main.yaml:7:21: output_stages.out.driven_by[0]: 'uv ov' is no name; a name has letters, digits, - and "
        "_, begins with a letter or _, and has at most 64 characters",
    ),
    Bad(
        "a mapping in a list of names",
        UV + "}\noutput_stages:\n  out: {driven_by: [{name: uv}]}\n",
        "main.yaml:7:21: output_stages.out.driven_by[0]: a name is due (found a mapping); write it as in uv_core",
    ),
    Bad(
        "a list in a list of names",
        UV + "}\noutput_stages:\n  out: {driven_by: [[uv]]}\n",
        "main.yaml:7:21: output_stages.out.driven_by[0]: a name is due (found a list); write it as in uv_core",
    ),
    Bad(
        "a number in a list of names",
        UV + "}\noutput_stages:\n  out: {driven_by: [1]}\n",
        "main.yaml:7:21: output_stages.out.driven_by[0]: a name is due (found 1); write it as in uv_core",
    ),
    Bad(
        "an empty list of names",
        UV + "}\noutput_stages:\n  out: {driven_by: []}\n",
        "main.yaml:7:20: output_stages.out.driven_by: nothing in it (found an empty list); write it as in: [uv_core]",
    ),
    Bad(
        "a detector that watches a domain",
        RAIL + "domains:\n  aon: {rail: avdd}\ncomparators:\n  uv: {role: under_voltage, watches: aon}\n",
        "main.yaml:7:38: comparators.uv.watches: aon is a domain where a rail is due; there is avdd",
    ),
    Bad(
        "a stage that is driven by a rail",
        RAIL + "output_stages:\n  out: {driven_by: [avdd]}\n",
        "main.yaml:5:21: output_stages.out.driven_by[0]: avdd is a rail where a comparator or an output stage "
        "is due; there is out",
    ),
    Bad(
        "a stage that is driven by a net that is not there",
        UV + "}\noutput_stages:\n  out: {driven_by: [uv, uvv, ov]}\n",
        "main.yaml:7:25: output_stages.out.driven_by[1]: no element is called 'uvv'; did you mean uv?\n"
        "main.yaml:7:30: output_stages.out.driven_by[2]: no element is called 'ov'; there are uv, out",
    ),
    Bad(
        "a mode that masks a rail",
        RAIL + "modes:\n  sleep: {masked: [avdd]}\n",
        "main.yaml:5:20: modes.sleep.masked[0]: avdd is a rail where a comparator is due; none is described yet",
    ),
    Bad(
        "a mode that switches off what is not there",
        UV + "}\nmodes:\n  sleep: {off: [ref]}\n",
        "main.yaml:7:17: modes.sleep.off[0]: no element is called 'ref'; there is uv",
    ),
    Bad(
        "a scenario of a rail that is not there",
        RAIL + "scenarios:\n  plug_in:\n    waveforms:\n      - {rail: avd, points: [{at: 0 s, level: 0 V}]}\n",
        "main.yaml:7:16: scenarios.plug_in.waveforms[0].rail: no rail is called 'avd'; did you mean avdd?",
    ),
    Bad(
        "a load that needs a domain for a rail",
        RAIL + "domains:\n  aon: {rail: avdd}\nloads:\n  core: {needs: [{rail: aon}]}\n",
        "main.yaml:7:25: loads.core.needs[0].rail: aon is a domain where a rail is due; there is avdd",
    ),
    Bad(
        "a bypass of a reference",
        RAIL + "references:\n  ref: {kind: band_gap}\nbypasses:\n  skip: {overrides: ref}\n",
        "main.yaml:7:21: bypasses.skip.overrides: ref is a reference where a comparator, an output stage or a "
        "reset net is due; none is described yet",
    ),
    Bad(
        "a pair whose victim is not there",
        UV + "}\nneighbours:\n  pair: {kind: capacitance, aggressor: uv, victim: uw}\n",
        "main.yaml:7:52: neighbours.pair.victim: no comparator is called 'uw'; there is uv",
    ),
    Bad(
        "a corner that is not known",
        RAIL + "    delivered: {min: 1.7 V, max: 1.9 V, basis: {corners: slow}}\n",
        "main.yaml:4:58: rails.avdd.delivered.basis.corners: no such choice (found 'slow'); choices: all, one",
    ),
    Bad(
        "a switch turned by what is not there",
        UV + "hysteresis: {amount: 50 mV, switches: [{turned_by: uvv, closed_when: high}]}}\n",
        "main.yaml:5:95: comparators.uv.hysteresis.switches[0].turned_by: no element is called 'uvv'; did you mean uv?",
    ),
    Bad(
        "a device family of another name",
        UV + "crossover: {device: nmos}}\nprocess:\n  devices:\n    nmos_long: {}\n",
        "main.yaml:5:64: comparators.uv.crossover.device: no transistor family of the process is called 'nmos'; "
        "did you mean nmos_long?",
    ),
)
