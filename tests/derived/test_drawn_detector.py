"""Yield of a described detector against normal theory worked out beside it."""

from __future__ import annotations

import math

import pytest
from scipy.stats import norm

from tests.rules.sound import patched, without
from tidegate.lint.derived.asking import Unknown, ask
from tidegate.lint.derived.levels.drawn_detector import drawn_detector
from tidegate.lint.derived.levels.placing import Placing
from tidegate.lint.graph.dependency import build
from tidegate.lint.physics.yield_estimate import DrawnDetector, YieldEstimate, yield_estimate

# Levels so near their limits that some parts fail; the errors are three standard deviations of the bounds.
NEAR = (
    "comparators: {uv: {trip: {falling: 1.6125 V, rising: 1.6975 V}, hysteresis: null, "
    "errors: {reference: {share: 0.4 %}, divider: {share: 0.1 %}, offset: {amount: 0.4 mV, is: sigma, at: input}}}}"
)


def drawn(patch: str, detector: str) -> tuple[DrawnDetector, float] | Unknown:
    description = patched(patch).description
    graph, comparator = build(description), description.comparators[detector]
    placing = Placing(description, graph, comparator)
    return ask(description, graph, comparator, lambda case: drawn_detector(case, placing))


def estimate(patch: str, *, samples: int = 200_000, seed: int = 7) -> YieldEstimate:
    answer = drawn(patch, "uv")
    assert not isinstance(answer, Unknown)
    detector, coverage = answer
    return yield_estimate(
        [detector], shared=(), samples=samples, seed=seed, coverage=coverage, interval_coverage=norm.ppf(0.99999),
        progress=None,
    )  # fmt: skip


def sigma_v(level_v: float) -> float:
    # A bound counts as three standard deviations (conditions.coverage), a sigma as one; the offset stands at the
    # input, behind a divider of 0.367 (JCGM 100:2008, 5.1.2 equation (10)).
    return math.hypot(0.004 * level_v / 3, 0.001 * level_v / 3, 0.4e-3 / 0.367)


def test_each_demand_against_the_normal_integral() -> None:
    shares = {name: share for (_, name), share in estimate(NEAR).by_demand.items()}
    # The same limits, written out: 1.6 V and 7 mV of fall; 1.71 V less 5 mV.
    expected = {
        "protects (falling)": norm.cdf(-(1.6125 - 1.607) / sigma_v(1.6125)),
        "comes back (rising)": norm.cdf(-(1.705 - 1.6975) / sigma_v(1.6975)),
    }
    for name, share in expected.items():
        assert shares[name].normal_ppm == pytest.approx(1e6 * share, rel=1e-6)
        assert shares[name].least_ppm <= 1e6 * share <= shares[name].most_ppm
        assert shares[name].failures > 100


def test_the_same_seed_draws_the_same_parts() -> None:
    first, again, other = (estimate(NEAR, samples=50_000, seed=seed).whole.failures for seed in (3, 3, 4))
    assert first == again
    assert first != other


def test_a_range_is_not_drawn() -> None:
    answer = drawn("", "por")
    assert isinstance(answer, Unknown)
    assert answer.text() == "not drawn: give both levels as nominal values with error contributors"


def test_it_must_be_said_which_errors_move_together() -> None:
    answer = drawn("comparators: {uv: {tracked: null, errors: {offset: {tracks: null}}}}", "uv")
    assert isinstance(answer, Unknown)
    assert "comparators.uv.errors.offset.tracks" in answer.missing


def test_what_a_bound_counts_as_is_policy() -> None:
    plain, said = drawn("conditions: {coverage: null}", "uv"), drawn("conditions: {coverage: 3}", "uv")
    assert not isinstance(plain, Unknown)
    assert plain == said


def test_a_list_of_errors_that_is_not_whole_is_not_drawn() -> None:
    answer = drawn(without("comparators.uv.errors.offset"), "uv")
    assert isinstance(answer, Unknown)
    assert answer.missing == ("comparators.uv.errors",)


@pytest.mark.parametrize("fact", ["rails.avdd.ripple", "loads.adc.needs.0.works", "comparators.uv.delay"])
def test_what_the_levels_must_keep_must_be_known(fact: str) -> None:
    answer = drawn(without(fact), "uv")
    assert isinstance(answer, Unknown)
    assert [one for one in answer.missing if one.startswith(fact)]


def test_both_levels_of_a_power_on_detector_protect() -> None:
    patch = (
        "comparators: {por: {crossover: null, reference: ref_fast, trip: {falling: 1.27 V, rising: 1.33 V}, "
        "errors: {all: {of: total, share: 2 %, is: bound, at: rail, tracks: true}}}}"
    )
    answer = drawn(patch, "por")
    assert not isinstance(answer, Unknown)
    assert [demand.name for demand in answer[0].demands] == [
        "protects (falling)", "protects (rising)", "quiet (falling)", "comes back (rising)",
        "lets go in order (rising)",
    ]  # fmt: skip
