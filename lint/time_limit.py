"""A limit on the time that foreign code may take.

It is interrupted where Python can interrupt it.  Code that does not let itself be interrupted, because it catches
everything or does not come out of a C function, ends the program: nothing else can be done about it.
"""

from __future__ import annotations

import ctypes
import os
import signal
import threading
import time
from collections.abc import Callable
from functools import lru_cache
from typing import Any, Final, NoReturn, TypeVar

_AGAIN_S: Final = 0.1
"""Time after which code that swallowed the interruption is interrupted again, in s."""
_TRIES: Final = 10
GRACE_S: Final = 2.0
"""Time over the limit after which code that cannot be interrupted ends the program, in s."""

_A = TypeVar("_A")


class TimeLimitError(BaseException):
    """Code took too long; no ``Exception``, so that code which catches those does not live on."""


def within(most_seconds: float, name: str, call: Callable[[], _A], *, status: int = 3) -> _A:
    """What a function returns, if it returns in time.

    ``status`` is the exit status where the code cannot be interrupted and the program ends.
    Raises: TimeLimitError: saying whose limit it was.
    """
    said = f"{name} took more than {most_seconds:g} s"
    if threading.current_thread() is threading.main_thread() and hasattr(signal, "setitimer"):
        return _interrupted(most_seconds, said, call, status)
    return _left_behind(most_seconds, said, call)


def _interrupted(most_seconds: float, said: str, call: Callable[[], _A], status: int) -> _A:
    """On the main thread a signal interrupts the code, even where it waits outside Python."""
    running = [True]
    ends_s = time.monotonic() + most_seconds + GRACE_S

    def too_long(_signal: int, _frame: object) -> None:
        if running and time.monotonic() > ends_s:
            _end(said, status)
        if running:
            raise TimeLimitError(said)

    before = signal.signal(signal.SIGALRM, too_long)
    stop = _stop()
    try:
        stop.begin(most_seconds + GRACE_S, said, status)
        signal.setitimer(signal.ITIMER_REAL, most_seconds, _AGAIN_S)
        try:
            return call()
        finally:
            running.clear()
    finally:
        signal.setitimer(signal.ITIMER_REAL, 0)
        stop.end()
        signal.signal(signal.SIGALRM, before)


def _end(said: str, status: int) -> NoReturn:
    os.write(2, f"{said} and does not let itself be interrupted; nothing more is judged\n".encode())
    os._exit(status)


class _Stop:
    """Ends the program when the processor has worked for so long, even inside a C function.

    Python runs what is to be done on a signal between two steps of its own, so that a loop in C puts it off for ever.
    A handler that the C library itself calls is not put off; it runs in the midst of that loop, and may only end it.
    """

    def __init__(self) -> None:
        self._last_words = ("", 0)
        self._before: Any = None
        handler = ctypes.CFUNCTYPE(None, ctypes.c_int)
        self._handler = handler(lambda _signal: _end(*self._last_words))  # kept: the C library has its address alone
        self._address = ctypes.cast(self._handler, ctypes.c_void_p)
        self._install = ctypes.pythonapi.PyOS_setsig
        self._install.restype, self._install.argtypes = ctypes.c_void_p, (ctypes.c_int, ctypes.c_void_p)

    def begin(self, most_seconds: float, said: str, status: int) -> None:
        """Count from now on."""
        self._last_words = said, status
        self._before = signal.getsignal(signal.SIGPROF)
        self._install(signal.SIGPROF, self._address)
        signal.setitimer(signal.ITIMER_PROF, most_seconds)

    def end(self) -> None:
        """Count no longer."""
        signal.setitimer(signal.ITIMER_PROF, 0)
        signal.signal(signal.SIGPROF, self._before or signal.SIG_DFL)


@lru_cache(maxsize=1)
def _stop() -> _Stop:
    return _Stop()


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
