"""Spans of a quantity: least, typical, greatest, and where they come from. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, Bad

SPANS: Final = (
    Bad(
        "a number without unit in a span",
        RAIL + "    delivered: {min: 1.7, max: 1.9 V}\n",
        "main.yaml:4:22: rails.avdd.delivered.min: 1.7 has no unit; write its unit, such as 1.7 V",
    ),
    Bad(
        "a span in the wrong order",
        RAIL + "    delivered: {min: 1.9 V, max: 1.7 V}\n",
        "main.yaml:4:16: rails.avdd.delivered: min 1.9 V, max 1.7 V are out of order; min <= typ <= max is due",
    ),
    Bad(
        "a span without values",
        RAIL + "    delivered: {basis: {by: measured}}\n",
        "main.yaml:4:16: rails.avdd.delivered: a span without values; give at least one of min, typ, max",
    ),
    Bad(
        "a span with a key that is not known",
        RAIL + "    delivered: {min: 1.7 V, maxi: 1.9 V}\n",
        "main.yaml:4:29: rails.avdd.delivered: unknown key 'maxi'; did you mean max?",
    ),
    Bad(
        "a list for a quantity",
        RAIL + "    delivered: [1.7 V, 1.9 V]\n",
        "main.yaml:4:16: rails.avdd.delivered: a list is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a mapping for a part of a span",
        RAIL + "    delivered: {min: {typ: 1.7 V}}\n",
        "main.yaml:4:22: rails.avdd.delivered.min: a mapping is no voltage; write it as in 1.62 V",
    ),
    Bad(
        "a range written with a dash",
        RAIL + "    delivered: 1.7-1.9 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.7-1.9 V' is no voltage; write a range as {min: 1.7 V, max: 1.9 V}",
    ),
    Bad(
        "`5 V to 3 V`",
        RAIL + "    delivered: 5 V to 3 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '5 V to 3 V' is no voltage; write a range as {min: 3 V, max: 5 V}",
    ),
    Bad(
        "a range with to",
        RAIL + "    delivered: 1.7 V to 1.9 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.7 V to 1.9 V' is no voltage; write a range as {min: 1.7 V, "
        "max: 1.9 V}",
    ),
    Bad(
        "a range with dots",
        RAIL + "    delivered: 1.7..1.9 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.7..1.9 V' is no voltage; write a range as {min: 1.7 V, max: 1.9 V}",
    ),
    Bad(
        "a range with a wave",
        RAIL + "    delivered: 1.7~1.9 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.7~1.9 V' is no voltage; write one number with its unit, such "
        "as 1.62 V",
    ),
    Bad(
        "a range with an ellipsis",
        RAIL + "    delivered: 1.7…1.9 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.7…1.9 V' is no voltage; write a range as {min: 1.7 V, max: 1.9 V}",
    ),
    Bad(
        "a range with a dash of typesetting",
        RAIL + "    delivered: 1.7–1.9 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.7–1.9 V' is no voltage; write a range as {min: 1.7 V, max: 1.9 V}",
    ),
    Bad(
        "a range in brackets",
        RAIL + "    delivered: '[1.7 V, 1.9 V]'\n",
        "main.yaml:4:16: rails.avdd.delivered: '[1.7 V, 1.9 V]' is no voltage; write a number with its unit, "
        "such as 1.62 V",
    ),
    Bad(
        "a tolerance with its sign",
        RAIL + "    delivered: 1.8 V ± 5 %\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.8 V ± 5 %' is no voltage; write one number with its unit, "
        "such as 1.62 V",
    ),
    Bad(
        "a tolerance in letters",
        RAIL + "    delivered: 1.8 V +/- 0.1 V\n",
        "main.yaml:4:16: rails.avdd.delivered: '1.8 V +/- 0.1 V' is no voltage; write one number with its unit, "
        "such as 1.62 V",
    ),
    Bad(
        "a bound with a sign",
        RAIL + "    damage: '> 2.3 V'\n",
        "main.yaml:4:13: rails.avdd.damage: '> 2.3 V' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a bound of typesetting",
        RAIL + "    damage: ≤2.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '≤2.3 V' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "typ below min",
        RAIL + "    delivered: {min: 1.8 V, typ: 1.7 V}\n",
        "main.yaml:4:16: rails.avdd.delivered: min 1.8 V, typ 1.7 V are out of order; min <= typ <= max is due",
    ),
    Bad(
        "typ above max",
        RAIL + "    delivered: {typ: 1.9 V, max: 1.8 V}\n",
        "main.yaml:4:16: rails.avdd.delivered: typ 1.9 V, max 1.8 V are out of order; min <= typ <= max is due",
    ),
    Bad(
        "ends that differ in their units and order",
        RAIL + "    rise: {min: 1 ms, max: 50 us}\n",
        "main.yaml:4:11: rails.avdd.rise: min 1 ms, max 50 us are out of order; min <= typ <= max is due",
    ),
    Bad(
        "a span in which one end has another dimension",
        RAIL + "    rise: {min: 50 us, max: 5 V}\n",
        "main.yaml:4:29: rails.avdd.rise.max: '5 V' is a voltage; write a duration, such as 20 us",
    ),
    Bad(
        "a span with two wrong ends",
        RAIL + "    rise: {min: 50, max: 5 V}\n",
        "main.yaml:4:17: rails.avdd.rise.min: 50 has no unit; write its unit, such as 50 us\n"
        "main.yaml:4:26: rails.avdd.rise.max: '5 V' is a voltage; write a duration, such as 20 us",
    ),
    Bad(
        "a list for an end",
        RAIL + "    rise: {min: [50 us], max: 5 ms}\n",
        "main.yaml:4:17: rails.avdd.rise.min: a list is no duration; write a number with its unit, such as 20 us",
    ),
    Bad(
        "a span in a text",
        RAIL + "    rise: '{min: 50 us, max: 5 ms}'\n",
        "main.yaml:4:11: rails.avdd.rise: '{min: 50 us, max: 5 ms}' is a text, no duration; write it without quotes",
    ),
    Bad(
        "an unknown basis",
        RAIL + "    rise: {min: 50 us, max: 5 ms, basis: {by: guessed}}\n",
        "main.yaml:4:47: rails.avdd.rise.basis.by: no such choice (found 'guessed'); choices: calculated, "
        "simulated, measured, published",
    ),
    Bad(
        "a basis that is a text",
        RAIL + "    rise: {min: 50 us, max: 5 ms, basis: simulated}\n",
        "main.yaml:4:42: rails.avdd.rise.basis: a mapping of keys is due (found 'simulated'); write it as in "
        "{by: simulated, corners: all}",
    ),
    Bad(
        "a basis with an unknown key",
        RAIL + "    rise: {min: 50 us, max: 5 ms, basis: {at: all}}\n",
        "main.yaml:4:43: rails.avdd.rise.basis: unknown key 'at'; known here: by, corners, temperatures, ramps, "
        "reference, source; your own keys begin with x-",
    ),
    Bad(
        "a sigma where a bound is due",
        RAIL + "    rise: {value: 5 ms, is: sigma}\n",
        "main.yaml:4:12: rails.avdd.rise: unknown key 'value'; known here: min, typ, max, basis; your own keys "
        "begin with x-\n"
        "main.yaml:4:25: rails.avdd.rise: unknown key 'is'; known here: min, typ, max, basis; your own keys "
        "begin with x-",
    ),
)
