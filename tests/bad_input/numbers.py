"""Plain numbers. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, UV, Bad

NUMBERS: Final = (
    Bad(
        "an octal number",
        RAIL + "output_stages:\n  out: {output: {vias: 010}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: '010' is read as decimal by some, as octal, hexadecimal "
        "or base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a number in base 60",
        RAIL + "    rise: 1:30\n",
        "main.yaml:4:11: rails.avdd.rise: '1:30' is read as decimal by some, as octal, hexadecimal or base 60 "
        "by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a hexadecimal number",
        UV + "divider: {ratio: 0x1}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: '0x1' is read as decimal by some, as octal, hexadecimal "
        "or base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a number beyond all bounds",
        UV + "divider: {ratio: 1e999}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: too large a number (found '1e999'); write a smaller one",
    ),
    Bad(
        "a number too small",
        UV + "divider: {ratio: 0}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: too small (found 0); more than 0 is due",
    ),
    Bad(
        "a number in quotes",
        UV + "divider: {ratio: '0.5'}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '0.5'); write it without quotes, "
        "as in 0.375",
    ),
    Bad(
        "a quantity for a plain number",
        UV + "divider: {ratio: 0.5 V}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '0.5 V'); write it as in 0.375",
    ),
    Bad(
        "part of a whole",
        RAIL + "output_stages:\n  out: {output: {vias: 2.5}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: a whole number is due (found 2.5); write it as in 2",
    ),
    Bad(
        "a float for a whole number",
        RAIL + "output_stages:\n  out: {output: {vias: 1e2}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: a whole number is due (found 100.0); write it as in 2",
    ),
    Bad(
        "a ratio above one",
        UV + "divider: {ratio: 1.2}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: too large (found 1.2); at most 1 is due",
    ),
    Bad(
        "a ratio below zero",
        UV + "divider: {ratio: -0.5}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: too small (found -0.5); more than 0 is due",
    ),
    Bad(
        "a ratio in per cent",
        UV + "divider: {ratio: 37 %}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '37 %'); write it as in 0.375",
    ),
    Bad(
        "a ratio as a fraction",
        UV + "divider: {ratio: 3/8}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '3/8'); write it as in 0.375",
    ),
    Bad(
        "a ratio with a comma",
        UV + "divider: {ratio: '0,375'}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '0,375'); write it as in 0.375",
    ),
    Bad(
        "a ratio that is not a number",
        UV + "divider: {ratio: .nan}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '.nan'); write it as in 0.375",
    ),
    Bad(
        "a ratio without end",
        UV + "divider: {ratio: .inf}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found '.inf'); write it as in 0.375",
    ),
    Bad(
        "a ratio that vanishes",
        UV + "divider: {ratio: 1e-999}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: too small a number (found '1e-999'); write a larger one",
    ),
    Bad(
        "a ratio with an underscore",
        UV + "divider: {ratio: 0_5}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: '0_5' is read as decimal by some, as octal, hexadecimal "
        "or base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a ratio in base 60",
        UV + "divider: {ratio: 0:30}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: '0:30' is read as decimal by some, as octal, hexadecimal "
        "or base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a binary number",
        UV + "divider: {ratio: 0b1}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: '0b1' is read as decimal by some, as octal, hexadecimal "
        "or base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "an octal number of YAML 1.2",
        UV + "divider: {ratio: 0o17}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: '0o17' is read as decimal by some, as octal, hexadecimal "
        "or base 60 by others; write a decimal number, or put it in quotes",
    ),
    Bad(
        "a flag for a number",
        UV + "divider: {ratio: true}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found true); write it as in 0.375",
    ),
    Bad(
        "a list for a number",
        UV + "divider: {ratio: [0.5]}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found a list); write it as in 0.375",
    ),
    Bad(
        "a mapping for a number",
        UV + "divider: {ratio: {top: 1}}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found a mapping); write it as in 0.375",
    ),
    Bad(
        "a whole number of five thousand digits",
        "conditions: {power_cycles: 1" + "0" * 5000 + "}\n" + RAIL,
        "main.yaml:1:28: conditions.power_cycles: too large a number (found "
        "'100000000000000000000000000000000000000000000000000000000000...'); write a smaller one",
    ),
    Bad(
        "a number of five thousand digits behind the point",
        UV + "divider: {ratio: 0." + "3" * 5000 + "x}}\n",
        "main.yaml:5:61: comparators.uv.divider.ratio: a number is due (found "
        "'0.3333333333333333333333333333333333333333333333333333333333...'); write it as in 0.375",
    ),
    Bad(
        "power cycles that are none",
        "conditions: {power_cycles: many}\n" + RAIL,
        "main.yaml:1:28: conditions.power_cycles: a number is due (found 'many'); write it as in 20000",
    ),
    Bad(
        "power cycles below zero",
        "conditions: {power_cycles: -1}\n" + RAIL,
        "main.yaml:1:28: conditions.power_cycles: too small (found -1); at least 0 is due",
    ),
    Bad(
        "a coverage of zero",
        "conditions: {coverage: 0}\n" + RAIL,
        "main.yaml:1:24: conditions.coverage: too small (found 0); more than 0 is due",
    ),
    Bad(
        "a coverage with its unit",
        "conditions: {coverage: 3 sigma}\n" + RAIL,
        "main.yaml:1:24: conditions.coverage: a number is due (found '3 sigma'); write it as in 3",
    ),
    Bad(
        "more false trips than one can accept",
        "conditions: {false_trips: -0.001}\n" + RAIL,
        "main.yaml:1:27: conditions.false_trips: too small (found -0.001); more than 0 is due",
    ),
    Bad(
        "vias below zero",
        RAIL + "output_stages:\n  out: {output: {vias: -2}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: too small (found -2); at least 1 is due",
    ),
    Bad(
        "no vias",
        RAIL + "output_stages:\n  out: {output: {vias: 0}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: too small (found 0); at least 1 is due",
    ),
    Bad(
        "vias in words",
        RAIL + "output_stages:\n  out: {output: {vias: two}}\n",
        "main.yaml:5:24: output_stages.out.output.vias: a whole number is due (found 'two'); write it as in 2",
    ),
)
