"""``none`` where it cannot be said, and nearly said where it can. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, UV, Bad

NONE: Final = (
    Bad(
        "none for a level",
        RAIL + "    damage: none\n",
        "main.yaml:4:13: rails.avdd.damage: none cannot be said here; leave the key empty where it is not "
        "known yet; it can be said of dip, ripple, source_impedance, load_step",
    ),
    Bad(
        "none for an end of a range",
        RAIL + "    rise: {min: none, max: 1 ms}\n",
        "main.yaml:4:17: rails.avdd.rise.min: 'none' is no duration; leave the key empty where it is not known yet",
    ),
    Bad(
        "none for an end of what can be none",
        UV + "filter: {min: none, max: 1 us}}\n",
        "main.yaml:5:58: comparators.uv.filter.min: 'none' is no duration; leave the key empty where it is "
        "not known yet",
    ),
    Bad(
        "none for levels",
        UV + "trip: none}\n",
        "main.yaml:5:50: comparators.uv.trip: none cannot be said here; leave the key empty where it is not "
        "known yet; it can be said of bias, reference, hysteresis, errors, divider, filter, sampling, noise",
    ),
    Bad(
        "none for one of two levels",
        UV + "trip: {rising: 1.6 V, falling: none}}\n",
        "main.yaml:5:75: comparators.uv.trip.falling: none cannot be said here; leave the key empty where it "
        "is not known yet",
    ),
    Bad(
        "none for a crossover",
        UV + "crossover: none}\n",
        "main.yaml:5:55: comparators.uv.crossover: none cannot be said here; leave the key empty where it is "
        "not known yet; it can be said of bias, reference, hysteresis, errors, divider, filter, sampling, "
        "noise",
    ),
    Bad(
        "none for an error",
        UV + "errors: {offset: none}}\n",
        "main.yaml:5:61: comparators.uv.errors.offset: none cannot be said here; leave the key empty where it"
        " is not known yet",
    ),
    Bad(
        "errors by a list of none",
        UV + "errors: [none]}\n",
        "main.yaml:5:52: comparators.uv.errors: neither none nor a mapping of keys (found a list); write "
        "none, or as in {offset: {of: offset, amount: 3 mV, is: bound, at: input}}",
    ),
    Bad(
        "none for a choice",
        UV + "undecided: none}\n",
        "main.yaml:5:55: comparators.uv.undecided: no such choice (found 'none'); choices: asserts, releases,"
        " undefined",
    ),
    Bad(
        "none for a flag",
        UV + "tracked: none}\n",
        "main.yaml:5:53: comparators.uv.tracked: true or false is due (found 'none'); write true or false, "
        "without quotes",
    ),
    Bad(
        "none for a number",
        "conditions: {power_cycles: none}\n" + RAIL,
        "main.yaml:1:28: conditions.power_cycles: a number is due (found 'none'); write it as in 20000",
    ),
    Bad(
        "none for a list that may be empty",
        RAIL + "resets:\n  por_n: {guards: none}\n",
        "main.yaml:5:19: resets.por_n.guards: none cannot be said here; write [] where there is none",
    ),
    Bad(
        "none for a list that may not be empty",
        RAIL + "resets:\n  por_n: {driven_by: none}\n",
        "main.yaml:5:22: resets.por_n.driven_by: none cannot be said here; leave the key empty where it is "
        "not known yet",
    ),
    Bad(
        "none for an element",
        RAIL + "  bvdd: none\n",
        "main.yaml:4:9: rails.bvdd: none cannot be said here; leave the key empty where it is not known yet",
    ),
    Bad(
        "none for conditions",
        "conditions: none\n" + RAIL,
        "main.yaml:1:13: conditions: none cannot be said here; leave the key empty where it is not known yet;"
        " it can be said of loads, modes, bypasses, neighbours",
    ),
    Bad(
        "none for rails",
        "rails: none\n",
        "main.yaml:1:8: rails: none cannot be said here; leave the key empty where it is not known yet; it "
        "can be said of loads, modes, bypasses, neighbours",
    ),
    Bad(
        "none for scenarios",
        RAIL + "scenarios: none\n",
        "main.yaml:4:12: scenarios: none cannot be said here; leave the key empty where it is not known yet; "
        "it can be said of loads, modes, bypasses, neighbours",
    ),
    Bad(
        "None for a filter",
        UV + "filter: None}\n",
        "main.yaml:5:52: comparators.uv.filter: neither none nor a duration (found 'None'); did you mean "
        "none? write none, or as in {min: 1 us, max: 3 us}",
    ),
    Bad(
        "a filter without a unit",
        UV + "filter: 0}\n",
        "main.yaml:5:52: comparators.uv.filter: 0 has no unit; write its unit, such as 0 us",
    ),
    Bad(
        "a filter of another dimension",
        UV + "filter: 3 V}\n",
        "main.yaml:5:52: comparators.uv.filter: '3 V' is a voltage; write a duration, such as 20 us",
    ),
    Bad(
        "a filter that is a list",
        UV + "filter: [none]}\n",
        "main.yaml:5:52: comparators.uv.filter: a list is no duration; write a number with its unit, such as 20 us",
    ),
    Bad(
        "a filter that is a flag",
        UV + "filter: false}\n",
        "main.yaml:5:52: comparators.uv.filter: false is no duration; write a number with its unit, such as 20 us",
    ),
    Bad(
        "NONE for a ripple",
        RAIL + "    ripple: NONE\n",
        "main.yaml:4:13: rails.avdd.ripple: neither none nor a mapping of keys (found 'NONE'); did you mean "
        "none? write none, or as in {peak_to_peak: 10 mV, frequency: 2 MHz}",
    ),
    Bad(
        "a quantity for a ripple",
        RAIL + "    ripple: 0 V\n",
        "main.yaml:4:13: rails.avdd.ripple: neither none nor a mapping of keys (found '0 V'); write none, or "
        "as in {peak_to_peak: 10 mV, frequency: 2 MHz}",
    ),
    Bad(
        "None for a section",
        RAIL + "bypasses: None\n",
        "main.yaml:4:11: bypasses: neither none nor a mapping of keys (found 'None'); did you mean none? "
        "write none, or as in {skip_uv: {overrides: uv_core, forces: released}}",
    ),
    Bad(
        "an element called none",
        RAIL + "bypasses: {none: }\n",
        "main.yaml:4:12: bypasses: none is no name, but says that there is nothing; give the element another name",
    ),
    Bad(
        "a list for a section that can be none",
        RAIL + "neighbours: []\n",
        "main.yaml:4:13: neighbours: neither none nor a mapping of keys (found an empty list); write none, or"
        " as in {uv_to_ov: {kind: capacitance, aggressor: uv_core, victim: ov_core}}",
    ),
    Bad(
        "nothing but what there is not",
        "bypasses: none\ncomplete: [rails]\n",
        "main.yaml: the file describes no element; tidegate start writes a starter",
    ),
    Bad(
        "a wrong name where sections are none",
        UV + "domain: aom}\nbypasses: none\ndomains: {aon: {rail: avdd}}\n",
        "main.yaml:5:52: comparators.uv.domain: no domain is called 'aom'; did you mean aon?",
    ),
    Bad(
        "none in one file and entries in another",
        {
            "main.yaml": "include: [more.yaml]\n" + RAIL + "bypasses: none\n",
            "more.yaml": "bypasses: {skip: {forces: released}}\n",
        },
        "more.yaml:1:1: bypasses: said to be none in one file and described in another (first at "
        "main.yaml:5:1); keep one of them",
    ),
    Bad(
        "entries in one file and none in another",
        {
            "main.yaml": "include: [more.yaml]\n" + RAIL + "modes: {sleep: {off: [avdd]}}\n",
            "more.yaml": "modes: none\n",
        },
        "main.yaml:5:23: modes.sleep.off[0]: avdd is a rail where a reference, a bias, a comparator, an "
        "output stage, a reset net, a load or a domain is due; none is described yet\n"
        "more.yaml:1:1: modes: said to be none in one file and described in another (first at main.yaml:5:1);"
        " keep one of them",
    ),
    Bad(
        "a section that is complete twice",
        RAIL + "complete: [rails, bypasses, rails]\n",
        "main.yaml:4:11: complete: a list that names something twice; keep one of them",
    ),
    Bad(
        "a section that is complete in two files",
        {"main.yaml": "include: [more.yaml]\n" + RAIL + "complete: [rails]\n", "more.yaml": "complete: [rails]\n"},
        "main.yaml:5:11: complete: a list that names something twice; keep one of them",
    ),
    Bad(
        "a section that is complete and mistyped",
        RAIL + "complete: [bypases]\n",
        "main.yaml:4:12: complete[0]: no such choice (found 'bypases'); did you mean bypasses? choices: "
        "rails, domains, references, biases, comparators, output_stages, resets, loads, modes, bypasses, "
        "neighbours",
    ),
    Bad(
        "a section that cannot be complete",
        RAIL + "complete: [conditions]\n",
        "main.yaml:4:12: complete[0]: no such choice (found 'conditions'); choices: rails, domains, "
        "references, biases, comparators, output_stages, resets, loads, modes, bypasses, neighbours",
    ),
    Bad(
        "one word for a list of what is complete",
        RAIL + "complete: rails\n",
        "main.yaml:4:11: complete: a list is due (found 'rails'); write [rails]",
    ),
    Bad(
        "true for complete",
        RAIL + "complete: true\n",
        "main.yaml:4:11: complete: a list is due (found true); write it as in [bypasses, neighbours]",
    ),
    Bad(
        "none for complete",
        RAIL + "complete: none\n",
        "main.yaml:4:11: complete: none cannot be said here; write [] where there is none",
    ),
    Bad(
        "what an error is of, mistyped",
        UV + "errors: {a: {share: 1 %, of: referance}}}\n",
        "main.yaml:5:73: comparators.uv.errors.a.of: no such choice (found 'referance'); did you mean "
        "reference? choices: reference, divider, offset, trim, drift, total, other",
    ),
    Bad(
        "what an error is of, by the name of an element",
        UV + "errors: {a: {share: 1 %, of: ref_fast}}}\n",
        "main.yaml:5:73: comparators.uv.errors.a.of: no such choice (found 'ref_fast'); did you mean offset? "
        "choices: reference, divider, offset, trim, drift, total, other",
    ),
)
