"""What bad input is to the tests: files, a call of the command line, and all that is said about it.

To add a case, write ``Bad(what, files, said)`` into the file of its kind.  The demo data are invented.
"""

from __future__ import annotations

import json
import os
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Final, NamedTuple, TypeAlias

from tests.commands.calling import Done


class Link(NamedTuple):
    """A symbolic link."""

    to: str


FOLDER: Final = None
"""A folder without files."""

Content: TypeAlias = str | bytes | Link | None


class Bad(NamedTuple):
    """Bad input: what is bad about it, the file ``main.yaml`` or all files, what is said, the call, its exit status."""

    what: str
    files: str | bytes | Mapping[str, Content]
    said: str
    call: str = "review main.yaml"
    status: int = 2


RAIL: Final = "rails:\n  avdd:\n    nominal: 1.8 V\n"
"""A rail; more of it may follow."""
UV: Final = RAIL + "comparators:\n  uv: {role: under_voltage, watches: avdd, "
"""A detector; more of it must follow, and a brace."""
CHIP: Final = """\
subsystem: tide gauge
rails: {avdd: {nominal: 1.8 V}}
domains: {aon: {rail: avdd, kind: always_on}}
comparators: {uv: {role: under_voltage, watches: avdd, domain: aon, delay: {max: 2 us}}}
bypasses: {skip: {overrides: uv, default: inactive, readable: false}}
"""
"""A description without a fault of form; more sections may follow."""


def lay(bad: Bad, folder: Path) -> None:
    """Write the files of a case, and a file of process data beside them."""
    files = bad.files if isinstance(bad.files, Mapping) else {"main.yaml": bad.files}
    for name, content in {"process.yaml": "process: {}\n", **files}.items():
        path = folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        if content is FOLDER:
            path.mkdir()
        elif isinstance(content, Link):
            path.symlink_to(content.to)
        else:
            path.write_bytes(content.encode() if isinstance(content, str) else content)


def told(done: Done, folder: Path) -> str:
    """All that a call says about bad input: its error stream, and what its report says of files, rules and waivers."""
    lines = [*done.stderr.splitlines(), *_reported(done.stdout)]
    return "\n".join(lines).replace(str(folder) + os.sep, "FOLDER/")


def _reported(report: str) -> Iterator[str]:
    if not report.startswith("{"):
        return
    for file in json.loads(report)["files"]:
        for fault in file.get("faults", ()):
            place = fault["place"]
            where = f"{place['file']}:{place['line']}:{place['column']}" if place.get("line") else place["file"]
            path = f"{fault['path']}: " if fault.get("path") else ""
            yield f"{where}: {path}{fault['problem']}; {fault['advice']}"
        for fault in file.get("rule_faults", ()):
            yield f"{fault['rule']} on {fault['subject']}: {fault['error']}"
        for said in file.get("judgements", ()):
            if said["rule"] == "waiver/still_right" and said["kind"] == "fail":
                place = said["place"]
                yield f"{place['file']}:{place['line']}:{place['column']}: {said['message']}; {said['mend']}"
