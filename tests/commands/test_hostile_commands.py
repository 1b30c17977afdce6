"""Hostile text stays text in every form of every command, on the error stream, and in any encoding."""

from __future__ import annotations

import contextlib
import io
import json
import os
import re
import subprocess
import sys
import xml.etree.ElementTree as ET
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import pytest

from tests.commands.calling import Done, tidegate
from tests.reports.drawing.pictures import SVG
from tests.reports.hostile import (
    GROUPS,
    HARMLESS,
    REFUSED,
    STRINGS,
    description,
    dot_read,
    json_shape,
    json_texts,
    markdown_read,
    pack,
    xml_read,
)  # fmt: skip
from tidegate.lint.cli import main
from tidegate.lint.reports.drawing.scale import text_width
from tidegate.lint.reports.plain_text import UNSAFE, plain

TOGETHER = " ".join(text[:200] for text in STRINGS.values())
ALLOWED = REFUSED.sub("", TOGETHER)
OWN_COLOUR = re.compile(r"\x1b\[[0-9;]*m")


def json_read(text: str) -> tuple[Any, str]:
    return json_shape(json.loads(text)), "\n".join(json_texts(json.loads(text)))


def lines_read(text: str) -> tuple[Any, str]:
    return None, text


Reader = Callable[[str], tuple[Any, str]]
# Every command and form that shows a description or a pack: how it is called, its reader, and whether the name of the
# subsystem, of an element's note or of a rule's title stands in it.
CALLS: dict[str, tuple[Sequence[str], Reader, bool]] = {
    "margins": (("margins", "chip.yaml", "--pack", "pack.py"), lines_read, True),
    "margins, JSON": (("margins", "chip.yaml", "--as", "json"), json_read, True),
    "place": (("place", "chip.yaml"), lines_read, False),
    "place, JSON": (("place", "chip.yaml", "--as", "json"), json_read, False),
    "ramp": (("ramp", "chip.yaml"), lines_read, True),
    "ramp, JSON": (("ramp", "chip.yaml", "--as", "json"), json_read, True),
    "ladder": (("draw", "chip.yaml", "ladder"), xml_read, True),
    "timeline": (("draw", "chip.yaml", "timeline"), xml_read, True),
    "graph": (("draw", "chip.yaml", "graph", "--pack", "pack.py"), xml_read, True),
    "graph, DOT": (("draw", "chip.yaml", "graph", "--as", "dot"), dot_read, True),
    "graph, GraphML": (("draw", "chip.yaml", "graph", "--as", "graphml"), xml_read, True),
    "trace": (("trace", "chip.yaml", "uv"), lines_read, False),
    "compare": (("compare", "plain.yaml", "chip.yaml", "--pack", "pack.py"), lines_read, True),
    "compare, Markdown": (("compare", "plain.yaml", "chip.yaml", "--as", "markdown"), markdown_read, True),
    "compare, JSON": (("compare", "plain.yaml", "chip.yaml", "--as", "json"), json_read, True),
    "rules": (("rules", "--pack", "pack.py"), lines_read, True),
    "rule": (("rules", "--pack", "pack.py", "hostile/fails"), lines_read, True),
}


def folder_with(folder: Path, text: str) -> Path:
    """A description and a pack that hold a text wherever they can, and another description to compare with."""
    folder.mkdir(exist_ok=True)
    (folder / "chip.yaml").write_text(description(REFUSED.sub("", text)), "utf-8")
    (folder / "plain.yaml").write_text(description("something else"), "utf-8")
    (folder / "pack.py").write_text(pack(text), "utf-8")
    return folder


@pytest.fixture(scope="module")
def folders(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, Path]:
    top = tmp_path_factory.mktemp("chips")
    return folder_with(top / "hostile", TOGETHER), folder_with(top / "harmless", HARMLESS)


def without_spaces(text: str) -> str:
    return "".join(text.split())


def safe(done: Done) -> Done:
    assert set(UNSAFE.findall(OWN_COLOUR.sub("", done.stdout))) <= {"\n"}
    assert set(UNSAFE.findall(done.stderr)) <= {"\n"}
    assert "Traceback" not in done.stderr
    return done


@pytest.mark.parametrize("call", CALLS)
def test_hostile_text_stays_text_in_every_command(call: str, folders: tuple[Path, Path]) -> None:
    arguments, read, holds_text = CALLS[call]
    hostile, harmless = (safe(tidegate(*arguments, cwd=folder)) for folder in folders)
    assert hostile.returncode == harmless.returncode
    assert harmless.stdout
    (shape, said), (plain_shape, plain_said) = read(hostile.stdout), read(harmless.stdout)
    assert shape == plain_shape
    assert (HARMLESS in plain_said) == holds_text
    if holds_text:
        text = TOGETHER if call.startswith("rule") else ALLOWED
        shown = text if read is json_read else plain(text)
        assert without_spaces(shown)[:300] in without_spaces(said.replace("\u200b", ""))


