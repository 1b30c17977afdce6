"""Units of quantities. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, Bad

UNITS: Final = (
    Bad(
        "a unit of another dimension",
        RAIL + "    damage: 2.3 mA\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 mA' is a current; write a voltage, such as 1.62 V",
    ),
    Bad(
        "a unit with the wrong capitals",
        RAIL + "    damage: 2.3 v\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 v' has the unknown unit 'v'; did you mean 2.3 V?",
    ),
    Bad(
        "a micro sign in the unit",
        RAIL + "    rise: 5 µs\n",
        "main.yaml:4:11: rails.avdd.rise: '5 µs' is not written plainly; write 5 us",
    ),
    Bad(
        "the Greek letter mu in the unit",
        RAIL + "    rise: 5 μs\n",
        "main.yaml:4:11: rails.avdd.rise: '5 μs' is not written plainly; write 5 us",
    ),
    Bad(
        "the sign for ohm",
        RAIL + "    source_impedance: 0.3 Ω\n",
        "main.yaml:4:23: rails.avdd.source_impedance: '0.3 Ω' is not written plainly; write 0.3 ohm",
    ),
    Bad(
        "the Greek letter omega",
        RAIL + "    source_impedance: 0.3 Ω\n",
        "main.yaml:4:23: rails.avdd.source_impedance: '0.3 Ω' is not written plainly; write 0.3 ohm",
    ),
    Bad(
        "the sign for degrees",
        "conditions: {junction_temperature: {min: -40 °C, max: 125 °C}}\n" + RAIL,
        "main.yaml:1:42: conditions.junction_temperature.min: '-40 °C' is not written plainly; write -40 degC\n"
        "main.yaml:1:55: conditions.junction_temperature.max: '125 °C' is not written plainly; write 125 degC",
    ),
    Bad(
        "the letter for degrees Celsius",
        "conditions: {junction_temperature: {min: -40 ℃, max: 125 degC}}\n" + RAIL,
        "main.yaml:1:42: conditions.junction_temperature.min: '-40 ℃' is not written plainly; write -40 degC",
    ),
    Bad(
        "a unit of full width",
        RAIL + "    damage: 2.3 Ｖ\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 Ｖ' is not written plainly; write 2.3 V",
    ),
    Bad(
        "the unit alone",
        RAIL + "    damage: V\n",
        "main.yaml:4:13: rails.avdd.damage: 'V' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "the unit before the number",
        RAIL + "    damage: V 2.3\n",
        "main.yaml:4:13: rails.avdd.damage: 'V 2.3' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "the number in words",
        RAIL + "    damage: two volts\n",
        "main.yaml:4:13: rails.avdd.damage: 'two volts' is no voltage; write a number with its unit, such as 1.62 V",
    ),
    Bad(
        "the unit in words",
        RAIL + "    damage: 2.3 volts\n",
        "main.yaml:4:13: rails.avdd.damage: '2.3 volts' has the unknown unit 'volts'; did you mean 2.3 V?",
    ),
    Bad(
        "the unit between the digits",
        RAIL + "    damage: 2V3\n",
        "main.yaml:4:13: rails.avdd.damage: '2V3' has the unknown unit 'V3'; did you mean 2.3 V?",
    ),
    Bad(
        "a resistance written with its letter",
        RAIL + "    source_impedance: 4k7\n",
        "main.yaml:4:23: rails.avdd.source_impedance: '4k7' has the unknown unit 'k7'; did you mean 4.7 kohm?",
    ),
    Bad(
        "a resistance written with R",
        RAIL + "    source_impedance: 4R7\n",
        "main.yaml:4:23: rails.avdd.source_impedance: '4R7' has the unknown unit 'R7'; did you mean 4.7 ohm?",
    ),
    Bad(
        "a resistance without ohm",
        RAIL + "    source_impedance: 47 k\n",
        "main.yaml:4:23: rails.avdd.source_impedance: '47 k' has the unknown unit 'k'; did you mean 47 kohm?",
    ),
    Bad(
        "mega for milli",
        RAIL + "    ripple: {frequency: 5 mHz}\n",
        "main.yaml:4:25: rails.avdd.ripple.frequency: '5 mHz' has the unknown unit 'mHz'; did you mean 5 MHz?",
    ),
    Bad(
        "a prefix that no one uses here",
        RAIL + "    damage: 23 dV\n",
        "main.yaml:4:13: rails.avdd.damage: '23 dV' has the unknown unit 'dV'; units of a voltage: nV, uV, mV, V, kV",
    ),
    Bad(
        "a prefix without its unit",
        RAIL + "    rise: 5 m\n",
        "main.yaml:4:11: rails.avdd.rise: '5 m' is a length; write a duration, such as 20 us",
    ),
    Bad(
        "kelvin of degrees",
        "conditions: {junction_temperature: {min: -40 K, max: 398 K}}\n" + RAIL,
        "main.yaml:1:42: conditions.junction_temperature.min: '-40 K' lies below absolute zero; the lowest is "
        "-273.15 degC",
    ),
    Bad(
        "below absolute zero",
        "conditions: {junction_temperature: {min: -300 degC, max: 125 degC}}\n" + RAIL,
        "main.yaml:1:42: conditions.junction_temperature.min: '-300 degC' lies below absolute zero; the lowest "
        "is -273.15 degC",
    ),
    Bad(
        "degrees without their C",
        "conditions: {junction_temperature: {min: -40 deg, max: 125 deg}}\n" + RAIL,
        "main.yaml:1:42: conditions.junction_temperature.min: '-40 deg' has the unknown unit 'deg'; did you "
        "mean -40 degC?\n"
        "main.yaml:1:56: conditions.junction_temperature.max: '125 deg' has the unknown unit 'deg'; did you "
        "mean 125 degC?",
    ),
    Bad(
        "degrees Fahrenheit",
        "conditions: {junction_temperature: {min: -40 degF, max: 257 degF}}\n" + RAIL,
        "main.yaml:1:42: conditions.junction_temperature.min: '-40 degF' has the unknown unit 'degF'; units of "
        "a temperature: K, degC\n"
        "main.yaml:1:57: conditions.junction_temperature.max: '257 degF' has the unknown unit 'degF'; units of "
        "a temperature: K, degC",
    ),
    Bad(
        "a life in months",
        "conditions: {service_life: 120 months}\n" + RAIL,
        "main.yaml:1:28: conditions.service_life: '120 months' has the unknown unit 'months'; units of a "
        "duration: ps, ns, us, ms, s, min, h, d, yr",
    ),
    Bad(
        "a life in years, spelt out",
        "conditions: {service_life: 10 years}\n" + RAIL,
        "main.yaml:1:28: conditions.service_life: '10 years' has the unknown unit 'years'; did you mean 10 yr?",
    ),
    Bad(
        "a time for a voltage",
        RAIL + "    damage: 5 ms\n",
        "main.yaml:4:13: rails.avdd.damage: '5 ms' is a duration; write a voltage, such as 1.62 V",
    ),
    Bad(
        "a voltage for a time",
        RAIL + "    rise: 5 V\n",
        "main.yaml:4:11: rails.avdd.rise: '5 V' is a voltage; write a duration, such as 20 us",
    ),
    Bad(
        "a share for a voltage",
        RAIL + "    damage: 5 %\n",
        "main.yaml:4:13: rails.avdd.damage: '5 %' is a ratio; write a voltage, such as 1.62 V",
    ),
    Bad(
        "a voltage for a share",
        RAIL + "references:\n  ref: {accuracy: 3 mV}\n",
        "main.yaml:5:19: references.ref.accuracy: '3 mV' is a voltage; write a ratio, such as 2 %",
    ),
    Bad(
        "a share as a plain number",
        RAIL + "references:\n  ref: {accuracy: 0.003}\n",
        "main.yaml:5:19: references.ref.accuracy: 0.003 has no unit; write it in % or ppm: 0.003 is 0.3 %",
    ),
    Bad(
        "per cent in words",
        RAIL + "references:\n  ref: {accuracy: 0.3 percent}\n",
        "main.yaml:5:19: references.ref.accuracy: '0.3 percent' has the unknown unit 'percent'; did you mean 0.3 %?",
    ),
    Bad(
        "parts per thousand",
        RAIL + "references:\n  ref: {accuracy: 3 ‰}\n",
        "main.yaml:5:19: references.ref.accuracy: '3 ‰' is no ratio; write one number with its unit, such as 2 %",
    ),
    Bad(
        "decibels",
        RAIL + "references:\n  ref: {accuracy: 3 dB}\n",
        "main.yaml:5:19: references.ref.accuracy: '3 dB' has the unknown unit 'dB'; units of a ratio: ppm, %",
    ),
    Bad(
        "farads in capitals",
        RAIL + "    hold_up: 22 UF\n",
        "main.yaml:4:14: rails.avdd.hold_up: '22 UF' has the unknown unit 'UF'; did you mean 22 uF?",
    ),
    Bad(
        "hertz in small letters",
        RAIL + "    ripple: {frequency: 1 mhz}\n",
        "main.yaml:4:25: rails.avdd.ripple.frequency: '1 mhz' has the unknown unit 'mhz'; did you mean 1 MHz?",
    ),
    Bad(
        "amperes in words",
        RAIL + "    load_step: 20 milliamps\n",
        "main.yaml:4:16: rails.avdd.load_step: '20 milliamps' has the unknown unit 'milliamps'; units of a "
        "current: fA, pA, nA, uA, mA, A",
    ),
    Bad(
        "a slope without its time",
        RAIL + "    collapse: 2 V\n",
        "main.yaml:4:15: rails.avdd.collapse: '2 V' is a voltage; write a voltage slope, such as 10 V/ms",
    ),
    Bad(
        "a slope with a blank",
        RAIL + "    collapse: 2 V / ms\n",
        "main.yaml:4:15: rails.avdd.collapse: '2 V / ms' is no voltage slope; write 2 V/ms",
    ),
    Bad(
        "a slope upside down",
        RAIL + "    collapse: 2 ms/V\n",
        "main.yaml:4:15: rails.avdd.collapse: '2 ms/V' has the unknown unit 'ms/V'; units of a voltage slope: "
        "mV/s, V/s, mV/ms, V/ms, mV/us, V/us, V/ns, V/min",
    ),
    Bad(
        "a slope with per",
        RAIL + "    collapse: 2 V per ms\n",
        "main.yaml:4:15: rails.avdd.collapse: '2 V per ms' is no voltage slope; write 2 V/ms",
    ),
)
