"""What is wrong with data that the schema refuses, in words an engineer can act on.

This is the explaining half of validation: the compiled validator says yes or no, and only where it says no is the
slower, explaining one (the ``jsonschema`` library, taught the keywords ``x-quantity`` and ``x-names``) loaded.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from difflib import get_close_matches
from typing import Any, Final

from jsonschema import Draft202012Validator, ValidationError, validators

from tidegate.lint import quantity
from tidegate.lint.description.place import Fault
from tidegate.lint.description.sources import Sources
from tidegate.lint.description.yaml_text import dotted

_SPANS: Final = {kind.dimension.value: kind for kind in quantity.Span.__subclasses__()}
_PARTS: Final = frozenset({"Least", "Typical", "Greatest"})  # titles of the parts of a span
MOST_SHOWN: Final = 60
"""Longest text found in a file that a message repeats, in characters."""


def schema_faults(data: Mapping[str, Any], schema: Mapping[str, Any], sources: Sources) -> list[Fault]:
    """Every fault of the data, with its place; empty if there is none."""
    faults: list[Fault] = []
    for error in _Explaining(schema).iter_errors(data):
        faults.extend(_faults_of(error, sources))
    return faults


def _quantity(validator: Any, dimension: str, instance: Any, schema: Any) -> Iterator[ValidationError]:
    if isinstance(instance, dict):
        return  # its parts are judged by the rest of the schema; their order when it is read
    try:
        _SPANS[dimension].read(instance)
    except quantity.QuantityError as error:
        yield ValidationError(str(error))


def _span(validator: Any, branches: Any, instance: Any, schema: Any) -> Iterator[ValidationError]:
    """``anyOf``: only the branch that the author meant is worth talking about."""
    if "x-quantity" in schema:
        if isinstance(instance, dict):
            yield from validator.descend(instance, branches[1], schema_path=1)
            yield from _parts(schema["x-quantity"], instance)
        return
    if not any(validator.evolve(schema=branch).is_valid(instance) for branch in branches):
        if isinstance(instance, dict):
            yield from validator.descend(instance, branches[1], schema_path=1)
        else:
            yield ValidationError("neither")


def _parts(dimension: str, instance: Mapping[str, Any]) -> Iterator[ValidationError]:
    """The parts of a span that are no quantities, each at its own place; else what is wrong with their order."""
    wrong = False
    for key in ("min", "typ", "max"):
        if key in instance:
            try:
                _SPANS[dimension].read(instance[key])
            except quantity.QuantityError as error:
                wrong = True
                yield ValidationError(str(error), path=(key,), validator="x-quantity")
    if not wrong:
        try:
            _SPANS[dimension].read({key: instance[key] for key in ("min", "typ", "max") if key in instance})
        except quantity.QuantityError as error:
            yield ValidationError(str(error), validator="x-quantity")


def _pattern(validator: Any, pattern: str, instance: Any, schema: Any) -> Iterator[ValidationError]:
    """Patterns of quantities are explained by ``x-quantity``; ids and dates here, a final line break refused."""
    if schema.get("title") not in _PARTS and isinstance(instance, str):
        if not re.search(pattern.removesuffix("$") + r"\Z", instance):
            yield ValidationError("does not fit")


def _min_properties(validator: Any, least: int, instance: Any, schema: Any) -> Iterator[ValidationError]:
    """An empty span is explained where its parts are read."""
    yield from ()


def _type(validator: Any, kind: Any, instance: Any, schema: Any) -> Iterator[ValidationError]:
    if schema.get("title") not in _PARTS:
        yield from Draft202012Validator.VALIDATORS["type"](validator, kind, instance, schema)


_Explaining: Final = validators.extend(
    Draft202012Validator,
    {
        "x-quantity": _quantity,
        "anyOf": _span,
        "pattern": _pattern,
        "minProperties": _min_properties,
        "type": _type,
    },
)


def _faults_of(error: ValidationError, sources: Sources) -> Iterator[Fault]:
    path = tuple(error.absolute_path)
    if error.validator == "additionalProperties" and isinstance(error.instance, dict):
        known = list(error.schema.get("properties", {}))
        for key in error.instance:
            if key not in known and not key.startswith("x-"):
                place = sources.place((*path, key), key=True)
                yield Fault(place, dotted(path), f"unknown key {_found(key)}", nearest_key(key, known))
        return
    if error.validator == "required":
        missing = [key for key in error.validator_value if key not in error.instance]
        for key in missing:
            yield Fault(sources.place(path, key=True), dotted(path), f"no {key}", f"{key} is needed here")
        return
    in_key = error.parent is None and "propertyNames" in error.absolute_schema_path
    problem, advice = _in_words(error)
    if in_key:
        place = sources.place((*path, error.instance), key=True)
        yield Fault(place, dotted(path), problem, advice)
    else:
        yield Fault(sources.place(path), dotted(path), problem, advice)


def nearest_key(key: str, known: Sequence[str]) -> str:
    """Advice about an unknown key."""
    near = get_close_matches(key, known, 1) or get_close_matches(key.lower().replace("-", "_"), known, 1)
    if near:
        return f"did you mean {near[0]}?"
    return f"known here: {', '.join(known)}; keys of your own begin with x-"


_TYPE_WORDS: Final = {
    "object": "a mapping of keys", "array": "a list", "string": "a text", "number": "a number",
    "integer": "a whole number", "boolean": "true or false",
}  # fmt: skip


def _in_words(error: ValidationError) -> tuple[str, str]:
    """What is wrong (with what was found), and what would be right."""
    found, value = _found(error.instance), error.validator_value
    match error.validator:
        case "x-quantity":
            problem, _, advice = error.message.partition("; ")
            return problem, advice
        case "anyOf":
            return f"neither none nor a mapping (found {found})", "write none, or a mapping that says what it is"
        case "type":
            kind = _TYPE_WORDS[value]
            quote = " (put it in quotes)" if value == "string" and not isinstance(error.instance, dict | list) else ""
            return f"{kind} is due (found {found})", f"write {kind}, such as {_example(error)}{quote}"
        case "enum":
            near = get_close_matches(str(error.instance), [str(v) for v in value], 1)
            hint = f"did you mean {near[0]}? " if near else ""
            return f"no such choice (found {found})", f"{hint}choices: {', '.join(map(str, value))}"
        case "pattern":
            return f"{found} does not fit", _example_sentence(error)
        case "minimum" | "exclusiveMinimum":
            above = "above" if error.validator == "exclusiveMinimum" else "at least"
            return f"too small (found {found})", f"{above} {value} is due"
        case "minLength":
            return "empty text", "write it, or leave the key out"
        case "uniqueItems":
            return "names something twice", "keep one of them"
        case _:
            return f"not as the schema wants it (found {found})", _example_sentence(error)


def _example_sentence(error: ValidationError) -> str:
    if "propertyNames" in error.absolute_schema_path or error.schema.get("title") == "Name":
        return "a name has letters, digits, - and _, begins with a letter or _, and is 64 characters long at the most"
    return f"write it as in {_example(error)}"


def _example(error: ValidationError) -> str:
    examples = error.schema.get("examples")
    if not examples:
        return "the reference shows"
    return str(examples[0]).lower() if isinstance(examples[0], bool) else str(examples[0])


def _found(instance: Any) -> str:
    """What was found, on one line and not too long."""
    if isinstance(instance, bool):
        return "true" if instance else "false"
    if isinstance(instance, dict):
        return "a mapping" if instance else "an empty mapping"
    if isinstance(instance, list):
        return "a list"
    text = repr(instance)
    return text if len(text) <= MOST_SHOWN else text[: MOST_SHOWN - 3] + "..."
