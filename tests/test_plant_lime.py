"""Lime: reference doses, what it makes of a stream, warnings."""

from dataclasses import replace

import pytest

from strata.plant.chemistry import density_of, free_gases
from strata.plant.lime import KILN_CARBON_DIOXIDE, add_lime
from strata.plant.operate import operate
from strata.plant.plan import Lime
from strata.plant.streams import CALCITE_DENSITY
from tests.plant_cases import DEEP, SITE, simple_plant


def test_what_goes_in_as_lime_and_water_comes_out_as_calcite_and_water():
    done = add_lime(Lime(dose=60.0, settled=0.7), DEEP, SITE)
    suspended = done.water.solids / 100.087e-3
    formed = done.settled / DEEP.flow + suspended
    assert suspended == pytest.approx(0.3 * formed, rel=1e-12)
    assert done.lime == pytest.approx(60.0 * DEEP.flow)
    assert done.water.of("DIC") + formed == pytest.approx(DEEP.of("DIC"), rel=1e-12)
    assert done.water.of("calcium") + formed == pytest.approx(
        DEEP.of("calcium") + 60, rel=1e-12
    )
    assert done.water.of("alkalinity") + 2 * formed == pytest.approx(
        DEEP.of("alkalinity") + 120.0, rel=1e-12
    )


def test_salinity_changes_by_calcium_and_bicarbonate():
    done = add_lime(Lime(dose=10.0, approach=0.0), DEEP, SITE).water
    # 10 mol of Ca and 20 of HCO3 per m3: 10 x 40.078 + 20 x 61.017 g
    assert done.salinity - DEEP.salinity == pytest.approx(1.62112, rel=1e-5)


def test_suspended_calcite_makes_water_heavier_by_up_to_five_kilograms():
    clear = add_lime(Lime(dose=73.0, settled=1.0), DEEP, SITE).water
    cloudy = add_lime(Lime(dose=73.0, settled=0.0), DEEP, SITE).water
    more = density_of(cloudy, SITE, 2e6) - density_of(clear, SITE, 2e6)
    water = density_of(clear, SITE, 2e6)
    assert more == pytest.approx(cloudy.solids * (1 - water / CALCITE_DENSITY), rel=1e-9)
    assert 4.0 < more < 5.0  # 7 kg/m3 of calcite, less the water that it displaces


def test_a_target_is_met():
    done = add_lime(Lime(target_co2=5.0), DEEP, SITE)
    assert free_gases(done.water, SITE).gases["CO2"] == pytest.approx(5.0, rel=0.05)
    assert add_lime(Lime(target_co2=100.0), DEEP, SITE).lime == 0.0


def test_making_the_lime_gives_off_as_much_co2_as_it_binds_at_most():
    # CaCO3 = CaO + CO2: one mole per mole, IPCC 2006 vol. 3 gives 0.785 t per t of CaO
    assert pytest.approx(1.0, abs=0.001) == KILN_CARBON_DIOXIDE
    run = operate(simple_plant(lime=Lime(dose=50.0)), DEEP, None, SITE)
    assert run.kiln_carbon_dioxide == pytest.approx(50.0 * DEEP.flow, rel=1e-3)


def test_over_dosing_and_scale_are_warned_of():
    over = operate(simple_plant(lime=Lime(dose=90.0)), DEEP, None, SITE)
    assert any("over-dosed" in warning for warning in over.warnings)
    plain = operate(simple_plant(), DEEP, None, SITE)
    assert not any("over-dosed" in warning for warning in plain.warnings)
    hard = replace(DEEP, dissolved={**DEEP.dissolved, "calcium": 8.0})
    assert any(
        "scale" in warning for warning in operate(simple_plant(), hard, None, SITE).warnings
    )
