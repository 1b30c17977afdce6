"""A report is written whole or not at all."""

from __future__ import annotations

import os
import stat
from collections.abc import Iterator
from pathlib import Path

import pytest

from tidegate.lint.reports.saving import save
from tidegate.lint.reports.spool import Spool


def test_a_file_is_written_and_replaced(tmp_path: Path) -> None:
    path = tmp_path / "report.txt"
    save(path, ["one ", "two\n"])
    assert path.read_bytes() == b"one two\n"
    save(path, ["µ\n"])
    assert path.read_bytes() == b"\xc2\xb5\n"
    assert [each.name for each in tmp_path.iterdir()] == ["report.txt"]


def test_a_write_that_fails_leaves_the_old_content_and_nothing_else(tmp_path: Path) -> None:
    path = tmp_path / "report.txt"
    save(path, ["old"])

    def breaks_off() -> Iterator[str]:
        yield "new" * 100_000
        raise OSError(28, "No space left on device")

    with pytest.raises(OSError, match="No space left"):
        save(path, breaks_off())
    assert path.read_text("utf-8") == "old"
    assert [each.name for each in tmp_path.iterdir()] == ["report.txt"]


def test_a_reader_sees_the_old_content_until_the_new_is_whole(tmp_path: Path) -> None:
    path = tmp_path / "report.txt"
    save(path, ["old"])
    seen: list[str] = []

    def pieces() -> Iterator[str]:
        for _ in range(3):
            yield "new" * 100_000
            seen.append(path.read_text("utf-8"))

    save(path, pieces())
    assert seen == ["old"] * 3
    assert path.read_text("utf-8") == "new" * 300_000


def test_permissions_are_those_of_the_old_file_or_of_any_new_one(tmp_path: Path) -> None:
    path = tmp_path / "report.txt"
    before = os.umask(0o027)
    try:
        save(path, ["one"])
        assert stat.S_IMODE(path.stat().st_mode) == 0o640
        path.chmod(0o604)
        save(path, ["two"])
        assert stat.S_IMODE(path.stat().st_mode) == 0o604
    finally:
        os.umask(before)


def test_what_a_link_points_to_is_replaced(tmp_path: Path) -> None:
    (tmp_path / "real.txt").write_text("old", "utf-8")
    (tmp_path / "link.txt").symlink_to("real.txt")
    save(tmp_path / "link.txt", ["new"])
    assert (tmp_path / "link.txt").is_symlink()
    assert (tmp_path / "real.txt").read_text("utf-8") == "new"


def test_a_device_is_written_to(tmp_path: Path) -> None:
    """A device of its own for root, who could replace that of the system by mistake."""
    null = Path(os.devnull)
    if os.geteuid() == 0:
        null = tmp_path / "null"
        try:
            os.mknod(null, stat.S_IFCHR | 0o666, os.makedev(1, 3))
        except OSError as error:
            pytest.skip(f"no device can be made here ({error})")
    save(null, ["gone"])
    assert null.is_char_device()
    assert [path for path in tmp_path.iterdir() if path != null] == []


def test_a_folder_is_no_file(tmp_path: Path) -> None:
    with pytest.raises(OSError, match="directory"):
        save(tmp_path, ["x"])


def test_a_spool_gives_back_what_it_took() -> None:
    spool = Spool("|")
    assert list(spool.pieces()) == []
    texts = ["a\r\nb", "", "µ" * 70_000, "end"]
    for text in texts:
        spool.add(text)
    assert "".join(spool.pieces()) == "|".join(texts)
    assert "".join(spool.pieces()) == "|".join(texts)
    spool.close()
