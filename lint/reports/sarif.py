"""The report for code hosts: SARIF 2.1.0 (OASIS Standard, 27 March 2020, with errata 01)."""

from __future__ import annotations

import hashlib
import os
from collections.abc import Iterable, Iterator, Sequence
from pathlib import PurePath
from typing import Any, Final
from urllib.parse import quote

from tidegate.lint.description.place import Fault, Place
from tidegate.lint.engine import Review, RuleFault
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.must_keep import must_keep
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.json_form import json_form
from tidegate.lint.reports.json_report import account_entry, finite, must_keep_entry, settings_entry
from tidegate.lint.reports.plain_text import plain
from tidegate.lint.reports.words import keep_text, margin_words
from tidegate.lint.rule import Rule
from tidegate.lint.settings import Settings
from tidegate.lint.version import VERSION

_SCHEMA: Final = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
_FINGERPRINT: Final = "tidegate/1"
SEPARATOR: Final = ",\n"
"""What stands between the results."""


def results_text(results: Sequence[dict[str, Any]]) -> str:
    """Results as they stand in the log."""
    return SEPARATOR.join(json_form(result, depth=4) for result in results)


def sarif_pieces(results: Iterable[str], rules: Sequence[Rule], *, ran: dict[str, Any]) -> Iterator[str]:
    """One run, a piece at a time: how the tool was called, its rules, and the texts of all results between them."""
    run = {
        "tool": {"driver": _driver(rules)},
        "columnKind": "unicodeCodePoints",
        "invocations": [ran],
        "originalUriBaseIds": {"ROOT": {"description": {"text": "The folder in which the tool was called."}}},
        "results": [],
    }
    log = {"$schema": _SCHEMA, "version": "2.1.0", "runs": [run]}
    head, _, foot = json_form(log).rpartition("[]")
    yield f"{head}["
    opened = False
    for text in results:
        yield text if opened else f"\n{text}"
        opened = True
    yield f"\n      ]{foot}\n" if opened else f"]{foot}\n"


def invocation(
    *, status: int, notifications: Sequence[dict[str, Any]], settings: Sequence[Settings], rules: Sequence[Rule]
) -> dict[str, Any]:
    """How the run ended; files that could not be used and rules that failed themselves are notifications."""
    ran: dict[str, Any] = {
        "executionSuccessful": status in (0, 1),
        "exitCode": status,
        "toolExecutionNotifications": list(notifications),
        "properties": {"settings": [settings_entry(each) for each in settings]},
    }
    if len(settings) == 1 and (overrides := list(_overrides(settings[0], rules))):
        ran["ruleConfigurationOverrides"] = overrides
    return ran


def _overrides(settings: Settings, rules: Sequence[Rule]) -> Iterator[dict[str, Any]]:
    """What the settings change of the rules; where there are several settings, only their properties say it."""
    for index, rule in enumerate(rules):
        level = settings.level_of(rule)
        changes: dict[str, Any] = {}
        if settings.leaves_out(rule):
            changes["enabled"] = False
        if level is not rule.level:
            changes["level"] = level.value
        if changes:
            yield {"descriptor": {"id": rule.id, "index": index}, "configuration": changes}


def _driver(rules: Sequence[Rule]) -> dict[str, Any]:
    return {
        "name": "tidegate",
        "version": VERSION,
        "semanticVersion": VERSION,
        "informationUri": f"urn:tidegate:{VERSION}",
        "rules": [_rule(rule) for rule in rules],
    }


def _rule(rule: Rule) -> dict[str, Any]:
    name = "".join(word.capitalize() for word in rule.id.replace("/", "_").split("_"))
    help_text = "\n\n".join(_text(part)["text"] for part in _help(rule))
    return {
        "id": rule.id,
        "name": name,
        "shortDescription": _text(_sentence(rule.title)),
        "fullDescription": _text(rule.proves),
        "help": {"text": help_text},
        "defaultConfiguration": {"level": rule.level.value},
        "properties": {"family": rule.family, "appliesTo": list(rule.applies_to), "facts": list(rule.facts)},
    }


def _help(rule: Rule) -> tuple[str, ...]:
    return rule.proves, f"Mend: {rule.mend}.", f"Sources: {'; '.join(rule.sources)}."


def _sentence(text: str) -> str:
    return f"{text[0].upper()}{text[1:]}."


def review_results(review: Review, *, findings_only: bool = False) -> list[dict[str, Any]]:
    """One result for every judgement on one description, or for failures and questions alone."""
    told = (Kind.FAIL, Kind.REVIEW) if findings_only else tuple(Kind)
    return [_result(review, judgement) for judgement in review.judgements if judgement.kind in told]


