"""Facts of one description of which only one can be true: no rule could say which."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.process import Layer, LayerLimit, Process, ViaKind, ViaLimit
from tidegate.lint.description.place import Fault, Path, dotted
from tidegate.lint.description.sources import Sources
from tidegate.lint.quantity import Duration, Temperature


def contradictions(description: Description, sources: Sources) -> list[Fault]:
    """What is wrong with facts that exclude each other; empty if there are none."""
    found = (
        *_domains(description), *_loads(description), *_modes(description), *_neighbours(description),
        *_scenarios(description), *_process(description.process),
    )  # fmt: skip
    return [Fault(sources.place(path), dotted(path), problem, advice) for path, problem, advice in found]


def _domains(description: Description) -> Iterator[tuple[Path, str, str]]:
    for domain in description.domains.values():
        if domain.kind == "always_on" and domain.switched_by not in (None, "none"):
            problem = f"an always-on domain that {domain.switched_by} switches"
            yield ("domains", domain.id, "switched_by"), problem, "write kind: switched, or leave switched_by out"


def _loads(description: Description) -> Iterator[tuple[Path, str, str]]:
    for load in description.loads.values():
        met: set[str] = set()
        for number, need in enumerate(load.needs):
            if need.rail in met:
                yield ("loads", load.id, "needs", number, "rail"), f"a second need of {need.rail}", "keep one of them"
            met.add(need.rail)


def _modes(description: Description) -> Iterator[tuple[Path, str, str]]:
    for name, mode in description.modes.items():
        for number, sampled in enumerate(mode.sampled or ()):
            period = description.comparators[sampled].sampling
            if period is not None and period.most == 0.0:
                problem = f"{sampled} decides at any time (sampling: none), and only now and then here"
                yield ("modes", name, "sampled", number), problem, "give its sampling period, or leave it out here"


def _neighbours(description: Description) -> Iterator[tuple[Path, str, str]]:
    for pair in description.neighbours.values():
        if pair.aggressor == pair.victim:
            problem = f"aggressor and victim are one element ({pair.victim})"
            yield ("neighbours", pair.id, "victim"), problem, "name two elements, or leave the pair out"


def _scenarios(description: Description) -> Iterator[tuple[Path, str, str]]:
    for name, scenario in description.scenarios.items():
        met: set[str] = set()
        for number, waveform in enumerate(scenario.waveforms):
            if waveform.rail in met:
                problem = f"a second waveform of {waveform.rail} in one scenario"
                yield ("scenarios", name, "waveforms", number, "rail"), problem, "join them, or make it a scenario"
            met.add(waveform.rail)


def _process(process: Process | None) -> Iterator[tuple[Path, str, str]]:
    if process is None:
        return
    kinds: dict[str, Mapping[str, Layer | ViaKind]] = {"layers": process.layers, "vias": process.vias}
    for section, entries in kinds.items():
        for name, entry in entries.items():
            met: set[tuple[Temperature, Duration]] = set()
            limits: Sequence[LayerLimit | ViaLimit] = entry.limits
            for number, limit in enumerate(limits):
                if limit.temperature is None or limit.life is None:
                    continue
                if (limit.temperature, limit.life) in met:
                    path = ("process", section, name, "limits", number)
                    yield path, "a second entry for one temperature and life", "keep one of them"
                met.add((limit.temperature, limit.life))
