"""Every setting of the frozen objects can be written in a file, and every key goes somewhere."""

from dataclasses import fields

import pytest

from strata.inputs import schema, units
from strata.inputs.tables import keys
from strata.lake import site
from strata.plant import plan

#: Table, what it fills, and fields that are filled in another way.
PAIRS = [
    (schema.SiteTable, site.Site, {"laws"}),
    (schema.SpringTable, site.Spring, {"dissolved"}),
    (schema.RiverTable, site.River, {"dissolved"}),
    (schema.BedTable, site.BedSource, set()),
    (schema.ClimateTable, site.Climate, set()),
    (schema.SourceTable, site.WaterSource, set()),
    (schema.ConversionTable, site.Conversion, set()),
    (schema.ReactionsTable, site.Reactions, set()),
    (schema.MixingTable, site.Mixing, set()),
    (schema.StageTable, plan.Stage, set()),
    (schema.LimeTable, plan.Lime, set()),
    (schema.WashTable, plan.Wash, set()),
    (schema.ReturnTable, plan.Return, set()),
    (schema.RiserTable, plan.Riser, set()),
    (schema.DeliveryTable, plan.Delivery, set()),
    (schema.IntakeTable, plan.Intake, set()),
    (schema.OutageTable, plan.Outage, set()),
    (
        schema.PlantTable,
        plan.Plant,
        {"stages", "return_water", "return_wash", "further_intakes", "outages", "changes"},
    ),
]


def targets(table):
    """Return the names a table may fill: its keys, and its keys without their units."""
    return {name for key in keys(table) for name in (key, units.split(key)[0])}


@pytest.mark.parametrize(("table", "target", "otherwise"), PAIRS)
def test_every_field_has_a_key(table, target, otherwise):
    missing = {field.name for field in fields(target)} - targets(table) - otherwise
    assert missing == set()


@pytest.mark.parametrize(("table", "target", "otherwise"), PAIRS)
def test_every_key_that_is_a_number_ends_in_a_unit_or_is_a_plain_number(
    table, target, otherwise
):
    plain = {"ports", "pipes", "stages", "towers", "compressor_stages", "share", "k_ij",
             "wind_efficiency", "convection_efficiency", "drag_coefficient", "overshoot",
             "area_factor", "plunge_mixing"}  # fmt: skip
    for key, kind in keys(table).items():
        if "Between" in str(kind) and key not in plain:
            assert units.split(key)[1], key


def test_a_value_arrives_in_si_whatever_its_unit():
    assert units.to_si("pressure_bar", 2.0) == pytest.approx(2e5)
    assert units.to_si("rain_mm_day", 86.4) == pytest.approx(1e-6)
    assert units.to_si("flux_mol_m2_yr", 365.25 * 86400) == pytest.approx(1.0)
    assert units.to_si("co2_molar_volume_cm3_mol", 33) == pytest.approx(33e-6)
    assert units.to_si("ports", 3) == 3


def test_the_longest_unit_that_fits_is_the_unit():
    assert units.split("coefficient_m2_s2") == ("coefficient", "m2_s2")
    assert units.split("least_m2_s") == ("least", "m2_s")
    assert units.split("half_methane_mol_m3") == ("half_methane", "mol_m3")
    assert units.split("exchange_coefficient_W_m2_K") == ("exchange_coefficient", "W_m2_K")
