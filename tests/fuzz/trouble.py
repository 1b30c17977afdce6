"""What a run can find wrong with the program, and the few things that all checks share."""

from __future__ import annotations

import contextlib
import re
import signal
import time
import traceback
from collections.abc import Iterator
from typing import Any, Final, NamedTuple

MOST_SECONDS: Final = 10.0
"""CPU time that no run on a small file may take."""
_HANGS_AFTER: Final = 40.0
_VARIES: Final = re.compile(r"'.*?'|\b[0-9][0-9.eE+-]*")
_NO_NUMBER: Final = re.compile(r"(?<![\w.'/-])[+-]?(?:nan|inf|infinity)(?![\w'/-])", re.IGNORECASE)


class Trouble(NamedTuple):
    """One thing that is wrong with the program: its sort, where it shows, and the whole story."""

    sort: str
    where: str
    story: str

    @property
    def signature(self) -> str:
        """The same for what is probably the same fault."""
        return f"{self.sort} in {self.where}: {_VARIES.sub('#', self.story.splitlines()[0])[:100]}"


class HangError(BaseException):
    """A run did not end."""


def of_error(where: str, error: BaseException) -> Trouble:
    """An exception that nobody should see, with the innermost line of the program that raised it."""
    frames = [frame for frame in traceback.extract_tb(error.__traceback__) if "fuzz" not in frame.filename]
    last = frames[-1] if frames else None
    at = "" if last is None else f" at {last.filename.rpartition('/')[2]} {last.name}"
    text = "".join(traceback.format_exception(error))[-3000:]
    return Trouble(type(error).__name__, where, f"{type(error).__name__}{at}: {str(error)[:200]}\n{text}")


@contextlib.contextmanager
def watched(where: str, found: list[Trouble], *, many: bool = False) -> Iterator[None]:
    """Notes every exception, a hang, and what takes too long; ``many`` runs together may take longer."""

    def hangs(_signal: int, _frame: object) -> None:
        raise HangError

    before = signal.signal(signal.SIGALRM, hangs)
    signal.setitimer(signal.ITIMER_REAL, 0 if many else _HANGS_AFTER)
    start_s = time.process_time()
    try:
        yield
    except KeyboardInterrupt:
        raise
    except BaseException as error:
        found.append(of_error(where, error))
    finally:
        signal.setitimer(signal.ITIMER_REAL, 0)
        signal.signal(signal.SIGALRM, before)
    took_s = time.process_time() - start_s
    if took_s > MOST_SECONDS and not many:
        found.append(Trouble("slow", where, f"took too long\n{took_s:.1f} s of CPU time"))


def no_number(text: str, given: str) -> str:
    """A part of a report that is no number to show to people; empty where there is none, or the user wrote it."""
    text = re.sub(r"must\s+be\s[a-z0-9\s]+\(found\s+[a-z-]+\)", "", text)  # what a formula refuses is named as it is
    match = _NO_NUMBER.search(text)
    if match is None or match[0].strip("+-").casefold() in given.casefold():
        return ""
    return text[max(match.start() - 60, 0) : match.end() + 30]


def no_constant(text: str) -> Any:
    """For JSON: NaN and its like are no numbers of JSON."""
    raise ValueError(f"{text} is no number of JSON")
