"""Stream table and yearly figures of a plant."""

import math

import pytest

from strata.plant.account import Account, dew_point
from strata.plant.operate import operate
from strata.plant.plan import Lime, Stage, Wash
from strata.plant.streams import GasStream
from strata.species import VAPOUR
from tests.plant_cases import DEEP, SHALLOW, SITE, simple_plant

PLANT = simple_plant(
    Stage(2.5e5, 0.95, gas_to="wash"),
    Stage(0.6e5, 0.95, gas_to="vent"),
    lime=Lime(dose=20.0, settled=0.9),
    wash=Wash(8e5, 6.0, 60.0),
)
RUN = operate(PLANT, DEEP, SHALLOW, SITE)
ACCOUNT = Account(PLANT, RUN, SITE)


def test_every_stream_is_a_row_in_the_order_of_the_process():
    rows = ACCOUNT.streams()
    assert [row["stream"] for row in rows] == [
        "feed", "limed feed", "gas of stage 1", "gas of stage 2", "wash water",
        "used wash water", "return water", "product", "vent",
    ]  # fmt: skip
    feed, product = rows[0], rows[-2]
    assert feed["CH4_mol_m3"] == 16.0
    assert feed["CO2_mol_m3"] == pytest.approx(130.0 - 57.0, abs=0.5)  # DIC less alkalinity
    assert 5.5 < feed["pH"] < 7.0
    assert sum(v for k, v in product.items() if k.endswith("_share")) == pytest.approx(1.0)
    assert rows[1]["solids_kg_m3"] > 0.0


def test_water_has_the_pressure_of_the_lake_or_of_its_unit_and_gas_its_density():
    rows = {row["stream"]: row for row in ACCOUNT.streams()}
    # 0.86 bar of air and 345 m (190 m) of water of 1000 kg/m3 under 9.78 m/s2
    assert rows["feed"]["pressure_bar"] == pytest.approx(34.6, abs=0.1)
    assert rows["return water"]["pressure_bar"] == pytest.approx(19.4, abs=0.1)
    assert rows["used wash water"]["pressure_bar"] == rows["return water"]["pressure_bar"]
    assert rows["limed feed"]["pressure_bar"] == 2.5
    gas = rows["gas of stage 2"]
    mass = 44.01 * gas["CO2_share"] + 16.04 * gas["CH4_share"] + 28.0 * gas["N2_share"]
    ideal = 0.6e5 * (mass + 18.0 * gas["H2O_share"]) / 1e3 / (8.314 * 298.0)
    assert gas["density_kg_m3"] == pytest.approx(ideal, rel=0.01)


def test_the_figures_of_a_year_are_those_of_the_streams():
    found = ACCOUNT.figures()
    seconds = 365.25 * 86400.0
    assert found["CH4_vented_t_a"] == pytest.approx(
        RUN.vented.of("CH4") * 16.0425e-6 * seconds, rel=1e-9
    )
    # what comes out of the pipe as CO2, burnt, vented or from the kiln, and CH4 at 27.9
    burnt = (RUN.product.of("CH4") + RUN.product.of("CO2")) * 44.0095e-6
    vented = RUN.vented.of("CO2") * 44.0095e-6 + 27.9 * RUN.vented.of("CH4") * 16.0425e-6
    kiln = 20.0 * DEEP.flow * 44.0095e-6
    assert found["CO2_equivalent_t_a"] == pytest.approx(
        (burnt + vented + kiln) * seconds, rel=1e-3
    )
    assert found["lime_t_a"] == pytest.approx(20.0 * 12.0 * 74.093e-6 * seconds, rel=1e-6)
    assert found["net_energy_GWh_a"] == pytest.approx(found["net_power_MW"] * 8.766, rel=1e-9)
    assert found["net_power_MW"] == pytest.approx(
        found["electric_power_MW"] - found["used_power_MW"], rel=1e-9
    )


def test_gas_saturated_at_its_temperature_has_its_dew_point_there():
    # vapour pressure of water at 20 degC is 2339 Pa (IAPWS-95)
    gas = GasStream({"CH4": 1e5 - 2339.0, VAPOUR: 2339.0}, 20.0, 1e5)
    assert dew_point(gas) == pytest.approx(20.0, abs=0.1)  # 0.1 K: the gas is not ideal
    assert math.isnan(dew_point(GasStream({"CH4": 1.0}, 20.0, 1e5)))
    # compression raises it
    assert dew_point(GasStream(gas.flows, 20.0, 8e5)) > 50.0


def test_the_product_is_saturated_with_water_at_the_tower():
    assert dew_point(RUN.product) == pytest.approx(SHALLOW.temperature, abs=0.5)
