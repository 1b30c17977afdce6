"""Keys that stand twice. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, Bad

KEYS_TWICE: Final = (
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
        "a key given twice three levels down",
        RAIL + "    ripple:\n      frequency: 1 MHz\n      peak_to_peak: 1 mV\n      frequency: 2 MHz\n",
        "main.yaml:7:7: rails.avdd.ripple.frequency: given twice (first in line 5); keep one of them",
    ),
    Bad(
        "a key given three times",
        RAIL + "    damage: 2 V\n    damage: 3 V\n    damage: 4 V\n",
        "main.yaml:5:5: rails.avdd.damage: given twice (first in line 4); keep one of them\n"
        "main.yaml:6:5: rails.avdd.damage: given twice (first in line 4); keep one of them",
    ),
    Bad(
        "a key given twice, once in quotes",
        RAIL + "    'nominal': 1.7 V\n",
        "main.yaml:4:5: rails.avdd.nominal: given twice (first in line 3); keep one of them",
    ),
    Bad(
        "a key given twice, once by an alias",
        "x-a: &a nominal\nrails:\n  avdd:\n    nominal: 1.8 V\n    *a : 1.7 V\n",
        "main.yaml:5:10: rails.avdd.nominal: given twice (first in line 4); keep one of them",
    ),
    Bad(
        "a key given twice in a key of one's own",
        "x-a: {b: 1, b: 2}\n" + RAIL,
        "main.yaml:1:13: x-a.b: given twice (first in line 1); keep one of them",
    ),
    Bad(
        "a key given twice, of which neither is known",
        RAIL + "    colour: red\n    colour: blue\n",
        "main.yaml:4:5: rails.avdd: unknown key 'colour'; known here: nominal, delivered, guaranteed, damage, "
        "rise, fall, collapse, overshoot, dip, ripple, source_impedance, load_step, hold_up, after, delay, "
        "residual, off_time, made_by, note; your own keys begin with x-\n"
        "main.yaml:5:5: rails.avdd.colour: given twice (first in line 4); keep one of them",
    ),
)