@pytest.mark.parametrize("picture", ["ladder", "timeline", "graph"])
def test_no_text_leaves_its_picture(picture: str, folders: tuple[Path, Path]) -> None:
    root = ET.fromstring(tidegate("draw", "chip.yaml", picture, cwd=folders[0]).stdout)
    heads = [node for node in root.findall(f"{SVG}text") if node.get("class") in ("heading", "about")]
    assert heads
    for node in heads:
        size = 17.0 if node.get("class") == "heading" else 13.0
        assert float(node.get("x", "")) + text_width(node.text or "", size) <= float(root.get("width", ""))


@pytest.mark.parametrize("call", CALLS)
def test_and_at_a_terminal(call: str, folders: tuple[Path, Path]) -> None:
    """A line break of the text's own would be a line more."""
    arguments, _, _ = CALLS[call]
    for columns in (40, 80):
        shown = safe(tidegate(*arguments, cwd=folders[0], columns=columns, colour=True))
        assert OWN_COLOUR.sub("", shown.stdout)


@pytest.mark.parametrize("call", CALLS)
def test_whatever_the_files_are_called(call: str, folders: tuple[Path, Path], tmp_path: Path) -> None:
    for file in ("chip.yaml", "plain.yaml", "pack.py"):
        (tmp_path / f"{NAME}{file}").write_bytes((folders[1] / file).read_bytes())
    arguments, read, _ = CALLS[call]
    told = [f"./{NAME}{word}" if word.endswith((".yaml", ".py")) else word for word in arguments]
    hostile, harmless = safe(tidegate(*told, cwd=tmp_path)), tidegate(*arguments, cwd=folders[1])
    assert hostile.returncode == harmless.returncode, hostile.stderr
    assert read(hostile.stdout)[0] == read(harmless.stdout)[0]


NAME = "\x1b[31m\x9b2J\x7f\u202e<b>\"'&amp;[b][red]`|\\\r\n\u2028\u200b\udcff{0}](x)"


def test_a_starter_takes_no_name_that_a_description_would_not() -> None:
    assert tidegate("start", "--rail", "電圧=1.8V").returncode == 2
    assert tidegate("start", "--rail", f"{'a' * 65}=1.8V").returncode == 2
    assert tidegate("start", "--rail", f"{'a' * 64}=1.8V").returncode == 0


# What is wrong, on the error stream

WRONG: dict[str, Callable[[str], str]] = {
    "an element": lambda text: json.dumps({"rails": {text: {"nominal": "1.8 V"}}}),
    "a section": lambda text: json.dumps({text: {}}),
    "a key": lambda text: json.dumps({"rails": {"avdd": {text: "1.8 V"}}}),
    "a quantity": lambda text: json.dumps({"rails": {"avdd": {"nominal": text}}}),
    "a range": lambda text: json.dumps({"rails": {"avdd": {"nominal": {"min": text, "max": text}}}}),
    "a word": lambda text: json.dumps({"rails": {"avdd": {}}, "domains": {"aon": {"rail": "avdd", "kind": text}}}),
    "a name": lambda text: json.dumps({"rails": {"avdd": {}}, "domains": {"aon": {"rail": text}}}),
    "a name in a list": lambda text: json.dumps({"output_stages": {"a": {"driven_by": [text]}}}),
    "a text in place of a list": lambda text: json.dumps({"waivers": text}),
    "an include": lambda text: json.dumps({"include": [text]}),
    "a kit": lambda text: json.dumps({"rails": {"avdd": {}}, "process": {"kit": text}}),
    "a day": lambda text: json.dumps({"waivers": [{"rule": "a", "element": "b", "until": text}]}),
    "the file": json.dumps,
    "no YAML": lambda text: f"rails: [\n{text}",
    "a tag": lambda text: f"rails: !{text} x",
    "raw": lambda text: text,
}


@pytest.mark.parametrize("where", WRONG)
def test_what_is_wrong_in_a_description_is_told_in_lines_of_ours(where: str, tmp_path: Path) -> None:
    for name, text in GROUPS.items():
        content = WRONG[where](text).encode("utf-8", "surrogatepass")
        (tmp_path / "chip.yaml").write_bytes(content)
        done = safe(tidegate("ramp", "chip.yaml", cwd=tmp_path))
        assert (done.returncode, done.stdout) == (2, ""), name
        lines = done.stderr.splitlines()
        assert all(line.startswith("chip.yaml:") and len(line) < 600 for line in lines), name
        assert 1 <= len(lines) <= 12, name


