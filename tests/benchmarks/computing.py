"""Timing, crossing points and Monte Carlo, beside what NumPy or SciPy take for the part that cannot be left out."""

from __future__ import annotations

import json
import tempfile
import time
from collections.abc import Callable, Iterator
from pathlib import Path

import numpy as np
from crossover import at_once_and_one_by_one
from generated import generated

from tidegate.lint.description.load import load
from tidegate.lint.graph.dependency import build
from tidegate.lint.physics.placement import Level, Side
from tidegate.lint.physics.tolerance import Contributor, Kind
from tidegate.lint.physics.yield_estimate import Demand, DrawnDetector, yield_estimate
from tidegate.lint.timing.timeline import Timelines

ELEMENTS = 1000
SAMPLES = 1_000_000
DETECTORS = 8
ERRORS = 4
RUNS = 3

Row = tuple[str, str, str]


def rows() -> Iterator[Row]:
    """What was measured, against what, and the ratio."""
    yield _timing()
    for name, at_once, one_by_one in at_once_and_one_by_one():
        yield (
            f"10 000 corners of a crossing, {name}",
            "SciPy's root finder, corner by corner",
            f"{at_once / one_by_one:.4f}",
        )
    yield _monte_carlo()


def least_s(work: Callable[[], object], *, runs: int = RUNS) -> float:
    """Processor time of the quickest run, in s."""
    times_s = []
    for _ in range(runs):
        start_s = time.process_time()
        work()
        times_s.append(time.process_time() - start_s)
    return min(times_s)


def _timing() -> Row:
    """Every start-up of a description, against one interpolation in NumPy for each element and start-up."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "some.json"
        path.write_text(generated(ELEMENTS), "utf-8")
        loaded = load(path)
    graph = build(loaded.description)
    lines = Timelines(loaded.description, graph)
    timed = len(lines.starts) * len(lines.read.parts)
    levels_v, times_s = np.array([0.0, 1.8]), np.array([0.0, 1e-3])

    def floor() -> None:
        for _ in range(timed):
            np.interp(0.9, levels_v, times_s)

    ours_s = least_s(lambda: Timelines(loaded.description, graph).starts)
    what = f"{len(lines.starts)} start-ups of {len(lines.read.parts)} elements"
    return what, "`numpy.interp`, once for each element and start-up", f"{ours_s / least_s(floor):.1f}"


def _monte_carlo() -> Row:
    """A million parts with eight detectors, against drawing as many numbers in NumPy."""
    errors = tuple(
        Contributor(
            name=f"error {number}", at_rail_v=0.01, kind=Kind.SIGMA, coverage=1.0, rectangular=False, tracks=True
        )
        for number in range(ERRORS)
    )
    demands = (Demand("falling", Level.FALLING, Side.LEAST, 0.97), Demand("rising", Level.RISING, Side.MOST, 1.09))
    detectors = [DrawnDetector(f"detector {number}", 1.05, 1.0, errors, demands) for number in range(DETECTORS)]

    def draws() -> None:
        generator = np.random.default_rng(1)
        for _ in range(DETECTORS * ERRORS):
            generator.standard_normal(SAMPLES)

    def ours() -> None:
        yield_estimate(
            detectors, shared=(), samples=SAMPLES, seed=1, coverage=3.0, interval_coverage=1.96, progress=None
        )

    ratio = least_s(ours, runs=1) / least_s(draws, runs=1)
    return (
        f"{SAMPLES:,} parts with {DETECTORS} detectors drawn".replace(",", " "),
        "the bare draws in NumPy",
        f"{ratio:.1f}",
    )


if __name__ == "__main__":
    print(json.dumps(list(rows()), indent=1))
