"""Every limit is kept: beyond it there is a message and no hang; up to it the tool works.

Limits that a description meets by its text alone are in ``bad_input/beyond_limits.py``; the time of rule packs is in
``test_time_limit.py``.
"""

from __future__ import annotations

import json
import os
import threading
import time
from collections.abc import Iterator
from pathlib import Path

import pytest

from tests.commands.calling import tidegate
from tidegate.lint import limits
from tidegate.lint.description.load import description_schema, load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.description.reading import TooMuchError, read_file
from tidegate.lint.description.yaml_text import read_yaml

RAIL = "rails: {avdd: {nominal: 1.8 V}}\n"


def said(path: Path) -> str:
    with pytest.raises(DescriptionError) as refused:
        load(path, shown=path.name)
    return str(refused.value)


def test_a_file_that_is_too_large_is_not_read(tmp_path: Path) -> None:
    path = tmp_path / "main.yaml"
    with path.open("wb") as file:
        file.truncate(300 * 2**20)  # a hole: it takes no room
    assert said(path) == (
        "main.yaml: too large (found 300.0 MiB, at most 256 MiB are read); split the description into several"
    )


def test_a_file_of_just_the_size_is_read(tmp_path: Path) -> None:
    path = tmp_path / "main.yaml"
    path.write_bytes(b"#" * 1000)
    assert read_file(path, 1000) == b"#" * 1000
    with pytest.raises(TooMuchError, match=r"^.*too large \(found 0.0 MiB"):
        read_file(path, 999)


@pytest.mark.skipif(not Path("/dev/zero").exists(), reason="there is no /dev/zero on this system")
def test_a_device_without_end_is_left_off() -> None:
    with pytest.raises(TooMuchError) as refused:
        read_file(Path("/dev/zero"), 2**20)
    assert refused.value.problem == "too large (found more, at most 1 MiB are read)"


