"""How much each rule weighs and what it judges: a table kept by hand, so that neither changes unnoticed.

An error is a chip that may fail to reset, or to be let go; a warning is one that does so only together with something
else, or that cannot be brought up; a note is a matter of the description, or of where its numbers come from.
"""

from __future__ import annotations

from typing import Final

from tidegate.rules.catalogue import FAMILIES

TABLE: Final = """
    hysteresis       error    comparators    present sense covers_disturbance false_trips fits_window
    hysteresis       error    comparators    switches_complementary
    hysteresis       warning  comparators    feedback_in_time
    trip_window      error    comparators    guarantee nuisance release placement_sense spread
    trip_window      error    comparators    crossover_level crossover_tracks second_crossing
    trip_window      error    rails          order
    trip_window      warning  comparators    codes
    own_range        error    comparators    levels_inside survives
    passive_default  error    resets         held
    passive_default  error    output_stages  chain_alive level hold_strength driver_wins latch_state
    passive_default  error    domains        holds_within_budget
    self_bias        error    comparators    works_at_own_trip up_in_time no_loop leans_on_nobody
    self_bias        error    references     reference_starts
    self_bias        error    biases         bias_starts
    self_bias        error    rails,references,biases,output_stages,loads loop_starts
    start_up         error    loads          release_after_ready asserts_in_time dip_is_caught
    start_up         error    resets         no_unknown_interval
    start_up         error    rails          rail_order
    hand_over        error    rails          no_hole
    hand_over        warning  comparators    armed_when_up
    rearming         error    comparators    level_held residual
    rearming         error    output_stages  discharge
    modes            error    loads          live_detector
    modes            error    comparators    sampling
    modes            warning  rails          over_voltage
    reach            error    loads          has_reset every_rail
    reach            error    output_stages  stage_combined_safely
    reach            error    resets         reset_net_combined_safely
    reach            warning  resets         edge
    reach            warning  loads          synchronised
    coverage         error    rails          under_voltage
    coverage         warning  rails          over_voltage
    coverage         warning  resets         guards_something single_point
    coverage         note     rails,domains,references,biases,comparators,output_stages used
    crossing         error    output_stages  stage_shifted input_held
    crossing         error    resets         reset_net_shifted
    crossing         error    comparators,references,biases,output_stages stays_on
    coupling         error    neighbours     bump
    coupling         error    comparators    shared_reference own_kick ring supply_step
    coupling         warning  comparators    together chain
    bypass           error    comparators    present
    bypass           error    bypasses       independent control_up default_inactive default_held locked
    bypass           warning  bypasses       readable over_voltage_caution
    electromigration error    output_stages  schmitt crowbar_droop line vias
    budget           error    domains        within
    budget           warning  biases         bias_above_leakage
    budget           warning  comparators,output_stages timing_above_leakage
    claims           warning  comparators    hysteresis divider_ratio level_from_reference filter
    claims           warning  output_stages  stage_delay
    claims           warning  references     reference_current
    claims           warning  biases         bias_current bias_consumption
    evidence         note     rails,references,biases,comparators,output_stages,resets,loads,bypasses,neighbours covers
    description      error    rails          rails
    description      error    loads          loads
    description      error    references     references
    description      error    comparators    comparators
"""


def test_level_and_section_of_every_rule() -> None:
    table = {
        f"{family}/{name}": (level, tuple(sections.split(",")))
        for family, level, sections, *names in map(str.split, TABLE.strip().splitlines())
        for name in names
    }
    rules = [rule for family in FAMILIES for rule in family]
    assert len(rules) == len(table) == 96
    assert {rule.id: (rule.level.value, rule.applies_to) for rule in rules} == table
