"""What is wrong with a text that is not the quantity that is due, and what would be right."""

from __future__ import annotations

import re
from typing import Final

from tidegate.lint.found import quoted
from tidegate.lint.limits import MOST_QUANTITY
from tidegate.lint.quantity import value_or_none
from tidegate.lint.units import Dimension

_NUMBER: Final = r"[+-]?[0-9]+(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?"
_RANGE: Final = re.compile(rf"({_NUMBER})\s*([^\s\d.+-][^\s.-]*)?\s*(?:\.\.+|-|to)\s*({_NUMBER})\s*(\S+)")
_NOT_YET: Final = frozenset(
    {"", "?", "??", "???", "-", "--", "none", "tbd", "tba", "tbc", "todo", "n/a", "na", "unknown", "x"}
)
"""What is written where a number is to come."""
_SIGNS: Final = str.maketrans(
    {
        "\u00b5": "u", "\u03bc": "u", "\u03a9": "ohm", "\u2126": "ohm", "\u00b0": "deg", "\u2103": "degC",
        "\u00b2": "^2", "\u00b7": "*", "\u22c5": "*", "\u25a1": "sq", "\u2212": "-", "\u2013": "-", "\u2026": "..",
        **dict.fromkeys(("\u00ad", "\u200b", "\u200c", "\u200d", "\u2060", "\ufeff"), ""),
        **{chr(0xFEE0 + sign): chr(sign) for sign in range(0x21, 0x7F)},
    }
)  # fmt: skip
"""Signs that look like the plain ones, or stand for them in other texts."""

_HABITS: Final[tuple[tuple[re.Pattern[str], str], ...]] = tuple(
    (re.compile(sign), plain)
    for sign, plain in (
        (r"^[Vv]olts?$", "V"),
        (r"^[Aa]mp(?:s|ere|eres)?$", "A"),
        (r"^[Hh]ertz$", "Hz"),
        (r"(?<=[Oo]hm)s$", ""),
        (r"^([kMG]?)R$", r"\1ohm"),
        (r"^[kK]$", "kohm"),
        (r"^M(?:eg)?$", "Mohm"),
        (r"^(?:deg ?)?[Cc](?:elsius)?$", "degC"),
        (r"^/K", "1/K"),
        (r"/(?:deg ?)?C$", "/K"),
        (r"/deg$", "/K"),
        (r"^deg$", "degC"),
        (r"^([munp]?)s(?:ec)(?:s|onds?)?$", r"\1s"),
        (r"^minutes?$|^mins$", "min"),
        (r"^h(?:rs?|ours?)$", "h"),
        (r"^days?$", "d"),
        (r"^(?:y|yrs|years?)$", "yr"),
        (r"^(?:percent|pct)$", "%"),
        (r"^microns?$", "um"),
        (r"(?<=[A-Za-z])(?:\*\*)?2$", "^2"),
        (r"/square$", "/sq"),
        (r"^mV ?\.?um$", "mV*um"),
    )
)
"""How units are written elsewhere."""


def what_is_wrong(text: str, dimension: Dimension) -> str:
    """A sentence about a text that is not a quantity of this dimension, and what would be."""
    problem, advice = _diagnosis(text, dimension)
    return f"{quoted(text)} {problem}; {advice}"


def _diagnosis(text: str, dimension: Dimension) -> tuple[str, str]:
    noun = dimension.noun
    due = f"write a number with its unit, such as {dimension.example}"
    if dimension is Dimension.COUNT:
        return "is a text", f"write a plain number, such as {dimension.example}"
    if len(text) > MOST_QUANTITY:
        return f"is longer than {MOST_QUANTITY} characters", due
    clean = " ".join(text.translate(_SIGNS).split())
    if re.match(r"[+-]?(?:nan|inf|infinity)\b", clean, re.IGNORECASE):
        return "is not a finite number", due
    other = _other_habit(clean, dimension)
    if other is not None:
        return other
    match = re.fullmatch(rf"({_NUMBER}) ?(.*)", clean)
    if match is None:
        return f"is no {noun}", _tidied(clean, dimension) or due
    number, unit = match.groups()
    if not unit:
        return "has no unit", with_unit(number, dimension)
    if unit in dimension.units:
        return _about_the_number(text, number, unit, dimension)
    return _about_the_unit(clean, number, unit, dimension)


def _other_habit(clean: str, dimension: Dimension) -> tuple[str, str] | None:
    """What is wrong with a text that is written as people write elsewhere; None where it is not."""
    noun = dimension.noun
    if clean.casefold() in _NOT_YET:
        return f"is no {noun}", "leave the key empty where it is not known yet"
    if clean.startswith("{"):
        return f"is a text, no {noun}", "write it without quotes"
    if re.match(r"[+-]?[0-9]+,[0-9]", clean):
        return _comma(clean, dimension)
    before, sign, _ = clean.partition("#")
    if sign and _reads(before.strip(), dimension):
        return f"is no {noun}", "put a space before the # of a comment"
    return None


