"""What the command line must keep on a file: no crash in any form, readable forms, and an honest exit status."""

from __future__ import annotations

import json
import random
import re
import shutil
import xml.etree.ElementTree as ET
from collections.abc import Callable, Iterator
from functools import cache
from pathlib import Path
from typing import Any, Final

import jsonschema_rs

from tests.commands.calling import Done, tidegate
from tests.fuzz.check_loading import loaded
from tests.fuzz.grammar import ROOT
from tests.fuzz.trouble import Trouble, no_constant, no_number, watched
from tidegate.lint.description.load import Loaded, load
from tidegate.lint.engine import Review

_WEIGHT: Final = {"note": 0, "warning": 1, "error": 2}


@cache
def _schema(name: str) -> Any:
    text = (ROOT / "schema" / f"{name}.schema.json").read_text("utf-8")
    return jsonschema_rs.validator_for(json.loads(text))


class Call:
    """A file in its folder, and what is known of it: a review, or None where it cannot be used."""

    def __init__(self, choose: random.Random, file: Path, result: Review | None, found: list[Trouble]) -> None:
        self.choose = choose
        self.file = file
        self.result = result
        self.found = found
        self.given = file.read_bytes().decode("utf-8", "replace")

    def trouble(self, sort: str, where: str, story: str) -> None:
        self.found.append(Trouble(sort, where, story))

    def run(self, *arguments: str, statuses: tuple[int, ...]) -> Done | None:
        """Call the command line; the exit status must be one of these, 2 with a reason, and a file without use is 2."""
        where = " ".join(re.sub(r"=.*", "", word) for word in arguments if not word.endswith(".yaml"))
        where = where.partition(" -- ")[0]
        done: Done | None = None
        with watched(where, self.found):
            done = tidegate(*arguments, cwd=self.file.parent, columns=self.choose.choice((80, 80, 40, 200)))
        if done is None:
            return None
        expected = (2,) if self.result is None else statuses
        if self.result is not None and self.result.faults:
            expected = (*expected, 3)
        if done.returncode not in expected:
            story = f"{done.returncode}, not one of {expected}\n{done.stderr[:600]}"
            self.trouble("exit status", where, story)
        if done.returncode == 2 and not done.stderr.strip() and self.result is not None:
            self.trouble("no reason", where, "exit status 2 without a word")
        for text in (done.stdout, done.stderr):
            shown = no_number(re.sub(r"<(?:style|script)\b.*?</(?:style|script)>", "", text, flags=re.S), self.given)
            if shown and self.result is not None:
                self.trouble("no number", where, f"shown\n{shown}")
            if "Traceback" in text:
                self.trouble("traceback", where, f"shown\n{text[-1500:]}")
        return done


def check_commands(call: Call, *, most: int) -> None:
    """Some of the commands, chosen at random."""
    names = list(_CHECKS)
    call.choose.shuffle(names)
    for name in names[:most]:
        _CHECKS[name](call)


def _review(call: Call) -> None:
    """The exit status is what the README says of the judgements that the JSON report holds."""
    fail_at = call.choose.choice(("error", "warning", "note"))
    also = [word for word in ("open", "review") if call.choose.random() < 0.3]
    options = [part for word in also for part in ("--also", word)]
    done = call.run("review", "--as", "json", "--fail-at", fail_at, *options, call.file.name, statuses=(0, 1))
    if done is None:
        return
    report = json.loads(done.stdout, parse_constant=no_constant)
    errors = [str(error) for error in _schema("report").iter_errors(report)]
    if errors:
        call.trouble("schema", "review --as json", f"{errors[0][:80]}\n{errors}")
    if call.result is None:
        if report["files"][0]["verdict"] != "UNUSABLE":
            call.trouble("verdict", "review --as json", "a file without use is judged")
        return
    entry = report["files"][0]
    if entry["settings"]["fail_at"] != fail_at or (also and set(entry["settings"]["also"]) != set(also)):
        call.trouble("settings", "review --as json", "the options did not win")
    also = entry["settings"]["also"]
    counts: dict[str, int] = {}
    findings = False
    for judgement in entry["judgements"]:
        counts[judgement["kind"]] = counts.get(judgement["kind"], 0) + 1
        fails = judgement["kind"] == "fail" and _WEIGHT[judgement["level"]] >= _WEIGHT[fail_at]
        findings |= judgement["waiver"] is None and (fails or judgement["kind"] in also)
        _check_numbers(call, judgement)
    if {kind: number for kind, number in entry["counts"].items() if number} != counts:
        call.trouble("counts", "review --as json", f"differ\n{entry['counts']} {counts}")
    expected = 3 if entry["rule_faults"] else int(findings)
    if done.returncode != expected:
        call.trouble("exit status", "review --as json", f"{done.returncode}, not {expected}\n{fail_at} {also}")


