"""Keys that nobody knows, or that stand twice. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, Bad

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
        "main.yaml:4:14: rails.avdd.ripple: unknown key 'colour'; known here: peak_to_peak, frequency; your own "
        "keys begin with x-",
    ),
    Bad(
        "a key that YAML 1.1 takes for true",
        RAIL + "    ripple: {on: 1}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key 'on'; known here: peak_to_peak, frequency; your own "
        "keys begin with x-",
    ),
    Bad(
        "a number as key",
        RAIL + "    ripple: {1: 1 V}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key '1'; write a point in a decimal number: a comma parts entries",
    ),
    Bad(
        "a tilde as key",
        RAIL + "    ripple: {~: 1 V}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key '~'; known here: peak_to_peak, frequency; your own keys "
        "begin with x-",
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
        "a value with a sign that turns the text round, without the space after its colon",
        RAIL + "    rise:5 m\u202es\n",
        "main.yaml:4:5: no space after the colon (found 'rise:5 m\\u202es'); write rise: 5 m\\u202es",
    ),
    Bad(
        "a long value without the space after its colon",
        RAIL + "    note:" + "a" * 60 + "\n",
        "main.yaml:4:5: no space after the colon (found 'note:" + "a" * 55 + "...'); write a space after the colon",
    ),
    Bad(
        "a key with an escape for the terminal",
        RAIL + '    "\\e[31mred": 1 V\n',
        "main.yaml:4:5: rails.avdd: the character U+001B is not allowed in a text; remove it",
    ),
    Bad(
        "a very long key",
        RAIL + "    ripple: {" + "k" * 200 + ": 1}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key "
        "'kkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkkk...'; known here: peak_to_peak, "
        "frequency; your own keys begin with x-",
    ),
    Bad(
        "an empty key that is not known",
        RAIL + "    nominell:\n",
        "main.yaml:4:5: rails.avdd: unknown key 'nominell'; did you mean nominal?",
    ),
    Bad(
        "a section in the singular",
        RAIL.replace("rails", "rail"),
        "main.yaml:1:1: unknown key 'rail'; did you mean rails?",
    ),
    Bad(
        "a section with a capital",
        RAIL.replace("rails", "Rails"),
        "main.yaml:1:1: unknown key 'Rails'; did you mean rails?",
    ),
    Bad(
        "a section in capitals",
        RAIL.replace("rails", "RAILS"),
        "main.yaml:1:1: unknown key 'RAILS'; did you mean rails?",
    ),
    Bad(
        "a section with a blank before its colon and after its name",
        RAIL.replace("rails", "output stages"),
        "main.yaml:1:1: unknown key 'output stages'; did you mean output_stages?",
    ),
    Bad(
        "a section with a hyphen",
        RAIL + "output-stages:\n  out: {}\n",
        "main.yaml:4:1: unknown key 'output-stages'; did you mean output_stages?",
    ),
    Bad(
        "a key of another section",
        RAIL + "    trip: {rising: 1 V}\n",
        "main.yaml:4:5: rails.avdd: unknown key 'trip'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a key that belongs one level up",
        RAIL + "    ripple: {peak_to_peak: 1 mV, damage: 2 V}\n",
        "main.yaml:4:34: rails.avdd.ripple: unknown key 'damage'; known here: peak_to_peak, frequency; your own "
        "keys begin with x-",
    ),
    Bad(
        "a key that belongs one level down",
        RAIL + "    peak_to_peak: 1 mV\n",
        "main.yaml:4:5: rails.avdd: unknown key 'peak_to_peak'; known here: nominal, delivered, guaranteed, "
        "damage, rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, "
        "delay, residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "min and max without their quantity",
        RAIL + "    min: 1.7 V\n    max: 1.9 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'min'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-\n"
        "main.yaml:5:5: rails.avdd: unknown key 'max'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "minimum for min",
        RAIL + "    delivered: {minimum: 1.7 V, maximum: 1.9 V}\n",
        "main.yaml:4:17: rails.avdd.delivered: unknown key 'minimum'; did you mean min?\n"
        "main.yaml:4:33: rails.avdd.delivered: unknown key 'maximum'; did you mean max?",
    ),
    Bad(
        "capitals for min and max",
        RAIL + "    delivered: {Min: 1.7 V, MAX: 1.9 V}\n",
        "main.yaml:4:17: rails.avdd.delivered: unknown key 'Min'; did you mean min?\n"
        "main.yaml:4:29: rails.avdd.delivered: unknown key 'MAX'; did you mean max?",
    ),
    Bad(
        "nom for typ",
        RAIL + "    delivered: {min: 1.7 V, nom: 1.8 V, max: 1.9 V}\n",
        "main.yaml:4:29: rails.avdd.delivered: unknown key 'nom'; known here: min, typ, max, basis; your own "
        "keys begin with x-",
    ),
    Bad(
        "least and most for min and max",
        RAIL + "    delivered: {least: 1.7 V, most: 1.9 V}\n",
        "main.yaml:4:17: rails.avdd.delivered: unknown key 'least'; known here: min, typ, max, basis; your own "
        "keys begin with x-\n"
        "main.yaml:4:31: rails.avdd.delivered: unknown key 'most'; known here: min, typ, max, basis; your own "
        "keys begin with x-",
    ),
    Bad(
        "an English plural",
        RAIL + "comparators:\n  uv: {role: under_voltage, watches: avdd, delays: 1 us}\n",
        "main.yaml:5:44: comparators.uv: unknown key 'delays'; did you mean delay?",
    ),
    Bad(
        "a spelling of America",
        RAIL + "neighbors:\n  n: {}\n",
        "main.yaml:4:1: unknown key 'neighbors'; did you mean neighbours?",
    ),
    Bad(
        "a key in another language",
        RAIL + "    nennwert: 1.8 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'nennwert'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a key with a dot",
        "rails.avdd.nominal: 1.8 V\n",
        "main.yaml:1:1: unknown key 'rails.avdd.nominal'; known here: include, subsystem, revision, invented, "
        "note, conditions, process, rails, domains, references, biases, comparators, output_stages, resets, "
        "loads, modes, bypasses, neighbours, scenarios, complete, waivers; your own keys begin with x-",
    ),
    Bad(
        "a key with a slash",
        RAIL + "    nominal/typ: 1.8 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'nominal/typ'; did you mean nominal?",
    ),
    Bad(
        "a key with a letter that looks alike",
        RAIL + "    dаmage: 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'dаmage'; did you mean damage?",
    ),
    Bad(
        "a key with a blank that does not break",
        RAIL + "    note\u00a0: text\n",
        "main.yaml:4:5: rails.avdd: unknown key 'note\\xa0'; did you mean note?",
    ),
    Bad(
        "a key with a blank of no width",
        RAIL + "    dam\u200bage: 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'dam\\u200bage'; did you mean damage?",
    ),
    Bad(
        "a key with a soft hyphen",
        RAIL + "    dam\u00adage: 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'dam\\xadage'; did you mean damage?",
    ),
    Bad(
        "a key that turns the writing round",
        RAIL + "    \u202eegamad: 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key '\\u202eegamad'; known here: nominal, delivered, guaranteed, "
        "damage, rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, "
        "delay, residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "an empty key",
        RAIL + "    '': 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key ''; known here: nominal, delivered, guaranteed, damage, rise, "
        "fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, residual, "
        "off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a blank as key",
        RAIL + "    ' ': 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key ' '; known here: nominal, delivered, guaranteed, damage, rise, "
        "fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, residual, "
        "off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a line break in a key",
        RAIL + '    "dam\\nage": 2 V\n',
        "main.yaml:4:5: rails.avdd: unknown key 'dam\\nage'; did you mean damage?",
    ),
    Bad(
        "null as key",
        RAIL + "    null: 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'null'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "true as key",
        RAIL + "    true: 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key 'true'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a date as key",
        RAIL + "    2026-12-01: 2 V\n",
        "main.yaml:4:5: rails.avdd: unknown key '2026-12-01'; known here: nominal, delivered, guaranteed, "
        "damage, rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, "
        "delay, residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a mapping as key",
        RAIL + "    ? {a: b}\n    : 2 V\n",
        "main.yaml:4:7: rails.avdd: a key that is no plain text; write a name followed by a colon",
    ),
    Bad(
        "a mapping in braces as key",
        RAIL + "    {a: b}: 2 V\n",
        "main.yaml:4:5: rails.avdd: a key that is no plain text; write a name followed by a colon",
    ),
    Bad(
        "an x without its hyphen",
        RAIL + "    xnote: mine\n",
        "main.yaml:4:5: rails.avdd: unknown key 'xnote'; did you mean note?",
    ),
    Bad(
        "an x with an underscore",
        RAIL + "    x_note: mine\n",
        "main.yaml:4:5: rails.avdd: unknown key 'x_note'; did you mean note?",
    ),
    Bad(
        "a capital X",
        RAIL + "    X-note: mine\n",
        "main.yaml:4:5: rails.avdd: unknown key 'X-note'; did you mean note?",
    ),
    Bad(
        "an element of one's own",
        "rails:\n  x-avdd: {nominal: 1.8 V}\n",
        "main.yaml:2:3: rails: 'x-avdd' is no name: x- begins keys of your own; give the element another name",
    ),
    Bad(
        "the id as a key",
        "rails:\n  avdd: {id: avdd, nominal: 1.8 V}\n",
        "main.yaml:2:10: rails.avdd: unknown key 'id'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a list of elements with their names",
        "rails:\n  - name: avdd\n    nominal: 1.8 V\n",
        "main.yaml:2:3: rails: a mapping of keys is due (found a list); write it as in {avdd: {nominal: 1.8 V, "
        "delivered: {min: 1.71 V, max: 1.89 V}}}",
    ),
    Bad(
        "elements of one section below another",
        RAIL + "    domains: {aon: {}}\n",
        "main.yaml:4:5: rails.avdd: unknown key 'domains'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a merge key with a list",
        "x-c: &c {nominal: 1 V}\nrails:\n  avdd:\n    <<: [*c]\n",
        "main.yaml:4:5: rails.avdd: a merge key (<<); write the values out, or use include",
    ),
    Bad(
        "a merge key in braces",
        "x-c: &c {nominal: 1 V}\nrails:\n  avdd: {<<: *c}\n",
        "main.yaml:3:10: rails.avdd: a merge key (<<); write the values out, or use include",
    ),
    Bad(
        "a merge key in quotes",
        "rails:\n  avdd: {'<<': 1, nominal: 1.8 V}\n",
        "main.yaml:2:10: rails.avdd: unknown key '<<'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-",
    ),
    Bad(
        "a section without the space after its colon",
        "rails:{avdd: {nominal: 1.8 V}}\n",
        "main.yaml:1:30: '}' without what it belongs to; remove it, or put the text in quotes",
    ),
    Bad(
        "several unknown keys",
        RAIL + "    ripple: {" + ", ".join(f"k{n}: 1" for n in range(3)) + "}\n",
        "main.yaml:4:14: rails.avdd.ripple: unknown key 'k0'; known here: peak_to_peak, frequency; your own "
        "keys begin with x-\n"
        "main.yaml:4:21: rails.avdd.ripple: unknown key 'k1'; known here: peak_to_peak, frequency; your own "
        "keys begin with x-\n"
        "main.yaml:4:28: rails.avdd.ripple: unknown key 'k2'; known here: peak_to_peak, frequency; your own "
        "keys begin with x-",
    ),
    Bad(
        "a settings key in a description",
        RAIL + "fail_at: error\n",
        "main.yaml:4:1: unknown key 'fail_at'; known here: include, subsystem, revision, invented, note, "
        "conditions, process, rails, domains, references, biases, comparators, output_stages, resets, loads, "
        "modes, bypasses, neighbours, scenarios, complete, waivers; your own keys begin with x-",
    ),
)