def _comma(clean: str, dimension: Dimension) -> tuple[str, str]:
    """A comma in the number: it parts the decimals, or may part the thousands where three digits follow."""
    better = clean.replace(",", ".", 1)
    if not _reads(better, dimension):
        return "has a decimal comma", f"write a number with its unit, such as {dimension.example}"
    if re.match(r"[+-]?[1-9][0-9]{0,2},[0-9]{3}(?![0-9])", clean):
        return "has a comma", f"write {better}, or {clean.replace(',', '', 1)} if thousands are meant"
    return "has a decimal comma", f"write {better}"


def with_unit(number: str, dimension: Dimension) -> str:
    """Advice for a number without its unit."""
    if dimension is Dimension.RATIO:
        return f"write it in % or ppm: {number} is {float(number) * 100:.10g} %"
    return f"write its unit, such as {number} {dimension.example.split(' ')[1]}"


def _about_the_number(text: str, number: str, unit: str, dimension: Dimension) -> tuple[str, str]:
    """The unit is right."""
    plain = f"{number} {unit}"
    if text != plain and _reads(plain, dimension):
        return "is not written plainly", f"write {plain}"
    if number.startswith("-") and not dimension.signed:
        return "is negative", "a magnitude is due here, zero or more"
    if dimension is Dimension.TEMPERATURE and number.startswith("-"):
        return "lies below absolute zero", "the lowest is -273.15 degC"
    size = "small" if re.search(r"[eE]-", number) else "large"
    return f"is too {size} a number", f"no {dimension.noun} is that {size}"


def _about_the_unit(clean: str, number: str, unit: str, dimension: Dimension) -> tuple[str, str]:
    """The number is right."""
    noun = dimension.noun
    meant = _meant(unit, dimension)
    better = f"{number} {meant}"
    if meant is not None and _reads(better, dimension):
        return f"has the unknown unit {quoted(unit)}", f"did you mean {better}?"
    other = next((each for each in Dimension if unit in each.units), None)
    if other is not None:
        return f"is {one(other.noun)}", f"write {one(noun)}, such as {dimension.example}"
    inside = re.fullmatch(r"([A-Za-z]+)([0-9]+)", unit)
    if inside and number.isdigit():  # 4k7
        like = f"{number}.{inside[2]} {_meant(inside[1], dimension) or inside[1]}"
        if _reads(like, dimension):
            return f"has the unknown unit {quoted(unit)}", f"did you mean {like}?"
    known = f"units of {one(noun)}: {', '.join(dimension.units)}"
    if re.fullmatch(r"[A-Za-z%/^*0-9]+", unit):
        return f"has the unknown unit {quoted(unit)}", known
    advice = _tidied(clean, dimension) or f"write one number with its unit, such as {dimension.example}"
    return f"is no {noun}", advice


def one(noun: str) -> str:
    """The noun with its article."""
    return f"an {noun}" if noun[0] in "aeiou" else f"a {noun}"


def _meant(unit: str, dimension: Dimension) -> str | None:
    """The unit of this dimension that looks like the one found; None where none does."""
    for sign, plain in _HABITS:
        unit_so_far = sign.sub(plain, unit)
        if unit_so_far in dimension.units:
            return unit_so_far
    for sign, plain in _HABITS:
        unit = sign.sub(plain, unit)
    alike = [known for known in dimension.units if known.casefold() == unit.casefold()]
    return max(alike, key=lambda known: sum(map(str.__eq__, known, unit)), default=None)


def _tidied(clean: str, dimension: Dimension) -> str | None:
    """Advice for a text whose number is written as elsewhere: a range, ``.5 V``, ``5. V``, ``1_000 V``, ``1 000 V``."""
    match = _RANGE.fullmatch(clean)
    if match is not None:
        low, unit, high, last = match.groups()
        bounds = sorted(
            (f"{low} {unit or last}", f"{high} {last}"), key=lambda bound: value_or_none(bound, dimension) or 0.0
        )
        if all(_reads(bound, dimension) for bound in bounds):
            return f"write a range as {{min: {bounds[0]}, max: {bounds[1]}}}"
    better = re.sub(r"(?<=[0-9])[ _'](?=[0-9]{3}\b)", "", clean)
    better = re.sub(r" (?:/|per) ", "/", better)
    better = re.sub(r"(?<![0-9])\.(?=[0-9])", "0.", better)
    better = re.sub(r"(?<=[0-9])\.(?![0-9])", "", better)
    return f"write {better}" if _reads(better, dimension) else None


def _reads(text: str, dimension: Dimension) -> bool:
    return value_or_none(text, dimension) is not None
