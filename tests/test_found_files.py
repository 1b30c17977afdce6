"""Which files are meant by names, folders and patterns."""

from __future__ import annotations

from pathlib import Path

import pytest

from tidegate.lint.description.place import Fault
from tidegate.lint.found_files import found_files


@pytest.fixture
def tree(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    for name in (
        "b.tidegate.yaml", "a.tidegate.yml", "notes.yaml", "deep/z.tidegate.json", "deep/er/c.tidegate.yaml",
        ".hidden/d.tidegate.yaml", "empty/readme.md",
    ):  # fmt: skip
        (tmp_path / name).parent.mkdir(parents=True, exist_ok=True)
        (tmp_path / name).write_text("rails: {}\n", "utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def names(*given: str) -> list[str]:
    return [str(found).replace("\\", "/") for found in found_files(given)]


BELOW = ["a.tidegate.yml", "b.tidegate.yaml", "deep/z.tidegate.json", "deep/er/c.tidegate.yaml"]


@pytest.mark.usefixtures("tree")
def test_a_folder_means_the_descriptions_below_it() -> None:
    assert names(".") == BELOW  # by name, a folder's own files first, hidden folders left out
    assert names("deep") == BELOW[2:]
    assert names("deep/") == BELOW[2:]
    assert names(".hidden") == [".hidden/d.tidegate.yaml"]  # unless it is named


@pytest.mark.usefixtures("tree")
def test_files_are_taken_as_named_and_once() -> None:
    assert names("notes.yaml", "b.tidegate.yaml") == ["notes.yaml", "b.tidegate.yaml"]
    assert names("./notes.yaml", "notes.yaml", "deep/../notes.yaml") == ["./notes.yaml"]
    assert names("b.tidegate.yaml", ".") == ["b.tidegate.yaml", BELOW[0], *BELOW[2:]]
    assert names("missing.yaml") == ["missing.yaml"]  # said when it is read


def test_a_link_is_no_second_file(tree: Path) -> None:
    (tree / "link.tidegate.yaml").symlink_to("b.tidegate.yaml")
    assert names(".") == BELOW


def test_patterns(tree: Path) -> None:
    assert names("*.tidegate.*") == BELOW[:2]
    assert names("**/*.tidegate.yaml") == ["b.tidegate.yaml", "deep/er/c.tidegate.yaml"]
    assert names("deep/*") == ["deep/z.tidegate.json"]  # folders that match are not looked into
    assert names(f"{tree}/*.yaml") == [f"{tree}/b.tidegate.yaml", f"{tree}/notes.yaml"]
    (tree / "odd[1].yaml").write_text("rails: {}\n", "utf-8")
    assert names("odd[1].yaml") == ["odd[1].yaml"]  # a file of that name is meant before a pattern


@pytest.mark.usefixtures("tree")
def test_a_name_that_means_nothing_is_a_fault_in_its_place() -> None:
    found = list(found_files(["notes.yaml", "empty", "*.json", "b.tidegate.yaml"]))
    assert [isinstance(each, Fault) for each in found] == [False, True, True, False]
    assert [str(each) for each in found][1:3] == [
        "empty: the folder holds no description; descriptions in a folder have names that end in .tidegate.yaml, "
        ".tidegate.yml, .tidegate.json",
        "*.json: no file matches; check the pattern",
    ]