SETTINGS: dict[str, Callable[[str], Any]] = {
    "a key": lambda text: {text: 1},
    "a level": lambda text: {"levels": {text: text}},
    "a margin": lambda text: {"least_margins": {"hysteresis": text}},
    "a rule": lambda text: {"leave_out": [text]},
    "waivers": lambda text: {"waivers": [text]},
    "a pack": lambda text: {"packs": [text]},
    "an installed pack": lambda text: {"packs_installed": [text]},
    "a condition": lambda text: {"conditions": {"junction_temperature": text}},
}


@pytest.mark.parametrize("where", SETTINGS)
def test_what_is_wrong_in_settings_is_told_in_lines_of_ours(where: str, tmp_path: Path) -> None:
    (tmp_path / "chip.yaml").write_text("rails: {avdd: {nominal: 1.8 V}}\n", "utf-8")
    for name, text in GROUPS.items():
        content = json.dumps(SETTINGS[where](text)).encode("utf-8", "surrogatepass")
        (tmp_path / "tidegate.settings.yaml").write_bytes(content)
        done = safe(tidegate("margins", "chip.yaml", cwd=tmp_path))
        if where != "a margin":  # which is read where it is asked for
            assert (done.returncode, done.stdout) == (2, ""), name
        assert len(done.stderr.splitlines()) <= 4, name


BAD_PACKS: dict[str, str] = {
    "raises": "raise Exception(TEXT)",
    "raises by another name": "raise type(ascii(TEXT) + chr(0x9b), (OSError,), {})",
    "leaves": "import sys; sys.exit(TEXT)",
    "no rules": "RULES = TEXT",
    "syntax": "exec(TEXT)",
    "cannot tell": "class Mute(Exception):\n    def __str__(self): raise Exception(TEXT)\nraise Mute",
}


@pytest.mark.parametrize("how", BAD_PACKS)
def test_what_a_pack_does_while_it_is_loaded_is_told_in_a_line(how: str, tmp_path: Path) -> None:
    (tmp_path / "chip.yaml").write_text("rails: {avdd: {nominal: 1.8 V}}\n", "utf-8")
    for name, text in GROUPS.items():
        head = f"import json\nTEXT = json.loads({json.dumps(text)!r})\n"
        (tmp_path / "pack.py").write_text(head + BAD_PACKS[how], "utf-8")
        done = safe(tidegate("rules", "--pack", "pack.py", cwd=tmp_path))
        assert (done.returncode, done.stdout, len(done.stderr.splitlines())) == (2, "", 1), name
        assert done.stderr.startswith("rule pack pack.py: "), name


def test_a_rule_whose_fault_cannot_be_told_ends_nothing(tmp_path: Path) -> None:
    body = 'class Mute(Exception):\n    def __str__(self): raise Exception("no")\n'
    text = pack("x").replace("Raised = ", f"{body}Raised = Mute\nOther = ")
    (tmp_path / "chip.yaml").write_text("rails: {avdd: {nominal: 1.8 V}}\n", "utf-8")
    (tmp_path / "pack.py").write_text(text, "utf-8")
    done = tidegate("review", "--pack", "pack.py", "--as", "json", "chip.yaml", cwd=tmp_path)
    assert (done.returncode, done.stderr) == (3, "")
    (fault,) = json.loads(done.stdout)["files"][0]["rule_faults"]
    assert fault["error"] == "Mute, which does not say what it is about"


