"""Rules of packs that do not answer as a rule should. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import Bad
from tests.bad_input.packs import JUDGED, PACK, pack

MISBEHAVING_RULES: Final = (
    Bad(
        "a rule that raises",
        pack(PACK.replace("BODY", "return 1 // 0")),
        "house/low on avdd: ZeroDivisionError: integer division or modulo by zero",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that answers nothing",
        pack(PACK.replace("BODY", "pass")),
        "house/low on avdd: answered NoneType, not a judgement",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that answers a text",
        pack(PACK.replace("BODY", "return 'well'")),
        "house/low on avdd: answered str, not a judgement",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that leaves",
        pack(PACK.replace("BODY", "raise SystemExit(0)")),
        "house/low on avdd: SystemExit: 0",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that prints",
        pack(PACK.replace("BODY", "print('here')\n    return 1")),
        "here\nhouse/low on avdd: answered int, not a judgement",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that calls itself without end",
        pack(PACK.replace("BODY", "return low.judge(rail, case)")),
        "house/low on avdd: RecursionError: maximum recursion depth exceeded",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that answers for another",
        pack(PACK.replace("BODY", "return replace(case.passes('well'), rule='hysteresis/present')")),
        "house/low on avdd: answered for hysteresis/present on avdd",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that answers for another element",
        pack(PACK.replace("BODY", "return replace(case.passes('well'), subject='uv')")),
        "house/low on avdd: answered for house/low on uv",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that waives its own finding",
        pack(PACK.replace("BODY", "return replace(case.fails('low', mend='x'), waiver='mine')")),
        "house/low on avdd: waived its own finding",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that changes the description",
        pack(PACK.replace("BODY", "rail.nominal = 3")),
        "house/low on avdd: AttributeError: immutable type: 'Rail'",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that asks for a fact that nobody knows",
        pack(PACK.replace("BODY", "return case.whole.colour")),
        "house/low on avdd: AttributeError: 'DescriptionFacts' object has no attribute 'colour'",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule that asks for an element that is not there",
        pack(PACK.replace("BODY", "return case.of('nobody').most('delay')")),
        "house/low on avdd: TypeError: no element: 'nobody'",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule with a number that is none",
        pack(
            PACK.replace(
                "BODY", "return case.at_most(need=float('nan'), have=1.0, dimension=Dimension.VOLTAGE, says='x')"
            )
        ),
        "house/low on avdd: answered with a number that is none",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule with a text for a number",
        pack(PACK.replace("BODY", "return case.at_most(need='1 V', have=1.0, dimension=Dimension.VOLTAGE, says='x')")),
        "house/low on avdd: TypeError: unsupported operand type(s) for -: 'str' and 'float'",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule with a dimension that is none",
        pack(PACK.replace("BODY", "return case.at_most(need=1.0, have=1.0, dimension='volt', says='x')")),
        "house/low on avdd: KeyError: 'volt'",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule whose error says nothing",
        pack(PACK.replace("BODY", "raise ValueError")),
        "house/low on avdd: ValueError",
        call=JUDGED,
        status=3,
    ),
    Bad(
        "a rule whose error cannot be said",
        pack(PACK.replace("BODY", "raise Mute()")),
        "house/low on avdd: Mute, which does not say what it is about",
        call=JUDGED,
        status=3,
    ),
)
