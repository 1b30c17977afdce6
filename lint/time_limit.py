"""A limit on the time that foreign code may take: it is interrupted where Python can interrupt it."""

from __future__ import annotations

import ctypes
import signal
import threading
from collections.abc import Callable
from typing import Final, TypeVar

_AGAIN_S: Final = 0.1
"""Time after which code that swallowed the interruption is interrupted again, in s."""
_TRIES: Final = 10

_A = TypeVar("_A")


class TimeLimitError(BaseException):
    """Code took too long; no ``Exception``, so that code which catches those does not live on."""


def within(most_seconds: float, name: str, call: Callable[[], _A]) -> _A:
    """What a function returns, if it returns in time.

    Raises: TimeLimitError: saying whose limit it was.
    """
    said = f"{name} took more than {most_seconds:g} s"
    if threading.current_thread() is threading.main_thread() and hasattr(signal, "setitimer"):
        return _interrupted(most_seconds, said, call)
    return _left_behind(most_seconds, said, call)


def _interrupted(most_seconds: float, said: str, call: Callable[[], _A]) -> _A:
    """On the main thread a signal interrupts the code, even where it waits outside Python."""
    running = [True]

    def too_long(_signal: int, _frame: object) -> None:
        if running:
            raise TimeLimitError(said)

    before = signal.signal(signal.SIGALRM, too_long)
    try:
        signal.setitimer(signal.ITIMER_REAL, most_seconds, _AGAIN_S)
        try:
            return call()
        finally:
            running.clear()
    finally:
        signal.setitimer(signal.ITIMER_REAL, 0)
        signal.signal(signal.SIGALRM, before)


def _left_behind(most_seconds: float, said: str, call: Callable[[], _A]) -> _A:
    """Elsewhere the code runs in a thread of its own, which is made to raise at its next step, or else left behind."""
    answers: list[_A] = []
    errors: list[BaseException] = []

    def run() -> None:
        try:
            answers.append(call())
        except BaseException as error:
            errors.append(error)

    thread = threading.Thread(target=run, daemon=True, name="tidegate-foreign")
    thread.start()
    thread.join(most_seconds)
    for _ in range(_TRIES):
        if not thread.is_alive():
            break
        ctypes.pythonapi.PyThreadState_SetAsyncExc(ctypes.c_ulong(thread.ident or 0), ctypes.py_object(TimeLimitError))
        thread.join(_AGAIN_S)
    if thread.is_alive() or (errors and isinstance(errors[0], TimeLimitError)):
        raise TimeLimitError(said)
    if errors:
        raise errors[0]
    return answers[0]
