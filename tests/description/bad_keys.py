"""Bad keys and names, and the whole message about each. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.description.bad_input import RAIL, UV, Bad

KEYS: Final = (
    Bad(
        "a key that is near a known one",
        RAIL + "    nominall: 1 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'nominall'; did you mean nominal?",
    ),
    Bad(
        "a key with hyphens",
        RAIL + "    ripple:\n      peak-to-peak: 10 mV\n",
        "main.yaml:5:7: rails.avdd.ripple: unknown key 'peak-to-peak'; did you mean peak_to_peak?",
    ),
    Bad(
        "a section that is near a known one",
        RAIL + "comparator:\n  uv: {role: under_voltage}\n",
        "main.yaml:4:1: unknown key 'comparator'; did you mean comparators?",
    ),
    Bad(
        "a key far from any known one",
        RAIL + "    ripple: {colour: red}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key 'colour'; known here: peak_to_peak, frequency; "
        "your own keys begin with x-",
    ),
    Bad(
        "a key given twice",
        RAIL + "    nominal: 1.7 V\n",
        "main.yaml:4:5: rails.avdd.nominal: given twice (first in line 3); keep one of them",
    ),
    Bad(
        "a key given twice in braces",
        RAIL + "    delivered: {min: 1.8 V, min: 1.7 V}\n",
        "main.yaml:4:29: rails.avdd.delivered.min: given twice (first in line 4); keep one of them",
    ),
    Bad(
        "a section given twice",
        RAIL + "rails:\n  bvdd: {nominal: 1 V}\n",
        "main.yaml:4:1: rails: given twice (first in line 1); keep one of them",
    ),
    Bad(
        "an element given twice",
        RAIL + "  avdd:\n    nominal: 1.7 V\n",
        "main.yaml:4:3: rails.avdd: given twice (first in line 2); keep one of them",
    ),
    Bad(
        "a key that YAML 1.1 takes for true",
        RAIL + "    ripple: {on: 1}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key 'on'; known here: peak_to_peak, frequency; "
        "your own keys begin with x-",
    ),
    Bad(
        "a number as key",
        RAIL + "    ripple: {1: 1 V}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key '1'; write a point in a decimal number: a comma parts entries",
    ),
    Bad(
        "a tilde as key",
        RAIL + "    ripple: {~: 1 V}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key '~'; known here: peak_to_peak, frequency; "
        "your own keys begin with x-",
    ),
    Bad(
        "a list as key",
        RAIL + "? [a, b]\n: c\n",
        "main.yaml:4:3: a key that is no plain text; write a name followed by a colon",
    ),
    Bad(
        "a merge key",
        "x-common: &c {nominal: 1 V}\nrails:\n  avdd:\n    nominal: 1.8 V\n  bvdd:\n    <<: *c\n",
        "main.yaml:6:5: rails.bvdd: a merge key (<<); write the values out, or use include",
    ),
    Bad(
        "a key without the space after its colon",
        RAIL + "    rise:5 ms\n    fall: 5 ms\n",
        "main.yaml:4:5: no space after the colon (found 'rise:5 ms'); write rise: 5 ms",
    ),
    Bad(
        "a key without the space after its colon, in braces",
        RAIL + "    delivered: {min:1.7V, max: 1.9 V}\n",
        "main.yaml:4:17: rails.avdd.delivered.min: no space after the colon (found 'min:1.7V'); write min: 1.7V",
    ),
    Bad(
        "a key with an escape for the terminal",
        RAIL + '    "\\e[31mred": 1 V\n',
        "main.yaml:4:5: rails.avdd: the character U+001B in a text; remove it",
    ),
    Bad(
        "a very long key",
        RAIL + "    ripple: {" + "k" * 200 + ": 1}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key "
        "'kkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkk...'; "
        "known here: peak_to_peak, frequency; your own keys begin with x-",
    ),
    Bad(
        "an empty key that is not known",
        RAIL + "    nominell:\n",
        "main.yaml:4:5: rails.avdd: unknown key 'nominell'; did you mean nominal?",
    ),
)

NAMES: Final = (
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
        "main.yaml:5:3: domains: the id avdd is taken (first at main.yaml:2:3, in rails); "
        "ids are unique in the whole description",
    ),
    Bad(
        "an id that is no name",
        RAIL + "domains:\n  1st: {rail: avdd}\n",
        "main.yaml:5:3: domains: '1st' is no name; "
        "a name has letters, digits, - and _, begins with a letter or _, and has 64 characters at the "
        "most",
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
        "main.yaml:5:25: output_stages.out.output.layer: no layer of the process is called 'metal1'; "
        "describe it, or correct the name",
    ),
    Bad(
        "a resistor of another name",
        UV + "crossover: {resistor: poly_hi}}\nprocess:\n  resistors:\n    poly_high: {tc1: 1 ppm/K}\n",
        "main.yaml:5:66: comparators.uv.crossover.resistor: no resistor of the process is called 'poly_hi'; did you "
        "mean poly_high?",
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
        "main.yaml:4:16: process.kit: no such choice (found 'gf180'); "
        "did you mean gf180mcu? choices: ihp-sg13g2, gf180mcu",
    ),
)
