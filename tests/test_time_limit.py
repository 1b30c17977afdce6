"""Code that does not end is interrupted, on the main thread and on others, however it defends itself."""

from __future__ import annotations

import signal
import subprocess
import sys
import threading
import time
from collections.abc import Callable

import pytest

from tidegate.lint.time_limit import TimeLimitError, within


def endless() -> None:
    count = 0
    while True:
        count += 1


def stubborn() -> None:
    while True:
        try:
            endless()
        except Exception:
            continue


def on_another_thread(call: Callable[[], None]) -> None:
    errors: list[BaseException] = []

    def run() -> None:
        try:
            call()
        except BaseException as error:
            errors.append(error)

    thread = threading.Thread(target=run)
    thread.start()
    thread.join()
    if errors:
        raise errors[0]


@pytest.mark.parametrize("where", [lambda call: call(), on_another_thread], ids=["main thread", "another thread"])
class TestWithin:
    @pytest.mark.parametrize("call", [endless, stubborn])
    def test_what_takes_too_long_ends(self, call: Callable[[], None], where: Callable[..., None]) -> None:
        began = time.monotonic()
        with pytest.raises(TimeLimitError, match=r"^house/slow took more than 0.05 s$"):
            where(lambda: within(0.05, "house/slow", call))
        assert time.monotonic() - began < 2.0

    def test_answers_and_errors_come_through(self, where: Callable[..., None]) -> None:
        answers: list[int] = []
        where(lambda: answers.append(within(5.0, "quick", lambda: 7)))
        assert answers == [7]
        with pytest.raises(ZeroDivisionError):
            where(lambda: within(5.0, "quick", lambda: 1 // 0))


def test_waiting_outside_python_is_interrupted_too() -> None:
    began = time.monotonic()
    with pytest.raises(TimeLimitError):
        within(0.05, "house/sleeps", lambda: threading.Event().wait(3.0))
    assert time.monotonic() - began < 2.0


def test_nothing_is_left_of_the_limit() -> None:
    before = signal.getsignal(signal.SIGALRM)
    within(0.05, "quick", lambda: None)
    assert signal.getsignal(signal.SIGALRM) is before
    assert signal.getitimer(signal.ITIMER_REAL) == (0.0, 0.0)


UNSTOPPABLE = {
    "a loop in C": "sum(range(10**13))",
    "another loop in C": "__import__('collections').deque(__import__('itertools').count(), maxlen=0)",
    "one that catches everything": "stubborn()",
    "one that sleeps and catches everything": "sleepy()",
}
SCRIPT = """
import sys, time
import tidegate.lint.time_limit as limit

def caught(call):
    while True:
        try:
            while True:
                try: call()
                except BaseException: pass
        except BaseException: pass  # an interruption between two calls

def stubborn(): caught(time.time)
def sleepy(): caught(lambda: time.sleep(1))

limit.GRACE_S = 0.2
print(limit.within(0.1, "house/slow", lambda: CALL, status=STATUS))
"""


@pytest.mark.skipif(not hasattr(signal, "setitimer"), reason="this system has no timers of this kind")
@pytest.mark.parametrize(
    ("call", "status"),
    [(call, 2 if call == "sleepy()" else 3) for call in UNSTOPPABLE.values()],
    ids=UNSTOPPABLE,
)
def test_what_does_not_let_itself_be_interrupted_ends_the_program(call: str, status: int) -> None:
    script = SCRIPT.replace("CALL", call).replace("STATUS", str(status))
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=False, timeout=60)
    assert done.returncode == status
    assert done.stderr == (
        "house/slow took more than 0.1 s and does not let itself be interrupted; nothing more is judged\n"
    )
    assert done.stdout == ""


def test_the_timer_of_the_processor_is_left_as_it_was() -> None:
    before = signal.getsignal(signal.SIGPROF)
    within(0.05, "quick", lambda: None)
    assert signal.getsignal(signal.SIGPROF) is before
    assert signal.getitimer(signal.ITIMER_PROF) == (0.0, 0.0)
