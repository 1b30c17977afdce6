"""What cannot be asked of `tidegate start`. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import CHIP, Bad

STARTERS: Final = (
    Bad(
        "a starter without a voltage",
        CHIP,
        "tidegate start: --rail avdd: name and nominal voltage are due, such as avdd=1.8V",
        call="start --rail avdd",
    ),
    Bad(
        "a starter with a decimal comma",
        CHIP,
        "tidegate start: --rail avdd=1,8V: '1,8V' has a decimal comma; write 1.8V",
        call="start --rail avdd=1,8V",
    ),
    Bad(
        "a starter without a unit",
        CHIP,
        "tidegate start: --rail avdd=1.8: '1.8' has no unit; write its unit, such as 1.8 V",
        call="start --rail avdd=1.8",
    ),
    Bad(
        "a starter with a voltage below zero",
        CHIP,
        "tidegate start: --rail avdd=-1.8V: '-1.8V' is negative; a magnitude is due here, zero or more",
        call="start --rail avdd=-1.8V",
    ),
    Bad(
        "a starter with an empty name",
        CHIP,
        "tidegate start: --rail =1.8V: name and nominal voltage are due, such as avdd=1.8V",
        call="start --rail =1.8V",
    ),
    Bad(
        "a starter with a name that is none",
        CHIP,
        "tidegate start: --rail 1v8=1.8V: name and nominal voltage are due, such as avdd=1.8V",
        call="start --rail 1v8=1.8V",
    ),
    Bad(
        "a starter with none for a name",
        CHIP,
        "tidegate start: --rail none=1.8V: name and nominal voltage are due, such as avdd=1.8V",
        call="start --rail none=1.8V",
    ),
    Bad(
        "a starter with a letter of another script",
        CHIP,
        "tidegate start: --rail аvdd=1.8V: name and nominal voltage are due, such as avdd=1.8V",
        call="start --rail аvdd=1.8V",
    ),
    Bad(
        "a starter with a name that is too long",
        CHIP,
        "tidegate start: --rail nnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnnn=1.8V: name "
        "and nominal voltage are due, such as avdd=1.8V",
        call=f"start --rail {'n' * 65}=1.8V",
    ),
    Bad(
        "a starter with one rail twice",
        CHIP,
        "tidegate start: --rail avdd=3V: the rail avdd is given twice",
        call="start --rail avdd=1.8V --rail avdd=3V",
    ),
    Bad(
        "a starter with a role that is none",
        CHIP,
        "tidegate start: --watch avdd=poweron: no role is called 'poweron'; did you mean power-on?",
        call="start --rail avdd=1.8V --watch avdd=poweron",
    ),
    Bad(
        "a starter that watches no rail of its own",
        CHIP,
        "tidegate start: --watch vdd=under: no rail is called 'vdd'; give it with --rail vdd=1.8V",
        call="start --rail avdd=1.8V --watch vdd=under",
    ),
    Bad(
        "a starter with one role twice",
        CHIP,
        "tidegate start: --watch: a role is asked for twice on one rail",
        call="start --rail avdd=1.8V --watch avdd=under,under",
    ),
    Bad(
        "a starter with an empty role",
        CHIP,
        "tidegate start: --watch avdd=: no role is called ''; roles are power-on, under, over, reference-ready",
        call="start --rail avdd=1.8V --watch avdd=",
    ),
    Bad(
        "a starter with a rail called as a detector",
        CHIP,
        "tidegate start: --rail por_avdd: the starter has another element of this name; give the rail another one",
        call="start --rail por_avdd=1.8V --rail avdd=1V --watch avdd=power-on",
    ),
)
