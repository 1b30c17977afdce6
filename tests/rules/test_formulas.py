"""The formula that a rule cites is the one that runs, and one that runs is cited.

Each rule is run by itself over both examples, over its own two examples, and over what else it takes to reach all of
its formulas, while every formula of ``lint/physics`` notes who called it.  A formula that another formula calls belongs
to that one.
"""

from __future__ import annotations

import functools
import importlib
import inspect
import pkgutil
import sys
from collections.abc import Callable, Iterator
from types import ModuleType
from typing import Any, Final

import msgspec
import pytest

import tidegate.lint
import tidegate.lint.physics
import tidegate.rules
from tests.rules.sound import SOUND, TODAY, patched
from tidegate.lint.description.load import Loaded, load
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.rule import Rule
from tidegate.rules.catalogue import FAMILIES

RULES: Final[tuple[Rule, ...]] = tuple(rule for family in FAMILIES for rule in family)
FAULTY: Final = SOUND.with_name("faulty.yaml")
_PHYSICS: Final = tidegate.lint.physics.__name__
_CRUDE: Final = "kind: crude_current, reference_current: 900 nA, mirror: 1, reference_start: 1 V, reference_rise: 0.4 V"
_CROSSOVERS: Final = tuple(
    f"comparators: {{por: {{crossover: {{{crossover}, resistor: poly_high}}}}}}"
    for crossover in (_CRUDE, "kind: divider_diode, diode: pnp", f"{_CRUDE}, diode: pnp, device: null")
)
_TIMING: Final = (
    "{resistance: {min: 0.8 Mohm, max: 1.2 Mohm}, capacitance: 10 pF, threshold: {min: 0.8 V, max: 1 V}}",
    "{current: {min: 10 nA, max: 20 nA}, capacitance: 10 pF, threshold: 0.8 V}",
    "{count: 100, period: {min: 9 us, max: 12 us}}",
)
_WORN: Final = "output_stages: {por_out: {nmos: {gain: 5 mA/V^2}, pmos: {gain: 5 mA/V^2}}}"
_COOL: Final = "conditions: {junction_temperature: {min: -40 degC, max: 105 degC}}"

MORE: Final[dict[str, tuple[str, ...]]] = {
    "trip_window/crossover_level": _CROSSOVERS,
    "trip_window/crossover_tracks": _CROSSOVERS,
    "trip_window/second_crossing": _CROSSOVERS,
    "self_bias/bias_starts": ("biases: {bias_start: {kind: self_biased, start_up: {by: x, least_slope: 9 V/s}}}",),
    "claims/filter": tuple(f"comparators: {{ov: {{timing: {timing}}}}}" for timing in _TIMING),
    "claims/stage_delay": tuple(f"output_stages: {{core_out: {{timing: {timing}}}}}" for timing in _TIMING),
    "electromigration/line": (_WORN, _COOL),
    "electromigration/vias": (_WORN, _COOL),
}  # fmt: skip
"""By rule, patches of the sound example that reach formulas which the examples do not."""


def _modules(package: ModuleType) -> Iterator[ModuleType]:
    """Every module of a package, imported."""
    for found in pkgutil.walk_packages(package.__path__, f"{package.__name__}."):
        if not found.name.endswith(("__main__", ".cli")):
            yield importlib.import_module(found.name)


def _formulas() -> dict[str, Callable[..., Any]]:
    """Every formula, by module and name: public functions that state one."""
    return {
        f"{module.__name__.rpartition('.')[2]}.{name}": function
        for module in _modules(tidegate.lint.physics)
        for name, function in vars(module).items()
        if inspect.isfunction(function)
        and function.__module__ == module.__name__
        and not name.startswith("_")
        and "Formula:" in (function.__doc__ or "")
    }


class _Recorder:
    """Notes which formulas are called from outside of the formulas."""

    def __init__(self) -> None:
        self.called: set[str] = set()
        self._depth = 0

    def noting(self, name: str, formula: Callable[..., Any]) -> Callable[..., Any]:
        """The formula, with a note of each call."""

        @functools.wraps(formula)
        def noted(*args: Any, **more: Any) -> Any:
            if self._depth == 0:
                self.called.add(name)
            self._depth += 1
            try:
                return formula(*args, **more)
            finally:
                self._depth -= 1

        return noted


@pytest.fixture(scope="module")
def recorder() -> Iterator[_Recorder]:
    """Every name of every module that stands for a formula stands for one that is noted, while the tests run."""
    for package in (tidegate.lint, tidegate.rules):
        list(_modules(package))
    recorder = _Recorder()
    noted = {formula: recorder.noting(name, formula) for name, formula in _formulas().items()}
    changed: list[tuple[ModuleType, str, Any]] = []
    for module in [module for name, module in sys.modules.items() if name.startswith("tidegate.")]:
        for name, value in list(vars(module).items()):
            if inspect.isfunction(value) and value in noted:
                changed.append((module, name, value))
                setattr(module, name, noted[value])
    yield recorder
    for module, name, value in changed:
        setattr(module, name, value)


def _anew(loaded: Loaded) -> Loaded:
    """The same description as an object of its own, of which no answer is kept."""
    return Loaded(msgspec.structs.replace(loaded.description), loaded.sources)


@functools.cache
def _examples() -> tuple[Loaded, ...]:
    return load(SOUND), load(FAULTY)


def _called(rule: Rule, recorder: _Recorder) -> set[str]:
    """The formulas that a rule calls, over everything that it is run on."""
    recorder.called.clear()
    patches = (rule.example.fails, rule.example.holds, *MORE.get(rule.id, ()))
    for loaded in (*map(_anew, _examples()), *map(patched, patches)):
        assert review(loaded, Catalogue([(rule,)]), today=TODAY).faults == ()
    return set(recorder.called)


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_what_a_rule_cites_is_what_it_runs(rule: Rule, recorder: _Recorder) -> None:
    cited = {f"{formula.__module__.rpartition('.')[2]}.{formula.__name__}" for formula in rule.formulas}
    assert all(formula.__module__.startswith(_PHYSICS) for formula in rule.formulas)
    called = _called(rule, recorder)
    assert cited - called == set(), "cited, and never called"
    assert called - cited == set(), "called, and not cited"


def test_a_call_from_within_a_formula_belongs_to_that_formula(recorder: _Recorder) -> None:
    """The bump at a time works out the peak of an edge cut short; only the outer one is noted."""
    from tidegate.lint.physics import coupling

    node = {"step_v": 1.0, "edge_s": 1e-6, "r_ohm": 1e6, "coupling_c_f": 1e-15, "ground_c_f": 1e-13}
    recorder.called.clear()
    coupling.bump_at_v(t_s=1e-7, **node)
    assert recorder.called == {"coupling.bump_at_v"}
    coupling.bump_peak_v(**node)
    assert recorder.called == {"coupling.bump_at_v", "coupling.bump_peak_v"}
