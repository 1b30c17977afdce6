"""Shipped process data: fit the schema and their own derating formula; own data win over them."""

from __future__ import annotations

import json
from collections.abc import Callable

import pytest
import yaml
from jsonschema import Draft202012Validator

from tidegate.lint.description.load import KITS, schema_text
from tidegate.lint.description.model.process import Process
from tidegate.lint.physics.electromigration import Wear, carried_limit

IHP, GF = "ihp-sg13g2", "gf180mcu"


def test_every_shipped_file_is_a_choice_of_the_schema() -> None:
    choices = json.loads(schema_text("description"))["$defs"]["process"]["properties"]["kit"]["enum"]
    assert sorted(file.stem for file in KITS.glob("*.yaml")) == sorted(choices) == sorted((IHP, GF))


def test_file_alone_fits_the_schema_and_holds_one_section(kit: str) -> None:
    data = yaml.safe_load((KITS / f"{kit}.yaml").read_text("utf-8"))
    assert list(data) == ["process"]
    assert list(Draft202012Validator(json.loads(schema_text("description"))).iter_errors(data)) == []


def test_every_entry_names_its_source(kit: str, process_of: Callable[..., Process]) -> None:
    process = process_of(kit)
    sections = (
        process.layers, process.vias, process.devices, process.resistors, process.capacitors, process.diodes,
    )  # fmt: skip
    assert all(sections)
    assert process.source
    assert [name for section in sections for name, entry in section.items() if not entry.source] == []


def test_mismatch_of_one_device_in_one_kit_and_of_a_pair_in_the_other(process_of: Callable[..., Process]) -> None:
    # sg13g2_moslv_mod_mismatch.lib L87 (one device); sm141064.ngspice L46989-47077 (pair, 0.7071 for each device).
    for kit, of in ((IHP, "single"), (GF, "pair")):
        devices = process_of(kit).devices
        laws = {device.mismatch.of for device in devices.values() if device.mismatch is not None}
        assert laws == {of}


def test_polarity_is_in_the_name(kit: str, process_of: Callable[..., Process]) -> None:
    assert all(name.startswith(f"{device.polarity}_") for name, device in process_of(kit).devices.items())


# (section, name, largest deviation): the table is rounded to two digits, which is up to 4.5 % on its small limits.
DERATED = [
    ("layers", "metal1", 0.01),
    *(("layers", name, 0.05) for name in ("topmetal_6k", "topmetal_9k", "topmetal_11k", "topmetal_30k")),
    *(("vias", name, 0.05) for name in ("contact_poly", "contact_diffusion_n", "contact_diffusion_p", "via1", "via5")),
]


@pytest.mark.parametrize(("section", "name", "tolerance"), DERATED, ids=[name for _, name, _ in DERATED])
@pytest.mark.parametrize("index", [0, 2], ids=["85degC", "125degC"])
def test_formula_of_the_design_manual_gives_its_own_table(
    section: str, name: str, tolerance: float, index: int, process_of: Callable[..., Process]
) -> None:
    """From 110 degC, google/gf180mcu-pdk drm_14_2.rst L35-51, against 54_Electro-migration tables."""
    process = process_of(GF)
    limits = getattr(process, section)[name].limits
    assert process.activation_energy is not None and process.activation_energy.typical is not None
    assert process.current_exponent is not None
    carried = carried_limit(
        limit=limits[1].dc.most,
        wear=Wear(process.activation_energy.typical, process.current_exponent),
        stated_k=limits[1].temperature.typical,
        use_k=limits[index].temperature.typical,
        stated_life_s=limits[1].life.typical,
        use_life_s=limits[index].life.typical,
    )
    assert carried == pytest.approx(limits[index].dc.most, rel=tolerance)


def test_entries_of_the_description_win_over_those_of_the_kit(process_of: Callable[..., Process]) -> None:
    own = (
        "  activation_energy: 0.9 eV\n"
        "  layers:\n"
        "    metal1: {limits: [{temperature: 125 degC, dc: 0.5 mA/um}], source: own}\n"
        "    strap: {source: own}\n"
    )
    process, shipped = process_of(GF, own), process_of(GF)
    assert process.activation_energy is not None and process.activation_energy.typical == 0.9
    assert process.current_exponent == shipped.current_exponent == 2
    metal1 = process.layers["metal1"]
    assert [limit.dc and limit.dc.typical for limit in metal1.limits] == [500.0]
    assert (metal1.sheet, metal1.source) == (None, "own")
    assert set(process.layers) == {*shipped.layers, "strap"}
    assert {name: layer for name, layer in process.layers.items() if name not in {"metal1", "strap"}} == {
        name: layer for name, layer in shipped.layers.items() if name != "metal1"
    }
    assert process.vias == shipped.vias