ARGUMENTS: dict[str, Callable[[str], Sequence[str]]] = {
    "a command": lambda text: (text,),
    "an option": lambda text: (f"--{text}",),
    "an option of a command": lambda text: ("review", f"--{text}", "chip.yaml"),
    "a form": lambda text: ("review", f"--as={text}", "chip.yaml"),
    "a file": lambda text: ("review", "--", text),
    "a file to draw": lambda text: ("draw", "--", text, "graph"),
    "files to compare": lambda text: ("compare", "--", text, text),
    "a revision": lambda text: ("compare", "--", f"{text}:chip.yaml", "chip.yaml"),
    "a picture": lambda text: ("draw", "chip.yaml", "--", text),
    "part of a picture": lambda text: ("draw", "chip.yaml", "ladder", f"--of={text}"),
    "a report": lambda text: ("review", f"--save={text}", "chip.yaml"),
    "settings": lambda text: ("review", f"--settings={text}", "chip.yaml"),
    "a pack": lambda text: ("review", f"--pack={text}", "chip.yaml"),
    "workers": lambda text: ("review", f"--workers={text}", "chip.yaml"),
    "a day": lambda text: ("review", f"--today={text}", "chip.yaml"),
    "a level": lambda text: ("review", f"--fail-at={text}", "chip.yaml"),
    "an element": lambda text: ("trace", "chip.yaml", "--", text),
    "an element of margins": lambda text: ("margins", f"--element={text}", "chip.yaml"),
    "a family": lambda text: ("margins", f"--family={text}", "chip.yaml"),
    "a detector": lambda text: ("place", "chip.yaml", "--", text),
    "samples": lambda text: ("place", "chip.yaml", "--yield", f"--samples={text}"),
    "a scenario": lambda text: ("ramp", f"--scenario={text}", "chip.yaml"),
    "an override": lambda text: ("ramp", f"--override={text}", "chip.yaml"),
    "a rule": lambda text: ("rules", "--", text),
    "a rail": lambda text: ("start", f"--rail={text}=1.8V"),
    "a voltage": lambda text: ("start", f"--rail=avdd={text}"),
    "a watch": lambda text: ("start", f"--watch={text}"),
    "a role": lambda text: ("start", f"--watch=avdd={text}"),
    "a schema": lambda text: ("schema", "--", text),
    "a shell": lambda text: ("completion", "--", text),
}


@pytest.mark.parametrize("where", ARGUMENTS)
def test_what_is_wrong_on_the_command_line_is_told_in_lines_of_ours(
    where: str, folders: tuple[Path, Path], tmp_path: Path
) -> None:
    (tmp_path / "chip.yaml").write_bytes((folders[1] / "chip.yaml").read_bytes())
    for name, text in GROUPS.items():
        argument = re.sub("[\0\ud800-\udc7f\udd00-\udfff]", "", text)  # what no argument of a process can hold
        done = safe(tidegate(*ARGUMENTS[where](argument), cwd=tmp_path))
        assert done.returncode == 2, (name, done)
        assert len(done.stderr.splitlines()) <= 2, (name, done.stderr[:500])
    assert [path.name for path in tmp_path.iterdir()] == ["chip.yaml"]


# Encodings

DATA = ("JSON", "ladder", "timeline", "graph", "DOT", "GraphML", "Markdown")


def encoded(arguments: Sequence[str], folder: Path, encoding: str) -> tuple[bytes, bytes]:
    """The bytes of output and errors of streams in an encoding."""
    out, err = (io.TextIOWrapper(io.BytesIO(), encoding=encoding, newline="\n") for _ in range(2))
    with contextlib.chdir(folder), contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        main(arguments)
    out.flush()
    err.flush()
    return out.buffer.getvalue(), err.buffer.getvalue()  # type: ignore[attr-defined]


@pytest.mark.parametrize("encoding", ["ascii", "latin-1", "cp1252", "utf-8"])
@pytest.mark.parametrize("call", CALLS)
def test_a_terminal_of_any_encoding(call: str, encoding: str, folders: tuple[Path, Path]) -> None:
    """Forms for programs are UTF-8 whatever the terminal's encoding is, as RFC 8259 and the XML declaration say."""
    arguments, read, _ = CALLS[call]
    out, err = encoded(arguments, folders[0], encoding)
    err.decode(encoding)
    if call.rpartition(", ")[2] in DATA:
        assert out == encoded(arguments, folders[0], "utf-8")[0]
        read(out.decode("utf-8"))
    else:
        assert out.decode(encoding)


@pytest.mark.parametrize(
    "environment",
    [
        {"PYTHONIOENCODING": "ascii"},
        {"LC_ALL": "C", "PYTHONUTF8": "0", "PYTHONCOERCECLOCALE": "0"},
        {"PYTHONIOENCODING": "latin-1:strict", "PYTHONUTF8": "0"},
    ],
    ids=["ascii", "C", "latin-1"],
)
def test_a_process_of_another_encoding(environment: dict[str, str], folders: tuple[Path, Path]) -> None:
    command = [sys.executable, "-m", "tidegate.lint.cli", "review", "--pack", "pack.py", "chip.yaml", "gøne.yaml"]
    done = subprocess.run(command, cwd=folders[0], capture_output=True, env={**os.environ, **environment}, check=False)
    encoding = "latin-1" if "latin-1" in str(environment) else "ascii"
    assert b"UnicodeEncodeError" not in done.stdout + done.stderr
    assert done.returncode == 3
    assert set(UNSAFE.findall(done.stdout.decode(encoding))) <= {"\n"}
    assert re.fullmatch(rb"g.{1,12}ne\.yaml: cannot be read .*\n", done.stderr)