def _check_numbers(call: Call, judgement: dict[str, Any]) -> None:
    need, have, margin = (judgement[key] and judgement[key]["value"] for key in ("need", "have", "margin"))
    if None in (need, have, margin):
        return
    expected = have - need if judgement["relation"] == "at least" else need - have
    if abs(margin - expected) > 1e-8 * max(abs(need), abs(have)):
        call.trouble("margin", judgement["rule"], f"is not need against have\n{judgement}")
    if (judgement["kind"] == "pass") != (margin >= 0) and judgement["kind"] in ("pass", "fail"):
        call.trouble("margin", judgement["rule"], f"says {judgement['kind']}\n{judgement}")


def _forms(call: Call) -> None:
    form = call.choose.choice(("terminal", "markdown", "html", "sarif"))
    more = call.choose.choice((["--every"], ["--findings-only"], []))
    done = call.run("review", "--as", form, *more, call.file.name, statuses=(0, 1))
    if done is not None and form == "sarif":
        log = json.loads(done.stdout, parse_constant=no_constant)
        if log["runs"][0]["invocations"][0]["exitCode"] != done.returncode:
            call.trouble("exit status", "review --as sarif", "differs from that in the log")


def _margins(call: Call) -> None:
    call.run("margins", call.file.name, statuses=(0, 1))
    _json(call, call.run("margins", "--as", "json", call.file.name, statuses=(0, 1)), "margins --as json")


def _json(call: Call, done: Done | None, where: str) -> Any:
    if done is None or done.returncode == 2:
        return None
    try:
        return json.loads(done.stdout, parse_constant=no_constant)
    except ValueError as error:
        call.trouble("no JSON", where, f"{error}\n{done.stdout[:500]}")
        return None


def _place(call: Call) -> None:
    call.run("place", call.file.name, statuses=(0, 1, 2))
    placed = _json(call, call.run("place", "--as", "json", call.file.name, statuses=(0, 1, 2)), "place --as json")
    for detector in placed["detectors"] if placed is not None else ():
        _check_placement(call, detector)
    if call.choose.random() < 0.3:
        call.run("place", "--yield", "--samples", "300", call.file.name, statuses=(0, 1, 2))
    if call.result is not None and call.result.loaded.description.comparators:
        name = call.choose.choice(list(call.result.loaded.description.comparators))
        form = call.choose.choice(("json", "terminal"))
        call.run("place", "--as", form, call.file.name, "--", name, statuses=(0, 1, 2))


def _check_placement(call: Call, detector: dict[str, Any]) -> None:
    """A detector stands inside its interval if and only if it keeps every limit."""
    if detector["stands"] is None or "margins" not in detector:
        return
    end = "surely" if detector["stands"] else "at_best"
    found = [each[end]["value"] for each in detector["margins"].values()]
    margins = [value for value in found if value is not None]
    least, most, now = (detector["falling"][key] for key in ("least", "most", "now"))
    scale = 1e-6 * max(1.0, abs(now["value"]))
    if margins and detector["stands"] != (min(margins) >= 0.0) and abs(min(margins)) > scale:
        call.trouble("placement", "place --as json", f"stands {detector['stands']} against its margins\n{detector}")
    if None not in (least["value"], most["value"]) and least["value"] <= most["value"]:
        inside = least["value"] - scale <= now["value"] <= most["value"] + scale
        if detector["stands"] and not inside:
            call.trouble("placement", "place --as json", f"stands outside its interval\n{detector}")


def _apply(call: Call) -> None:
    """Values are rewritten in place: what was written is there when it is read again, and nothing else changed."""
    folder = call.file.parent / "applied"
    folder.mkdir(exist_ok=True)
    for each in call.file.parent.glob("*.yaml"):
        shutil.copy(each, folder)
    copy = Call(call.choose, folder / call.file.name, call.result, call.found)
    detectors = [] if call.result is None else list(call.result.loaded.description.comparators)
    named = ["--", call.choose.choice(detectors)] if detectors and call.choose.random() < 0.5 else []
    form = call.choose.choice(("terminal", "json"))
    done = copy.run("place", "--apply", "--as", form, copy.file.name, *named, statuses=(0, 1, 2))
    if done is None or call.result is None:
        return
    answer = _json(call, done, "place --apply --as json") if form == "json" else None
    if named and answer is not None and answer["written"] and answer["detectors"][0]["stands"] is not True:
        call.trouble("placement", "place --apply", f"does not stand where it was put\n{done.stdout}")
    wrote = dict(re.findall(r"wrote (\S+): (.+)", done.stdout))
    with watched("load after place --apply", call.found):
        new = load(copy.file, shown=copy.file.name).sources.data
        old = call.result.loaded.sources.data
        for path, text in wrote.items() if form == "terminal" else ():
            _put(old, new, path, text, call)
        if old != new and form == "terminal":
            call.trouble("rewriting", "place --apply", f"changed more than it says\n{wrote}")
    shutil.rmtree(folder)


