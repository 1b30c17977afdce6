"""Ctrl-C and termination: a run that is stopped puts things in order, says so in a line, and ends as it was told to."""

from __future__ import annotations

import os
import signal
import time
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from concurrent.futures import Executor

SIGNALS: Final = tuple(getattr(signal, name) for name in ("SIGINT", "SIGTERM", "SIGHUP") if hasattr(signal, name))
"""What ends a run from outside: Ctrl-C, a request to end, a terminal that is closed."""
_SAME_WISH_S: Final = 0.5
"""Time in which another signal is the same wish again, and does not disturb the putting in order, in s."""
_WORDS: Final = {"SIGINT": "interrupted", "SIGTERM": "terminated", "SIGHUP": "left by its terminal"}


class Stopped(KeyboardInterrupt):
    """The run was told to stop."""

    def __init__(self, number: int) -> None:
        self.number = number
        super().__init__(number)


class Told:
    """Whether a run was told to stop, also where foreign code has swallowed the exception."""

    def __init__(self) -> None:
        self.number: int | None = None
        self._at_s = -float("inf")

    def __call__(self, number: int, _frame: object) -> None:
        """Stop; this is the handler of the signals."""
        now_s = time.monotonic()
        if now_s - self._at_s < _SAME_WISH_S:
            return
        self.number, self._at_s = number, now_s
        raise Stopped(number)


@contextmanager
def heeded() -> Iterator[Told]:
    """Have the signals that end a program raise ``Stopped`` in it, and afterwards end it at once and without a word.

    Those that whoever started the program turned off stay so.
    """
    told = Told()
    numbers = [number for number in SIGNALS if signal.getsignal(number) is not signal.SIG_IGN]
    try:
        for number in numbers:
            signal.signal(number, told)
        yield told
    finally:
        for number in numbers:
            signal.signal(number, signal.SIG_DFL)


def number_of(stopped: KeyboardInterrupt) -> int:
    """The signal that stopped a run."""
    return stopped.number if isinstance(stopped, Stopped) else signal.SIGINT


def words(number: int) -> str:
    """What a signal has done, in a few words."""
    return f"{_WORDS[signal.Signals(number).name]} before the end"


def end_by(number: int) -> None:
    """End as the signal ends a program: a shell that runs several then stops as well."""
    signal.signal(number, signal.SIG_DFL)
    os.kill(os.getpid(), number)


@contextmanager
def signals_held() -> Iterator[None]:
    """Let signals wait while processes are started, so that none of these meets one before it knows what to do."""
    if not hasattr(signal, "pthread_sigmask"):
        yield
        return
    before = signal.pthread_sigmask(signal.SIG_BLOCK, SIGNALS)
    try:
        yield
    finally:
        signal.pthread_sigmask(signal.SIG_SETMASK, before)


def begin_work() -> None:
    """In a process that works for another: Ctrl-C reaches all of them, and the first one ends the others."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    for number in SIGNALS[1:]:
        signal.signal(number, signal.SIG_DFL)
    if hasattr(signal, "pthread_sigmask"):
        signal.pthread_sigmask(signal.SIG_UNBLOCK, SIGNALS)
    import threading

    threading.Thread(target=_end_with_parent, daemon=True, name="tidegate-parent").start()


def _end_with_parent() -> None:
    """Nobody waits for the work of a process whose parent was killed."""
    from multiprocessing import connection, parent_process

    parent = parent_process()
    if parent is not None:
        connection.wait([parent.sentinel])
        os._exit(1)


@contextmanager
def processes(count: int) -> Iterator[Executor]:
    """Processes beside this one, as an executor; where the work breaks off, they end at once."""
    # Loaded here alone: few runs work in several processes.
    import multiprocessing
    from concurrent.futures import ProcessPoolExecutor

    others = set(multiprocessing.active_children())
    executor = ProcessPoolExecutor(count, initializer=begin_work)
    try:
        yield executor
    except BaseException:
        for process in set(multiprocessing.active_children()) - others:
            process.terminate()
        executor.shutdown()
        raise
    executor.shutdown()
