"""A description in several files: what may be included, how the files are joined, what cannot be read."""

from __future__ import annotations

import os
from pathlib import Path

import pytest

from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.description.sources import read_sources

RAILS = "rails: {avdd: {nominal: 1.8 V}}\n"


def written(folder: Path, files: dict[str, str]) -> Path:
    """The folder with these files in it."""
    for name, text in files.items():
        path = folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, "utf-8")
    return folder


def said(folder: Path, name: str = "main.yaml") -> str:
    with pytest.raises(DescriptionError) as caught:
        load(folder / name, shown=name)
    return str(caught.value)


def test_sections_are_joined_entry_by_entry(tmp_path: Path) -> None:
    written(
        tmp_path,
        {
            "main.yaml": "include: [sub/process.yaml, sub/more.yaml]\n" + RAILS + "x-mine: {a: 1}\n",
            "sub/process.yaml": "include: [layers.yaml]\nprocess: {layers: {metal1: {thickness: 1 um}}}\n",
            "sub/layers.yaml": "process: {source: invented, layers: {metal2: {thickness: 2 um}}}\nx-mine: {b: 2}\n",
            "sub/more.yaml": (
                "include: [../sub/process.yaml]\nrails: {bvdd: {nominal: 1 V}}\nconditions: {service_life: 10 yr}\n"
            ),
        },
    )
    loaded = load(tmp_path / "main.yaml", shown="main.yaml")
    names = ["main.yaml", "sub/process.yaml", "sub/layers.yaml", "sub/more.yaml"]
    assert [file.name for file in loaded.sources.files] == names
    assert list(loaded.description.rails) == ["avdd", "bvdd"]
    process = loaded.description.process
    assert process is not None
    assert list(process.layers) == ["metal1", "metal2"]
    assert process.source == "invented"
    assert loaded.sources.data["x-mine"] == {"a": 1, "b": 2}
    assert loaded.description.include == ("sub/process.yaml", "sub/more.yaml")
    assert str(loaded.place("process.layers.metal2.thickness")) == "sub/layers.yaml:1:58"


def test_joining_changes_no_file(tmp_path: Path) -> None:
    written(
        tmp_path,
        {
            "main.yaml": RAILS + "include: [b.yaml]\nprocess: {layers: {m1: {thickness: 1 um}}}\n",
            "b.yaml": "process: {layers: {m2: {thickness: 1 um}}}\nrails: {bvdd: }\n",
        },
    )
    sources = read_sources(tmp_path / "main.yaml", "main.yaml")
    assert sources.files[0].data["process"] == {"layers": {"m1": {"thickness": "1 um"}}}
    assert sources.files[0].data["rails"] == {"avdd": {"nominal": "1.8 V"}}


def test_an_entry_stands_in_one_file_only(tmp_path: Path) -> None:
    written(
        tmp_path,
        {
            "main.yaml": "subsystem: a\ninclude: [b.yaml]\n" + RAILS + "process: {vias: {v1: {resistance: 1 ohm}}}\n",
            "b.yaml": (
                "subsystem: b\nrails:\n  avdd: {nominal: 1 V}\nprocess:\n  vias:\n    v1: {resistance: 2 ohm}\n"
                "conditions: none\nwaivers: {}\n"
            ),
        },
    )
    assert said(tmp_path) == (
        "b.yaml:1:1: subsystem: given twice (first at main.yaml:1:1); keep one of them\n"
        "b.yaml:3:3: rails.avdd: given twice (first at main.yaml:3:9); keep one of them\n"
        "b.yaml:6:5: process.vias.v1: given twice (first at main.yaml:4:18); keep one of them\n"
        "b.yaml:7:13: conditions: none cannot be said here; leave the key empty where it is not known yet; "
        "it can be said of loads, modes, bypasses, neighbours\n"
        "b.yaml:8:10: waivers: a list is due (found an empty mapping); write it as in [{rule: bypass/readable, ...}]"
    )


def test_the_faults_of_all_files_come_together(tmp_path: Path) -> None:
    written(
        tmp_path,
        {
            "main.yaml": "include: [c.yaml, b.yaml]\n" + RAILS + "domains: {aon: {rail: bvd}}\n",
            "b.yaml": "rails: {bvdd: {nominal: 1}}\n",
            "c.yaml": "loads: {core: {needs: [{rail: avdd, work: 1 V}]}}\n",
        },
    )
    assert said(tmp_path) == (
        "b.yaml:1:25: rails.bvdd.nominal: 1 has no unit; write its unit, such as 1 V\n"
        "c.yaml:1:37: loads.core.needs[0]: unknown key 'work'; did you mean works?\n"
        "main.yaml:3:23: domains.aon.rail: no rail is called 'bvd'; did you mean bvdd?"
    )


def test_a_file_that_cannot_be_read_at_all_hides_the_faults_that_follow_from_it(tmp_path: Path) -> None:
    written(tmp_path, {"main.yaml": "include: [b.yaml]\ndomains: {aon: {rail: avdd, kind: on}}\n", "b.yaml": "a: [\n"})
    assert said(tmp_path) == (
        "b.yaml:2:1: a { or [ without its end; close it\n"
        "main.yaml:2:35: domains.aon.kind: on is read as true or false by some and as a word by others; "
        'write true or false, or put it in quotes: "on"'
    )