def test_the_files_of_a_description_are_counted_together(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("tidegate.lint.description.sources.MOST_BYTES", 2**20)
    (tmp_path / "main.yaml").write_text("include: [a.yaml, b.yaml]\n" + RAIL, "utf-8")
    for name in ("a.yaml", "b.yaml"):
        (tmp_path / name).write_bytes(b"#" * (2**20 - 100))
    assert said(tmp_path / "main.yaml") == (
        "b.yaml: the files of the description are more than 1 MiB together; split the description into several"
    )


@pytest.fixture
def pipe(tmp_path: Path) -> Path:
    """A named pipe."""
    if not hasattr(os, "mkfifo"):
        pytest.skip("there are no named pipes on this system")
    path = tmp_path / "pipe.yaml"
    os.mkfifo(path)
    return path


def test_a_pipe_to_which_nobody_writes_is_not_waited_for_without_end(
    pipe: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("tidegate.lint.description.reading.MOST_WAIT_S", 0.05)
    assert said(pipe) == (
        "pipe.yaml: nothing came through the pipe for 0.05 s; let something write to it, or name a file"
    )


def test_a_pipe_is_read_to_its_end_whoever_comes_first(pipe: Path) -> None:
    writer = threading.Timer(0.1, lambda: pipe.write_text(RAIL, "utf-8"))
    writer.start()
    assert list(load(pipe).description.rails) == ["avdd"]
    writer.join()


def test_settings_and_waivers_have_the_same_bounds(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    if not hasattr(os, "mkfifo"):
        pytest.skip("there are no named pipes on this system")
    monkeypatch.setattr("tidegate.lint.description.reading.MOST_WAIT_S", 0.05)
    (tmp_path / "main.yaml").write_text(RAIL, "utf-8")
    os.mkfifo(tmp_path / "pipe.yaml")
    done = tidegate("review", "--settings", "pipe.yaml", "main.yaml", cwd=tmp_path)
    assert (done.returncode, done.stderr) == (
        2, "pipe.yaml: nothing came through the pipe for 0.05 s; let something write to it, or name a file\n"
    )  # fmt: skip
    with (tmp_path / "large.yaml").open("wb") as file:
        file.truncate(300 * 2**20)
    (tmp_path / "tidegate.settings.yaml").write_text("waivers: [large.yaml]\n", "utf-8")
    done = tidegate("review", "main.yaml", cwd=tmp_path)
    assert (done.returncode, done.stderr) == (
        2, "large.yaml: too large (found 300.0 MiB, at most 256 MiB are read); split the description into several\n"
    )  # fmt: skip


def test_aliases_of_a_longer_file_may_multiply_it_so_many_times() -> None:
    block = ", ".join(["lorem ipsum dolor"] * 5000)  # of 95 000 characters
    for times, fits in ((limits.MOST_GROWTH - 2, True), (limits.MOST_GROWTH + 1, False)):
        text = f"x-a: &a [{block}]\nx-b: [{', '.join(['*a'] * times)}]\n"
        if fits:
            assert read_yaml("f.yaml", text.encode()).faults == ()
            continue
        with pytest.raises(DescriptionError, match=r"aliases \(\*\) make [0-9]+ characters stand for more than [0-9]+"):
            read_yaml("f.yaml", text.encode())


@pytest.mark.parametrize("kind", ["unknown keys", "unknown names", "keys given twice", "wrong quantities"])
def test_faults_beyond_number_are_told_as_such(kind: str, tmp_path: Path) -> None:
    number = limits.MOST_FAULTS + 50
    head = RAIL + "output_stages:\n"
    lines = {
        "unknown keys": lambda n: f"  s{n}: {{colour: red}}\n",
        "unknown names": lambda n: f"  s{n}: {{driven_by: [uw{n}]}}\n",
        "keys given twice": lambda n: "  s: {}\n",
        "wrong quantities": lambda n: f"  s{n}: {{delay: {{min: 5 V}}}}\n",
    }
    path = tmp_path / "main.yaml"
    path.write_text(head + "".join(map(lines[kind], range(number))), "utf-8")
    with pytest.raises(DescriptionError) as refused:
        load(path, shown="main.yaml")
    faults = refused.value.faults
    assert len(faults) == limits.MOST_FAULTS + 1
    assert str(faults[-1]) == "main.yaml: more than 1000 faults; mend those above first"
    assert [fault.place.line for fault in faults[:3]] == ([4, 5, 6] if kind == "keys given twice" else [3, 4, 5])


@pytest.mark.parametrize("form", ["indented", "JSON"])
def test_what_cannot_be_parsed_is_told_soon_in_a_long_text_too(form: str) -> None:
    lines = 20_000
    stages = {
        "indented": "".join(f"  s{n}: {{driven_by: [uv], domain: aon, note: lorem ipsum}}\n" for n in range(lines))
    }
    stages["JSON"] = "".join(f'"s{n}": {{"driven_by": ["uv"], "domain": "aon", "note": ""}},\n' for n in range(lines))
    head, end = {"indented": ("output_stages:\n", "  x: {driven_by: [uv\n"), "JSON": ('{"output_stages": {\n', "]")}[
        form
    ]
    began = time.process_time()
    with pytest.raises(DescriptionError) as refused:
        read_yaml("main.yaml", (head + stages[form] + end).encode())
    (fault,) = refused.value.faults
    assert fault.place.line == lines + (3 if form == "indented" else 2)
    assert "is missing here" in fault.problem or "without its end" in fault.problem
    assert time.process_time() - began < 10.0  # the slow parser alone takes longer


def chain(length: int, *, ring: bool) -> str:
    """A detector, and output stages of which each drives the next; in a ring, the last drives the first as well."""
    first = f"s{length - 1}" if ring else "uv"
    drivers: Iterator[str] = (first if n == 0 else f"s{n - 1}" for n in range(length))
    stages = "".join(f"  s{n}: {{driven_by: [{driver}], domain: aon}}\n" for n, driver in enumerate(drivers))
    return (
        f"{RAIL}domains: {{aon: {{rail: avdd, kind: always_on}}}}\n"
        "comparators: {uv: {role: under_voltage, watches: avdd, domain: aon}}\n"
        f"output_stages:\n{stages}resets: {{por_n: {{driven_by: [s{length - 1}], active: low}}}}\n"
    )


@pytest.mark.parametrize(("length", "ring"), [(limits.MOST_IN_A_ROW - 4, False), (limits.MOST_IN_A_ROW // 4, True)])
@pytest.mark.parametrize("command", [("review", "--as", "json"), ("trace",), ("ramp", "--as", "json")])
def test_long_rows_are_followed_without_recursion(
    command: tuple[str, ...], length: int, ring: bool, tmp_path: Path
) -> None:
    (tmp_path / "main.yaml").write_text(chain(length, ring=ring), "utf-8")
    element = ("s7",) if command == ("trace",) else ()
    done = tidegate(*command, "main.yaml", *element, cwd=tmp_path)
    assert done.stderr == ""
    assert done.returncode == (1 if command[0] == "review" and ring else 0)  # a ring waits for itself
    if command[0] == "review":
        assert json.loads(done.stdout)["files"][0].get("rule_faults", []) == []


def test_the_limit_of_names_is_that_of_the_schema() -> None:
    name = description_schema()["$defs"]["id"]
    assert name["pattern"].endswith(f"{{0,{limits.MOST_NAME - 1}}}$")
    assert f"{limits.MOST_NAME} characters at the most" in name["description"]


def test_every_limit_is_told_to_users() -> None:
    told = " ".join(most for _, most in limits.LIMITS)
    numbers = {
        "MOST_BYTES": "256 MiB", "MOST_WAIT_S": "30 s", "MOST_DEPTH": "32 levels",
        "MOST_EXPANDED": "1000000 characters", "MOST_GROWTH": "16 times", "MOST_FILES": "1000", "MOST_INCLUDED": "16",
        "MOST_TEXT": "10000 characters", "MOST_NAME": "64 characters", "MOST_QUANTITY": "64 characters",
        "LARGEST_NUMBER": "1e+300", "MOST_IN_A_ROW": "1000", "MOST_WATCHING": "100", "MOST_FAULTS": "1000",
        "MOST_PACK_BYTES": "1 MiB", "MOST_PACK_S": "5 s",
    }  # fmt: skip
    assert {name for name in vars(limits) if name.isupper()} - {"LIMITS"} == set(numbers)
    assert all(number in told for number in numbers.values())