def _put(old: Any, new: Any, path: str, text: str, call: Call) -> None:
    *above, last = path.split(".")
    for step in above:
        old, new = old.setdefault(step, {}), new[step]
    if new[last] != text:
        call.trouble("rewriting", "place --apply", f"not what was written\n{path}: {text}, read {new[last]}")
    old[last] = text


def _ramp(call: Call) -> None:
    call.run("ramp", call.file.name, statuses=(0, 2))
    ramps = _json(call, call.run("ramp", "--as", "json", call.file.name, statuses=(0, 2)), "ramp --as json")
    for spans in _spans_in(ramps):
        _check_spans(call, spans)
    if call.result is not None and call.result.loaded.description.bypasses:
        name = call.choose.choice(list(call.result.loaded.description.bypasses))
        call.run("ramp", f"--override={name}", call.file.name, statuses=(0, 2))
    if call.result is not None and call.result.loaded.description.scenarios:
        name = call.choose.choice(list(call.result.loaded.description.scenarios))
        call.run("ramp", f"--scenario={name}", call.file.name, statuses=(0, 2))


def _spans_in(node: Any) -> Iterator[list[dict[str, Any]]]:
    """Every list of spans of time, wherever it stands."""
    if isinstance(node, list):
        if node and isinstance(node[0], dict) and "from_s" in node[0]:
            yield node
        else:
            for each in node:
                yield from _spans_in(each)
    elif isinstance(node, dict):
        for each in node.values():
            yield from _spans_in(each)


def _check_spans(call: Call, spans: list[dict[str, Any]]) -> None:
    """Spans of time do not end before they begin, and follow one another; only the outer ends are open."""
    ends = [end for span in spans for end in (span["from_s"], span["to_s"])]
    inner = [end for number, end in enumerate(ends) if end is not None or 0 < number < len(ends) - 1]
    if None in inner or inner != sorted(inner):
        call.trouble("spans", "ramp --as json", f"out of order\n{spans}")


def _trace(call: Call) -> None:
    names = ["anybody"] if call.result is None else list(call.result.graph.elements)
    if names:
        call.run("trace", call.file.name, "--", call.choose.choice(names), statuses=(0,))


def _draw(call: Call) -> None:
    picture = call.choose.choice(("ladder", "timeline", "graph"))
    done = call.run("draw", call.file.name, picture, statuses=(0, 2))
    texts = [done.stdout] if done is not None and done.returncode == 0 else []
    form = call.choose.choice(("dot", "graphml"))
    done = call.run("draw", call.file.name, "graph", "--as", form, statuses=(0, 2))
    if done is not None and done.returncode == 0 and form == "graphml":
        texts.append(done.stdout)
    for text in texts:
        with watched(f"XML of draw {picture}", call.found):
            ET.fromstring(text)


def _compare(call: Call) -> None:
    """With itself nothing changed; with another file, what got worse one way got better the other way."""
    done = call.run("compare", "--as", "json", call.file.name, call.file.name, statuses=(0,))
    same = _json(call, done, "compare --as json")
    if same is not None and (same["judgements"] or same["facts"]):
        call.trouble("compare", "compare", "a file differs from itself")
    base = call.file.parent / "base.yaml"
    if call.result is None or not base.is_file() or not isinstance(loaded(base, call.found), Loaded):
        return
    there = _json(call, call.run("compare", "--as", "json", "base.yaml", call.file.name, statuses=(0, 1)), "compare")
    back = _json(call, call.run("compare", "--as", "json", call.file.name, "base.yaml", statuses=(0, 1)), "compare")
    form = call.choose.choice(("terminal", "markdown"))
    call.run("compare", "--as", form, "base.yaml", call.file.name, statuses=(0, 1))
    if there is None or back is None:
        return
    errors = [str(error) for error in _schema("comparison").iter_errors(there)]
    if errors:
        call.trouble("schema", "compare --as json", f"{errors[0][:80]}\n{errors}")
    mirror = {
        "worse": {"better", "larger margins"}, "better": {"worse"}, "smaller margins": {"larger margins"},
        "larger margins": {"smaller margins", "worse"}, "changed": {"changed"},
    }  # fmt: skip
    one = {(each["rule"], each["subject"]): each["harm"] for each in there["judgements"]}
    two = {(each["rule"], each["subject"]): each["harm"] for each in back["judgements"]}
    if one.keys() != two.keys():
        call.trouble("compare", "compare", f"other changes back than there\n{one.keys() ^ two.keys()}")
    elif any(two[key] not in mirror[harm] for key, harm in one.items()):
        odd = {key: (harm, two[key]) for key, harm in one.items() if two[key] not in mirror[harm]}
        call.trouble("compare", "compare", f"not the other way round\n{odd}")


_CHECKS: Final[dict[str, Callable[[Call], None]]] = {
    "review": _review, "forms": _forms, "margins": _margins, "place": _place, "apply": _apply, "ramp": _ramp,
    "trace": _trace, "draw": _draw, "compare": _compare,
}  # fmt: skip
