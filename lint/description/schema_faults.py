"""What is wrong with data that the schema refuses, in words an engineer can act on.

This is the explaining half of validation: the compiled validator says yes or no, and only where it says no is the
slower, explaining one (the ``jsonschema`` library, taught the keyword ``x-quantity``) loaded.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from typing import Any, Final

from jsonschema import Draft202012Validator, ValidationError, validators

from tidegate.lint.description.nearest import nearest
from tidegate.lint.description.place import Fault, Path, dotted
from tidegate.lint.description.said_none import NONE, can_be_none
from tidegate.lint.description.schema_tree import Schema, example_at, object_at
from tidegate.lint.description.sources import Sources
from tidegate.lint.description.unknown_key import unknown_key
from tidegate.lint.description.written import written
from tidegate.lint.found import found, quoted
from tidegate.lint.limits import MOST_NAME
from tidegate.lint.quantity import QuantityError, Span
from tidegate.lint.quantity_faults import one

_SPANS: Final = {kind.dimension.value: kind for kind in Span.__subclasses__()}
_PARTS: Final = ("min", "typ", "max")


def schema_faults(data: Mapping[str, Any], schema: Schema, sources: Sources) -> list[Fault]:
    """Every fault of the data, with its place; empty if there is none."""
    explaining: Any = _EXPLAINING(schema)
    return [fault for error in explaining.iter_errors(data) for fault in _faults_of(error, schema, sources)]


def _any_of(validator: Any, branches: Any, instance: Any, schema: Schema) -> Iterator[ValidationError]:
    """``anyOf``: a text or number of its own, or a mapping; only what the author meant is worth talking about."""
    if "x-quantity" in schema:
        yield from _quantity(validator, branches[1], instance, _SPANS[schema["x-quantity"]])
    elif isinstance(instance, dict):
        yield from validator.descend(instance, branches[1], schema_path=1)
    elif not any(validator.evolve(schema=branch).is_valid(instance) for branch in branches):
        if _noun_of(schema) and not _nearly_none(instance):
            yield from validator.descend(instance, branches[1], schema_path=1)
        else:
            yield ValidationError("neither")


def _nearly_none(instance: Any) -> bool:
    return isinstance(instance, str) and bool(nearest(instance, [NONE]))


def _noun_of(schema: Schema) -> str:
    """What a quantity that may be said to be none is called; empty where it is another value."""
    span = _SPANS.get(schema["anyOf"][1].get("$ref", "").rpartition("/")[2])
    return span.dimension.noun if span is not None else ""


def _quantity(validator: Any, mapping: Schema, instance: Any, span: type[Span]) -> Iterator[ValidationError]:
    """What is wrong with a quantity, each of its parts at its own place; else with their order."""
    if not isinstance(instance, dict):
        yield from _misread(span, instance)
        return
    parts = {key: instance[key] for key in _PARTS if key in instance}
    # The library judges what else stands there; numbers and units are judged by reading them.
    rest = {**mapping, "minProperties": 0, "properties": {**mapping["properties"], **dict.fromkeys(_PARTS, True)}}
    yield from validator.descend(instance, rest, schema_path=1)
    wrong = [fault for key, part in parts.items() for fault in _misread(span, part, key)]
    if parts or not instance.keys() - mapping["properties"].keys():  # an unknown key may be the part that is missing
        yield from wrong or _misread(span, parts)


def _misread(span: type[Span], given: object, *path: str) -> Iterator[ValidationError]:
    try:
        if path and isinstance(given, dict):
            raise QuantityError(f"a mapping is no {span.dimension.noun}; write it as in {span.dimension.example}")
        span.read(given)
    except QuantityError as error:
        yield ValidationError(str(error), path=path, validator="x-quantity")


def _pattern(validator: Any, pattern: str, instance: Any, schema: Schema) -> Iterator[ValidationError]:
    """Patterns end at the end of the text: a final line break does not count as one."""
    if isinstance(instance, str) and not re.search(pattern.removesuffix("$") + r"\Z", instance):
        yield ValidationError("does not fit")


_VALIDATORS: Final[Any] = validators
_EXPLAINING: Final = _VALIDATORS.extend(
    Draft202012Validator,
    {"anyOf": _any_of, "pattern": _pattern},
    # 2.0 is a whole number to JSON Schema, but none to the typed description.
    type_checker=Draft202012Validator.TYPE_CHECKER.redefine("integer", lambda _, value: type(value) is int),
)


def _faults_of(error: Any, schema: Schema, sources: Sources) -> Iterator[Fault]:
    path: Path = tuple(error.absolute_path)
    match error.validator:
        case "additionalProperties":
            known = error.schema.get("properties", {})
            for key in error.instance:
                if key not in known and not key.startswith("x-"):
                    yield unknown_key(sources.place((*path, key), key=True), dotted(path), key, error.schema)
        case "required":
            for key in error.validator_value:
                if key not in error.instance:
                    advice = f"{key} is needed here, such as {written(example_at(schema, (*path, key)))}"
                    yield Fault(sources.place(path, key=True), dotted(path), f"no {key}", advice)
        case _ if "propertyNames" in error.absolute_schema_path:
            place = sources.place((*path, error.instance), key=True)
            if _is_name(error.schema):
                yield Fault(place, dotted(path), *_no_name(error.instance, "give the element another name"))
            else:
                advice = f"write it as in {written(error.schema['examples'][0])}"
                yield Fault(place, dotted(path), f"{quoted(error.instance)} does not fit", advice)
        case _:
            words = _no_none(error, object_at(schema, path[:-1])) if error.instance == NONE else None
            words = words or _in_words(error, written(example_at(schema, path)))
            yield Fault(sources.place(path), dotted(path), *words)


def _no_none(error: Any, above: Schema | None) -> tuple[str, str] | None:
    """What is wrong with ``none`` where a value is due; None where what is due says more."""
    problem, advice = "none cannot be said here", "leave the key empty where it is not known yet"
    match error.validator, error.validator_value:
        case "type", "array":
            return problem, advice if error.schema.get("minItems") else "write [] where there is none"
        case ("type", "object") | ("x-quantity", _):
            others = can_be_none(above)
            return problem, f"{advice}; it can be said of {', '.join(others)}" if others else advice
    return None


_NAME: Final = f"a name has letters, digits, - and _, begins with a letter or _, and has at most {MOST_NAME} characters"


def _no_name(text: str, other: str) -> tuple[str, str]:
    """What is wrong with a text that is no name, and what would be right."""
    if text == "none":
        return "none is no name, but says that there is nothing", other
    if text.startswith("x-"):
        return f"{quoted(text)} is no name: x- begins keys of your own", other
    bare = text.strip()
    if bare != text and re.fullmatch(_BARE_NAME, bare):
        return f"{quoted(text)} is no name", f"write {bare}"
    return f"{quoted(text)} is no name", _NAME


_BARE_NAME: Final = r"[A-Za-z_][A-Za-z0-9_-]*"

_TYPE_WORDS: Final = {
    "object": "a mapping of keys", "array": "a list", "string": "a text", "number": "a number",
    "integer": "a whole number", "boolean": "true or false",
}  # fmt: skip

_LIMITS: Final = {
    "minimum": "at least", "exclusiveMinimum": "more than", "maximum": "at most", "exclusiveMaximum": "less than",
}  # fmt: skip


def _in_words(error: Any, example: str) -> tuple[str, str]:
    """What is wrong (with what was found), and what would be right."""
    was, limit = found(error.instance), error.validator_value
    match error.validator:
        case "x-quantity":
            problem, _, advice = error.message.partition("; ")
            return problem, advice
        case "anyOf":
            hint = "did you mean none? " if _nearly_none(error.instance) else ""
            noun = "name" if "x-names" in error.schema else _noun_of(error.schema)
            other = one(noun) if noun else "a mapping of keys"
            return f"neither none nor {other} (found {was})", f"{hint}write none, or as in {example}"
        case "type":
            kind = "a name" if _is_name(error.schema) else _TYPE_WORDS[limit]
            return f"{kind} is due (found {was})", _advice_on_type(limit, error, example)
        case "enum":
            near = nearest(str(error.instance), map(str, limit))
            hint = f"did you mean {near[0]}? " if near else ""
            return f"no such choice (found {was})", f"{hint}choices: {', '.join(map(str, limit))}"
        case "pattern":
            if _is_name(error.schema):
                return _no_name(error.instance, "name one, or leave the key out where it is not known")
            return f"{was} does not fit", f"write it as in {example}"
        case "minimum" | "exclusiveMinimum" | "maximum" | "exclusiveMaximum":
            size = "small" if "min" in error.validator.lower() else "large"
            return f"too {size} (found {was})", f"{_LIMITS[error.validator]} {limit} is due"
        case "minLength" | "minItems":
            return f"nothing in it (found {was})", f"write it as in: {example}"
        case "uniqueItems":
            return "a list that names something twice", "keep one of them"
        case _:
            return f"not as it should be (found {was})", f"write it as in {example}"


def _advice_on_type(kind: str, error: Any, example: str) -> str:
    instance = error.instance
    if kind == "string" and "pattern" not in error.schema and not isinstance(instance, dict | list):
        return f'put it in quotes: "{found(instance)}"'
    if kind == "boolean":
        return "write true or false, without quotes" if isinstance(instance, str) else "write true or false"
    if kind in {"number", "integer"} and isinstance(instance, str) and re.fullmatch(r"[0-9.]{1,20}", instance):
        return f"write it without quotes, as in {example}"
    if kind == "array" and isinstance(instance, str) and re.fullmatch(r"[\w.-]{1,40}", instance, re.ASCII):
        return f"write [{instance}]"
    if (
        kind == "array"
        and isinstance(instance, str)
        and re.fullmatch(rf"{_BARE_NAME}(?:[, ]+{_BARE_NAME}){{1,9}}", instance)
    ):
        return f"write [{', '.join(re.split('[, ]+', instance))}]"
    return f"write it as in {example}"


def _is_name(schema: Schema) -> bool:
    return bool(schema.get("title") == "Name")
