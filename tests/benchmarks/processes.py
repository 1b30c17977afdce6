"""What a whole Python process costs: processor time and greatest memory, of two processes by turns."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path
from typing import NamedTuple

ROOT = Path(__file__).resolve().parents[2]
TOOL = ("-m", "tidegate.lint.cli")


class Cost(NamedTuple):
    """Processor time, in s, and greatest memory, in MB."""

    cpu_s: float
    memory_mb: float


def cost(*arguments: str) -> Cost:
    """What one run of Python costs."""
    environment = {key: value for key, value in os.environ.items() if key != "PYTHONDONTWRITEBYTECODE"}
    process = subprocess.Popen(
        [sys.executable, *arguments], cwd=ROOT, env=environment, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL
    )
    _, status, used = os.wait4(process.pid, 0)
    if os.waitstatus_to_exitcode(status) not in (0, 1):  # 1: there were findings
        raise SystemExit(f"exit status {os.waitstatus_to_exitcode(status)} of {' '.join(arguments)}")
    per_mb = 1024 * 1024 if sys.platform == "darwin" else 1024
    return Cost(used.ru_utime + used.ru_stime, used.ru_maxrss / per_mb)


def both(one: tuple[str, ...], other: tuple[str, ...], *, runs: int) -> tuple[Cost, Cost]:
    """The cheapest run of each: a machine that does something else at times only ever adds to one.

    They run by turns, so that what the machine does meanwhile meets both alike.
    """
    pairs = [(cost(*one), cost(*other)) for _ in range(runs)]
    return _least([pair[0] for pair in pairs]), _least([pair[1] for pair in pairs])


def _least(costs: list[Cost]) -> Cost:
    return Cost(min(each.cpu_s for each in costs), max(each.memory_mb for each in costs))