def _result(review: Review, judgement: Judgement) -> dict[str, Any]:
    place = review.place(judgement)
    result: dict[str, Any] = {
        "ruleId": judgement.rule,
        "kind": judgement.kind.value,
        "level": judgement.level.value if judgement.kind is Kind.FAIL else "none",
        "message": _text(_message(review, judgement)),
        "locations": [{"physicalLocation": _physical(place), "logicalLocations": [_logical(judgement)]}],
        "partialFingerprints": {_FINGERPRINT: _fingerprint(review, judgement)},
        "properties": _properties(review, judgement),
    }
    if judgement.path:
        result["relatedLocations"] = _related(review, judgement)
    if judgement.waiver:
        result["suppressions"] = [{"kind": "external", "status": "accepted", "justification": plain(judgement.waiver)}]
    return result


def _logical(judgement: Judgement) -> dict[str, str]:
    return {"name": plain(judgement.subject), "fullyQualifiedName": plain(judgement.at), "kind": "element"}


def _message(review: Review, judgement: Judgement) -> str:
    parts = [f"{judgement.subject}: {judgement.message}"]
    kept = keep_text(judgement, must_keep(review, judgement))
    if kept:
        parts.append(f"Must keep: {kept}")
    if judgement.why:
        parts.append(f"Why: {judgement.why}")
    if judgement.path:
        parts.append(f"Path: {path_text(judgement.path)}")
    if judgement.mend:
        parts.append(f"Mend: {judgement.mend}")
    return ". ".join(parts) + "."


def _text(text: str) -> dict[str, str]:
    """A message that says the text: SARIF gives braces (3.11.5) and links in brackets (3.11.6) a meaning."""
    return {"text": plain(text).replace("{", "{{").replace("}", "}}").replace("](", "] (")}


def _fingerprint(review: Review, judgement: Judgement) -> str:
    """The same for the same finding, whatever stands elsewhere in the file or how the numbers move."""
    file = _uri(review.loaded.sources.files[0].name)
    return hashlib.sha256("\0".join((file, judgement.rule, judgement.subject)).encode()).hexdigest()


def _properties(review: Review, judgement: Judgement) -> dict[str, Any]:
    measure = judgement.measure
    properties: dict[str, Any] = {"subject": judgement.subject, "mend": plain(judgement.mend)}
    if judgement.missing:
        properties["missing"] = list(judgement.missing)
    if judgement.under:
        properties["under"] = judgement.under
    if measure is not None:
        unit = "1" if measure.dimension is Dimension.COUNT else measure.dimension.unit
        properties |= {"relation": measure.relation.value, "unit": unit}
        properties |= {name: finite(getattr(measure, name)) for name in ("need", "have", "margin")}
        properties |= {"sure": finite(measure.sure_margin), "best": finite(measure.best_margin)}
        properties |= {"exact": measure.is_exact, "marginText": margin_words(judgement)}
    if account := account_entry(judgement):
        properties["account"] = account
    if kept := must_keep_entry(judgement, must_keep(review, judgement)):
        properties["mustKeep"] = kept
    return properties


def _related(review: Review, judgement: Judgement) -> list[dict[str, Any]]:
    """The elements on the path, each where it is described."""
    related = []
    for number, hop in enumerate(judgement.path):
        element = review.graph.elements.get(hop.element)
        if element is None:
            continue
        place = review.loaded.sources.place((element.section, hop.element), key=True)
        message = _text(f"{hop.by} {hop.element}".strip())
        related.append({"id": number, "physicalLocation": _physical(place), "message": message})
    return related


def _physical(place: Place) -> dict[str, Any]:
    location: dict[str, Any] = {"artifactLocation": {"uri": _uri(place.file)}}
    if not PurePath(place.file).is_absolute():
        location["artifactLocation"]["uriBaseId"] = "ROOT"
    if place.line:
        location["region"] = {"startLine": place.line, "startColumn": place.column}
    return location


def _uri(file: str) -> str:
    path = PurePath(os.path.normpath(file))
    return path.as_uri() if path.is_absolute() else quote(os.fsencode(path.as_posix()))


def fault_notifications(faults: Sequence[Fault]) -> list[dict[str, Any]]:
    """Why a file cannot be used."""
    return [
        {
            "level": "error",
            "message": _text(str(fault)),
            "locations": [{"physicalLocation": _physical(fault.place)}],
        }
        for fault in faults
    ]


def rule_fault_notifications(faults: Sequence[RuleFault]) -> list[dict[str, Any]]:
    """Rules that failed themselves."""
    return [
        {
            "level": "error",
            "message": _text(f"rule {fault.rule} failed on {fault.subject}: {fault.error}"),
            "associatedRule": {"id": fault.rule},
        }
        for fault in faults
    ]