def test_no_include_leaves_the_folder(tmp_path: Path) -> None:
    outside = tmp_path / "outside.yaml"
    outside.write_text(RAILS, "utf-8")
    folder = written(tmp_path / "in", {"main.yaml": "", "sub/down.yaml": "include: [../../outside.yaml]\n"})
    (folder / "link.yaml").symlink_to(outside)
    (folder / "linked").symlink_to(tmp_path)
    (folder / "main.yaml").write_text(
        f"include: [../outside.yaml, {outside}, link.yaml, linked/outside.yaml, sub/../../outside.yaml, sub/down.yaml,"
        f" ../in/sub/down.yaml]\n",
        "utf-8",
    )
    lines = said(folder).splitlines()
    shown = ["../outside.yaml", str(outside), "link.yaml", "linked/outside.yaml", "sub/../../outside.yaml"]
    assert [line.partition(": ")[2] for line in lines] == [
        *(
            f"include[{index}]: leaves the folder of the description (found {name!r}); "
            "name a file below the folder of main.yaml"
            for index, name in enumerate(name if len(name) <= 60 else name[:60] + "..." for name in shown)
        ),
        "include[0]: leaves the folder of the description (found '../../outside.yaml'); "
        "name a file below the folder of main.yaml",
    ]


def test_a_link_inside_the_folder_is_followed_and_read_once(tmp_path: Path) -> None:
    written(tmp_path, {"main.yaml": "include: [rails.yaml, link.yaml, sub/../rails.yaml]\n", "rails.yaml": RAILS})
    (tmp_path / "sub").mkdir()
    (tmp_path / "link.yaml").symlink_to("rails.yaml")
    assert [file.name for file in load(tmp_path / "main.yaml", shown="m").sources.files] == ["m", "rails.yaml"]


def test_includes_that_go_round_are_refused(tmp_path: Path) -> None:
    written(tmp_path, {"main.yaml": "include: [b.yaml]\n" + RAILS, "b.yaml": "include: [main.yaml, b.yaml]\n"})
    assert said(tmp_path) == (
        "b.yaml:1:11: include[0]: a file that includes itself (found 'main.yaml'); remove one of the includes\n"
        "b.yaml:1:22: include[1]: a file that includes itself (found 'b.yaml'); remove one of the includes"
    )


def test_a_chain_of_includes_is_bounded(tmp_path: Path) -> None:
    chain = {f"f{n}.yaml": f"include: [f{n + 1}.yaml]\n" for n in range(400)}
    written(tmp_path, {**chain, "f400.yaml": RAILS})
    assert said(tmp_path, "f0.yaml") == (
        "f16.yaml:1:11: include[0]: a chain of more than 16 includes (found 'f17.yaml'); include the files side by side"
    )
    assert len(load(tmp_path / "f384.yaml").sources.files) == 17


def test_the_number_of_files_is_bounded(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("tidegate.lint.description.sources.MOST_FILES", 3)
    parts = {f"f{n}.yaml": "" for n in range(3)}
    written(tmp_path, {"main.yaml": f"include: [{', '.join(parts)}]\n" + RAILS, **parts})
    assert said(tmp_path) == ("main.yaml:1:29: include[2]: more than 3 files (found 'f2.yaml'); join some of them")


def test_what_is_no_file_is_named_as_such(tmp_path: Path) -> None:
    written(tmp_path, {"main.yaml": "include: [sub, gone.yaml, loop, 'a/b']\n" + RAILS, "sub/x.yaml": ""})
    (tmp_path / "gone.yaml").symlink_to("nowhere")
    (tmp_path / "loop").symlink_to("loop")
    assert said(tmp_path).splitlines()[:2] == [
        "main.yaml:1:11: include[0]: a folder (found 'sub'); name the files in it",
        "main.yaml:1:16: include[1]: no such file (found 'gone.yaml'); name a description in YAML or JSON",
    ]
    assert len(said(tmp_path).splitlines()) == 4


@pytest.mark.parametrize(
    ("name", "message"),
    [
        (
            "supervisr.yaml",
            "supervisr.yaml: cannot be read (No such file or directory); did you mean 'supervisor.yaml'?",
        ),
        ("other.yaml", "other.yaml: cannot be read (No such file or directory); name a description in YAML or JSON"),
        ("sub", "sub: cannot be read (Is a directory); name a description in YAML or JSON"),
        (
            "supervisor.yaml/x",
            "supervisor.yaml/x: cannot be read (Not a directory); name a description in YAML or JSON",
        ),
        ("n" * 300, f"{'n' * 300}: cannot be read (File name too long); name a description in YAML or JSON"),
        ("a\0b", "a\\x00b: cannot be read (no usable file name); name a description in YAML or JSON"),
        ("\udcff", "\\udcff: cannot be read (No such file or directory); name a description in YAML or JSON"),
    ],
    ids=["near", "far", "folder", "below a file", "long", "null", "surrogate"],
)
def test_a_file_that_cannot_be_opened_is_a_fault(name: str, message: str, tmp_path: Path) -> None:
    written(tmp_path, {"supervisor.yaml": RAILS, "sub/x.yaml": ""})
    assert said(tmp_path, name) == message


def test_a_file_that_may_not_be_read_is_a_fault(tmp_path: Path) -> None:
    def refuse(path: Path) -> bytes:
        raise PermissionError(13, os.strerror(13), str(path))

    with pytest.raises(DescriptionError) as caught:
        read_sources(tmp_path / "main.yaml", "main.yaml", refuse)
    assert str(caught.value) == ("main.yaml: cannot be read (Permission denied); name a description in YAML or JSON")


def test_the_path_itself_is_shown_where_no_other_name_is_given(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(
        written(tmp_path, {"sub/main.yaml": "rails: 1\ninclude: [part.yaml]\n", "sub/part.yaml": "a: 1\n"})
    )
    with pytest.raises(DescriptionError) as caught:
        load("sub/main.yaml")
    assert [fault.place.file for fault in caught.value.faults] == ["sub/main.yaml", "sub/part.yaml"]
    with pytest.raises(DescriptionError, match=r"^\.: cannot be read \(Is a directory\)"):
        load("")
