"""Every bad input gives a whole message that an engineer can act on and the right exit status; nothing is written."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tests.bad_input.corpus import BY_KIND
from tests.bad_input.form import Bad, lay, told
from tests.commands.calling import tidegate

EVERY = [pytest.param(bad, id=f"{kind}: {bad.what}") for kind, cases in BY_KIND.items() for bad in cases]


@pytest.mark.parametrize("bad", EVERY)
def test_the_whole_message_and_the_exit_status(bad: Bad, tmp_path: Path) -> None:
    lay(bad, tmp_path)
    before = _listed(tmp_path)
    done = tidegate(*bad.call.split(), cwd=tmp_path)
    assert told(done, tmp_path) == bad.said
    assert done.returncode == bad.status
    assert _listed(tmp_path) == before


def _listed(folder: Path) -> dict[str, bytes | None]:
    """Every file, with its content: what is refused writes nothing, and leaves no draft behind."""
    found = (path for path in folder.rglob("*") if "__pycache__" not in path.parts)
    return {str(path): path.read_bytes() if path.is_file() else None for path in found}


def test_every_message_is_in_our_own_words_and_short() -> None:
    library_words = r"instance|jsonschema|is not valid under|is not of type|while (scanning|parsing)|Traceback"
    for bad in (bad for cases in BY_KIND.values() for bad in cases):
        assert not re.search(library_words, bad.said), bad.what
        for line in bad.said.splitlines():
            assert line.isprintable(), bad.what
            assert len(line) < 500, bad.what


def test_no_case_is_told_twice() -> None:
    for kind, cases in BY_KIND.items():
        whats = [bad.what for bad in cases]
        assert len(whats) == len(set(whats)), kind
