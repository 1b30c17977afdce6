"""Facts that cannot all be true. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import RAIL, UV, Bad

CONTRADICTIONS: Final = (
    Bad(
        "an always-on domain that is switched",
        UV + "}\ndomains:\n  aon: {rail: avdd, kind: always_on, switched_by: uv}\n",
        "main.yaml:7:51: domains.aon.switched_by: an always-on domain that uv switches; write kind: switched, "
        "or leave switched_by out",
    ),
    Bad(
        "points that go back in time",
        RAIL + "scenarios:\n  s:\n    waveforms:\n      - rail: avdd\n        points: "
        "[{at: 1 ms, level: 0 V}, {at: 0 s, level: 1.8 V}]\n",
        "main.yaml:8:47: scenarios.s.waveforms[0].points[1].at: goes back in time (0 s after 1 ms); write the "
        "points in the order of their times",
    ),
    Bad(
        "a point with an open range",
        RAIL
        + "scenarios:\n  s:\n    waveforms:\n      - rail: avdd\n        points: [{at: {min: 1 ms}, level: 0 V}]\n",
        "main.yaml:8:23: scenarios.s.waveforms[0].points[0].at: one end of a range; a point has one time: write "
        "it without min and max",
    ),
    Bad(
        "a rail with two waveforms in one scenario",
        RAIL + "scenarios:\n  s:\n    waveforms:\n"
        "      - {rail: avdd, points: [{at: 0 s, level: 0 V}]}\n"
        "      - {rail: avdd, points: [{at: 0 s, level: 1 V}]}\n",
        "main.yaml:8:16: scenarios.s.waveforms[1].rail: a second waveform of avdd in one scenario; join them, "
        "or make it a scenario",
    ),
    Bad(
        "a detector that is sampled in a mode and decides at any time",
        UV + "sampling: none}\nmodes: {sleep: {sampled: [uv]}}\n",
        "main.yaml:6:27: modes.sleep.sampled[0]: uv decides at any time (sampling: none), and only now and then "
        "here; give its sampling period, or leave it out here",
    ),
    Bad(
        "a pair of an element with itself",
        UV + "}\nneighbours:\n  pair: {kind: capacitance, aggressor: uv, victim: uv}\n",
        "main.yaml:7:52: neighbours.pair.victim: aggressor and victim are one element (uv); name two elements, "
        "or leave the pair out",
    ),
    Bad(
        "a hysteresis that is none and has an amount",
        UV + "hysteresis: none, codes: {c0: {rising: 1 V}}, ships_with: c1}\n",
        "main.yaml:5:102: comparators.uv.ships_with: no code is called 'c1'; there is c0",
    ),
    Bad(
        "two edges of the junction temperature that are one",
        "conditions: {junction_temperature: {min: 125 degC, max: -40 degC}}\n" + RAIL,
        "main.yaml:1:36: conditions.junction_temperature: min 125 degC, max -40 degC are out of order; min <= "
        "typ <= max is due",
    ),
    Bad(
        "a nominal level that is a range out of order",
        "rails:\n  avdd: {nominal: {min: 1.9 V, max: 1.7 V}}\n",
        "main.yaml:2:19: rails.avdd.nominal: min 1.9 V, max 1.7 V are out of order; min <= typ <= max is due",
    ),
    Bad(
        "a load that needs one rail twice",
        RAIL + "loads:\n  core: {needs: [{rail: avdd}, {rail: avdd, works: {min: 1 V}}]}\n",
        "main.yaml:5:39: loads.core.needs[1].rail: a second need of avdd; keep one of them",
    ),
    Bad(
        "two limits of a layer for one temperature and life",
        RAIL + "process:\n  layers:\n    metal1: {limits: "
        "[{temperature: 110 degC, life: 10 yr, dc: 1 mA/um}, {temperature: 383.15 K, life: 10 yr, dc: 2 mA/um}]}\n",
        "main.yaml:6:74: process.layers.metal1.limits[1]: a second entry for one temperature and life; keep one "
        "of them",
    ),
)
