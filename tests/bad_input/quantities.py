"""Quantities. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, Bad

QUANTITIES: Final = (
    Bad(
        "a number without unit",
        RAIL + "    damage: 2.3\n",
        "main.yaml:4:13: rails.avdd.damage: 2.3 has no unit; write its unit, such as 2.3 V",
    ),
    Bad(
        "a decimal comma",
        RAIL + "    damage: 2,3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2,3 V' has a decimal comma; write 2.3 V",
    ),
    Bad(
        "a decimal comma in braces splits the text",
        RAIL + "    delivered: {min: 1,7 V}\n",
        "main.yaml:4:22: rails.avdd.delivered.min: 1 has no unit; write its unit, such as 1 V\n"
        "main.yaml:4:24: rails.avdd.delivered: unknown key '7 V'; write a point in a decimal number: a comma "
        "parts entries",
    ),
    Bad(
        "a magnitude below zero",
        RAIL + "    damage: -2.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '-2.3 V' is negative; a magnitude is due here, zero or more",
    ),
    Bad(
        "not a number",
        RAIL + "    damage: nan V\n",
        "main.yaml:4:13: rails.avdd.damage: 'nan V' is not a finite number; write a number with its unit, such "
        "as 1.62 V",
    ),
    Bad(
        "an endless number",
        RAIL + "    damage: .inf\n",
        "main.yaml:4:13: rails.avdd.damage: '.inf' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "an expression",
        RAIL + "    damage: 2 V + 0.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2 V + 0.3 V' is no voltage; write one number with its unit, such "
        "as 1.62 V",
    ),
    Bad(
        "a switch word for a quantity",
        RAIL + "    damage: yes\n",
        "main.yaml:4:13: rails.avdd.damage: yes is read as true or false by some and as a word by others; write "
        'true or false, or put it in quotes: "yes"',
    ),
    Bad(
        "true for a quantity",
        RAIL + "    damage: true\n",
        "main.yaml:4:13: rails.avdd.damage: true is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a quantity too large for a number",
        RAIL + "    damage: 1e400 V\n",
        "main.yaml:4:13: rails.avdd.damage: '1e400 V' is too large a number; no voltage is that large",
    ),
    Bad(
        "a final line break",
        RAIL + '    damage: "2.3 V\\n"\n',
        "main.yaml:4:13: rails.avdd.damage: '2.3 V\\n' is not written plainly; write 2.3 V",
    ),
    Bad(
        "a very long quantity",
        RAIL + "    damage: " + "9" * 200 + " V\n",
        "main.yaml:4:13: rails.avdd.damage: '999999999999999999999999999999999999999999999999999999999999...' "
        "is longer than 64 characters; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a minus sign of typesetting",
        RAIL + "references:\n  ref: {works_from_slope: −1.7 mV/K}\n",
        "main.yaml:5:27: references.ref.works_from_slope: '−1.7 mV/K' is not written plainly; write -1.7 mV/K",
    ),
    Bad(
        "a dash of typesetting for a minus",
        "conditions: {junction_temperature: {min: –40 degC, max: 125 degC}}\n" + RAIL,
        "main.yaml:1:42: conditions.junction_temperature.min: '–40 degC' is not written plainly; write -40 degC",
    ),
    Bad(
        "digits of full width",
        RAIL + "    damage: ２.３ V\n",
        "main.yaml:4:13: rails.avdd.damage: '２.３ V' is not written plainly; write 2.3 V",
    ),
    Bad(
        "digits of another script",
        RAIL + "    damage: ٢.٣ V\n",
        "main.yaml:4:13: rails.avdd.damage: '٢.٣ V' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a raised digit",
        RAIL + "    damage: 2³ V\n",
        "main.yaml:4:13: rails.avdd.damage: '2³ V' is no voltage; write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "a fraction",
        RAIL + "    damage: ½ V\n",
        "main.yaml:4:13: rails.avdd.damage: '½ V' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a blank that does not break",
        RAIL + "    damage: 2.3\u00a0V\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3\\xa0V' is not written plainly; write 2.3 V",
    ),
    Bad(
        "a thin blank",
        RAIL + "    damage: 2.3\u2009V\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3\\u2009V' is not written plainly; write 2.3 V",
    ),
    Bad(
        "a sign of no width in a number",
        RAIL + "    damage: 2\u200b.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2\\u200b.3 V' is not written plainly; write 2.3 V",
    ),
    Bad(
        "two blanks",
        RAIL + "    damage: 2.3  V\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3  V' is not written plainly; write 2.3 V",
    ),
    Bad(
        "a blank before the number",
        RAIL + "    damage: ' 2.3 V'\n",
        "main.yaml:4:13: rails.avdd.damage: ' 2.3 V' is not written plainly; write 2.3 V",
    ),
    Bad(
        "a blank after the unit",
        RAIL + "    damage: '2.3 V '\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 V ' is not written plainly; write 2.3 V",
    ),
    Bad(
        "a decimal comma and a thousands point",
        RAIL + "    hold_up: 1.000,5 uF\n",
        "main.yaml:4:14: rails.avdd.hold_up: '1.000,5 uF' is no capacitance; write one number with its unit, "
        "such as 50 fF",
    ),
    Bad(
        "a thousands comma",
        RAIL + "    hold_up: 1,000 uF\n",
        "main.yaml:4:14: rails.avdd.hold_up: '1,000 uF' has a comma; write 1.000 uF, or 1000 uF if thousands are meant",
    ),
    Bad(
        "a thousands blank",
        RAIL + "    hold_up: 1 000 uF\n",
        "main.yaml:4:14: rails.avdd.hold_up: '1 000 uF' is no capacitance; write 1000 uF",
    ),
    Bad(
        "a thousands underscore",
        RAIL + "    hold_up: 1_000 uF\n",
        "main.yaml:4:14: rails.avdd.hold_up: '1_000 uF' is no capacitance; write 1000 uF",
    ),
    Bad(
        "a thousands apostrophe",
        RAIL + "    hold_up: 1'000 uF\n",
        'main.yaml:4:14: rails.avdd.hold_up: "1\'000 uF" is no capacitance; write 1000 uF',
    ),
    Bad(
        "a point without a digit before it",
        RAIL + "    damage: .5 V\n",
        "main.yaml:4:13: rails.avdd.damage: '.5 V' is no voltage; write 0.5 V",
    ),
    Bad(
        "a point without a digit after it",
        RAIL + "    damage: 2. V\n",
        "main.yaml:4:13: rails.avdd.damage: '2. V' is no voltage; write 2 V",
    ),
    Bad(
        "two points",
        RAIL + "    damage: 2.3.1 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3.1 V' is no voltage; write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "two signs",
        RAIL + "    damage: --2.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '--2.3 V' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "an exponent without digits",
        RAIL + "    damage: 2e V\n",
        "main.yaml:4:13: rails.avdd.damage: '2e V' is no voltage; write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "an exponent with a point",
        RAIL + "    damage: 2e0.5 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2e0.5 V' is no voltage; write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "an exponent of full size",
        RAIL + "    damage: 1e999999999 V\n",
        "main.yaml:4:13: rails.avdd.damage: '1e999999999 V' is too large a number; no voltage is that large",
    ),
    Bad(
        "an exponent too small for a number",
        RAIL + "    damage: 1e-999999999 V\n",
        "main.yaml:4:13: rails.avdd.damage: '1e-999999999 V' is too small a number; no voltage is that small",
    ),
    Bad(
        "a number times ten to a power",
        RAIL + "    damage: 2.3x10^0 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3x10^0 V' is no voltage; write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "a hexadecimal number with a unit",
        RAIL + "    damage: 0x2 V\n",
        "main.yaml:4:13: rails.avdd.damage: '0x2 V' is no voltage; write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "about",
        RAIL + "    damage: ~2.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '~2.3 V' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a footnote",
        RAIL + "    damage: 2.3 V (1)\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 V (1)' is no voltage; write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "a quantity still to come",
        RAIL + "    damage: TBD\n",
        "main.yaml:4:13: rails.avdd.damage: 'TBD' is no voltage; leave the key empty where it is not known yet",
    ),
    Bad(
        "a question mark",
        RAIL + "    damage: '?'\n",
        "main.yaml:4:13: rails.avdd.damage: '?' is no voltage; leave the key empty where it is not known yet",
    ),
    Bad(
        "unlimited",
        RAIL + "    rise: {min: 1 us, max: unlimited}\n",
        "main.yaml:4:28: rails.avdd.rise.max: 'unlimited' is no duration; write a number with its unit, such as 20 us",
    ),
    Bad(
        "a minus and infinity",
        RAIL + "    damage: -inf V\n",
        "main.yaml:4:13: rails.avdd.damage: '-inf V' is not a finite number; write a number with its unit, such "
        "as 1.62 V",
    ),
    Bad(
        "not a number without a unit",
        RAIL + "    damage: .nan\n",
        "main.yaml:4:13: rails.avdd.damage: '.nan' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "zero without a unit",
        RAIL + "    residual: 0\n",
        "main.yaml:4:15: rails.avdd.residual: 0 has no unit; write its unit, such as 0 V",
    ),
    Bad(
        "an empty text for a quantity",
        RAIL + "    damage: ''\n",
        "main.yaml:4:13: rails.avdd.damage: '' is no voltage; leave the key empty where it is not known yet",
    ),
    Bad(
        "a blank for a quantity",
        RAIL + "    damage: ' '\n",
        "main.yaml:4:13: rails.avdd.damage: ' ' is no voltage; leave the key empty where it is not known yet",
    ),
    Bad(
        "a block of text for a quantity",
        RAIL + "    damage: |\n      2.3 V\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 V\\n' is not written plainly; write 2.3 V",
    ),
    Bad(
        "an alias of a wrong quantity",
        "x-a: &a 2.3 A\n" + RAIL + "    damage: *a\n",
        "main.yaml:1:6: rails.avdd.damage: '2.3 A' is a current; write a voltage, such as 1.62 V",
    ),
    Bad(
        "a date for a time",
        RAIL + "    rise: 2026-12-01\n",
        "main.yaml:4:11: rails.avdd.rise: '2026-12-01' is no duration; write one number with its unit, such as 20 us",
    ),
    Bad(
        "a clock for a time",
        RAIL + "    rise: 0:05\n",
        "main.yaml:4:11: rails.avdd.rise: '0:05' is read as decimal by some, as octal, hexadecimal or base 60 "
        "by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a version for a quantity",
        RAIL + "    damage: v2.3\n",
        "main.yaml:4:13: rails.avdd.damage: 'v2.3' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a formula",
        RAIL + "    damage: =1.2*1.8 V\n",
        "main.yaml:4:13: rails.avdd.damage: '=1.2*1.8 V' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a placeholder",
        RAIL + "    damage: ${VDD}\n",
        "main.yaml:4:13: rails.avdd.damage: '${VDD}' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "money",
        RAIL + "    damage: 2.3 $\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 $' is no voltage; write one number with its unit, such as 1.62 V",
    ),
    Bad(
        "another terminal's colours",
        RAIL + '    damage: "\\e[1m2.3 V"\n',
        "main.yaml:4:13: rails.avdd.damage: the character U+001B is not allowed in a text; remove it",
    ),
    Bad(
        "a flag for a quantity",
        RAIL + "    damage: false\n",
        "main.yaml:4:13: rails.avdd.damage: false is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a full-width minus",
        RAIL + "comparators:\n  uv: {role: under_voltage, watches: avdd, trip: {rising: －1 V}}\n",
        "main.yaml:5:59: comparators.uv.trip.rising: '－1 V' is negative; a magnitude is due here, zero or more",
    ),
    Bad(
        "a negative time",
        RAIL + "    rise: -5 ms\n",
        "main.yaml:4:11: rails.avdd.rise: '-5 ms' is negative; a magnitude is due here, zero or more",
    ),
    Bad(
        "a negative resistance",
        RAIL + "    source_impedance: -0.3 ohm\n",
        "main.yaml:4:23: rails.avdd.source_impedance: '-0.3 ohm' is negative; a magnitude is due here, zero or more",
    ),
    Bad(
        "a plus sign before a word",
        RAIL + "    damage: +max\n",
        "main.yaml:4:13: rails.avdd.damage: '+max' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "a quantity with more digits than a number holds",
        RAIL + "    damage: 2." + "3" * 80 + " V\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3333333333333333333333333333333333333333333333333333333333...' "
        "is longer than 64 characters; write a number with its unit, such as 1.62 V",
    ),
)
