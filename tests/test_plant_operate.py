"""The whole plant: books, routes, power, outlets."""

from dataclasses import replace

import pytest
from hypothesis import assume, settings
from hypothesis import given as drawn
from hypothesis import strategies as st

from strata.errors import ComputationError, OutOfRangeError
from strata.gas import bubble_point
from strata.plant import operate as plant_module
from strata.plant.chemistry import density_of, free_gases, gas_load, gas_pressure
from strata.plant.operate import lift_of, operate, outlets
from strata.plant.plan import Delivery, Lime, Return, Riser, Stage, Wash
from strata.plant.streams import ELEMENTS, WaterStream, element_flows, imbalance, joined_water
from strata.water import density
from tests.plant_cases import DEEP, SHALLOW, SITE, simple_plant

FULL = simple_plant(
    Stage(2.5e5, 0.95, gas_to="wash"),
    Stage(0.8e5, 0.9, gas_to="wash", carry_under=0.05),
    Stage(0.3e5, 0.9, gas_to="vent"),
    lime=Lime(dose=30.0, settled=0.8),
    wash=Wash(8e5, 6.0, 60.0, 5, 0.8, 2),
    return_wash=Return(80.0, temperature_change=0.5),
)


def test_every_element_balances_over_the_full_train():
    run = operate(FULL, DEEP, SHALLOW, SITE)
    assert set(run.balance) == set(ELEMENTS)
    # the limit of the program is 1e-10; sums of a dozen terms stay far below
    assert max(abs(error) for error in run.balance.values()) < 1e-13
    entering = element_flows([DEEP, SHALLOW], lime=run.lime)
    leaving = element_flows(
        [run.returned, run.wash_returned], [run.product, run.vented], run.solids
    )
    assert max(map(abs, imbalance(entering, leaving).values())) < 1e-13


@settings(max_examples=25, deadline=None)
@drawn(
    first=st.floats(0.5e5, 8e5),
    second=st.floats(0.05e5, 0.5e5),
    approach=st.floats(0.1, 1.0),
    dose=st.floats(0.0, 80.0),
    settled=st.floats(0.0, 1.0),
    ways=st.tuples(*[st.sampled_from(["product", "wash", "vent", "return"])] * 2),
)
def test_every_element_balances_whatever_the_plant(
    first, second, approach, dose, settled, ways
):
    plant = simple_plant(
        Stage(first, approach, ways[0]),
        Stage(second, approach, ways[1], carry_under=0.02),
        lime=Lime(dose=dose, settled=settled),
        wash=Wash(8e5, 6.0, 60.0),
    )
    try:
        run = operate(plant, DEEP, SHALLOW, SITE)
    except ComputationError:
        assume(False)  # the wash takes up all of a little gas
    assert max(abs(error) for error in run.balance.values()) < 1e-12
    assert run.returned.flow == DEEP.flow


def test_books_that_do_not_close_stop_the_plant(monkeypatch):
    honest = plant_module.run_train

    def leaking(*args):
        water, gases = honest(*args)
        return water.changed(CH4=water.of("CH4") * (1 + 1e-6)), gases

    monkeypatch.setattr(plant_module, "run_train", leaking)
    with pytest.raises(ComputationError, match="plant north: CH4 in and out differ"):
        operate(simple_plant(), DEEP, None, SITE)


def test_gas_goes_where_its_stage_sends_it():
    to_product = operate(simple_plant(Stage(2e5), Stage(1e5)), DEEP, None, SITE)
    to_vent = operate(simple_plant(Stage(2e5), Stage(1e5, gas_to="vent")), DEEP, None, SITE)
    assert to_vent.vented.of("CH4") == pytest.approx(
        to_product.product.of("CH4") - to_vent.product.of("CH4"), rel=1e-12
    )
    back = operate(simple_plant(Stage(2e5), Stage(1e5, gas_to="return")), DEEP, None, SITE)
    assert back.vented.total == 0.0
    assert back.returned.of("CH4") == pytest.approx(
        to_vent.returned.of("CH4") + to_vent.vented.of("CH4") / DEEP.flow, rel=1e-12
    )
    # it costs its compression to the pressure at the return, 190 m down
    assert back.power["compression"] > 0.0
    assert not back.warnings


def test_gas_put_back_too_high_up_is_warned_of():
    plant = replace(simple_plant(Stage(0.5e5, gas_to="return")), return_water=Return(30.0))
    assert any(
        "does not stay dissolved" in w for w in operate(plant, DEEP, None, SITE).warnings
    )


def test_the_gas_pressure_of_a_stream_is_its_bubble_point():
    gases = free_gases(DEEP, SITE, 2e6).gases
    expected = bubble_point(DEEP.temperature, DEEP.salinity, gases).pressure
    assert gas_pressure(DEEP, SITE, 2e6) == pytest.approx(float(expected), rel=1e-12)


def test_gas_of_a_vacuum_stage_is_brought_to_the_air_and_paid_for():
    run = operate(simple_plant(Stage(0.2e5)), DEEP, None, SITE)
    assert run.product.pressure == SITE.air_pressure
    assert run.power["vacuum"] > 0.0
    assert run.power["compression"] == pytest.approx(0.0, abs=1e-6)
    high = operate(
        simple_plant(Stage(0.2e5), delivery=Delivery(product_pressure=8e5)), DEEP, None, SITE
    )
    assert high.product.pressure == 8e5
    assert high.power["vacuum"] == pytest.approx(run.power["vacuum"], rel=1e-9)
    assert high.power["compression"] > 0.0


def test_net_power_is_what_is_made_less_what_is_used():
    run = operate(FULL, DEEP, SHALLOW, SITE)
    used = sum(v for name, v in run.power.items() if name not in ("electric", "net"))
    assert run.power["net"] == pytest.approx(run.power["electric"] - used, rel=1e-12)
    methane = run.product.of("CH4") * 802_584.0 + run.product.of("H2S") * 518_010.0
    assert run.power["electric"] == pytest.approx(0.40 * methane, rel=1e-12)


def test_a_riser_takes_over_the_pumping():
    plain = operate(simple_plant(), DEEP, None, SITE)
    lifted = operate(simple_plant(riser=Riser(0.8, 8)), DEEP, None, SITE)
    narrow = operate(simple_plant(riser=Riser(0.5, 8)), DEEP, None, SITE)
    assert lifted.power["pump"] < plain.power["pump"] < narrow.power["pump"]
    with_pump = lift_of(simple_plant(riser=Riser(0.5, 8)), DEEP, SITE)
    assert with_pump.flow == DEEP.flow
    # a pump of 75 %, and nothing else is pumped: the last stage is above the air
    assert narrow.power["pump"] == pytest.approx(
        with_pump.pump_pressure * 12.0 / 0.75, rel=1e-3
    )
    alone = lift_of(simple_plant(Stage(1e5), riser=Riser(0.8, 8)), DEEP, SITE, demanded=False)
    assert alone.flow == alone.self_lifted > 0.0
    assert 0.0 < alone.bubble_depth < 345.0


def test_the_temperature_change_of_a_return_is_added():
    base = operate(simple_plant(), DEEP, None, SITE).returned.temperature
    plant = replace(simple_plant(), return_water=Return(190.0, temperature_change=1.0))
    warmer = operate(plant, DEEP, None, SITE).returned
    assert warmer.temperature == pytest.approx(base + 1.0, abs=1e-12)
    # one kelvin is about 0.26 kg/m3 near 25 degC (thermal expansion of water, 2.6e-4 per K)
    cooler = replace(warmer, temperature=base)
    change = density_of(cooler, SITE, 2e6) - density_of(warmer, SITE, 2e6)
    assert change == pytest.approx(0.26, abs=0.015)


def test_outlets_mix_wash_water_into_the_return_where_it_has_no_outlet_of_its_own():
    run = operate(FULL, DEEP, SHALLOW, SITE)
    assert [place.depth for place, _ in outlets(FULL, run)] == [190.0, 80.0]
    shared = replace(FULL, return_wash=None)
    run = operate(shared, DEEP, SHALLOW, SITE)
    ((place, water),) = outlets(shared, run)
    assert place.depth == 190.0
    assert water.flow == DEEP.flow + SHALLOW.flow
    assert water.of("CH4") * water.flow == pytest.approx(
        run.returned.of("CH4") * 12.0 + run.wash_returned.of("CH4") * 6.0, rel=1e-12
    )


def test_the_density_of_a_stream_is_that_of_its_water_and_gases():
    gases = free_gases(DEEP, SITE, 2e6).gases
    from strata.water.density import in_situ_temperature

    t = in_situ_temperature(DEEP.temperature, 2e6)
    expected = float(density(t, DEEP.salinity, 2e6, dict(gases)))
    assert density_of(DEEP, SITE, 2e6) == pytest.approx(expected, abs=1e-9)
    mass, volume = gas_load(DEEP, SITE, 2e6)
    assert mass == pytest.approx(gases["CO2"] * 44.0095e-3, rel=0.1)  # nearly all of it is CO2
    assert 0.0 < volume < 0.01


def test_streams_mix_in_proportion_to_their_volume():
    both = joined_water([DEEP, SHALLOW])
    assert both.flow == 18.0
    assert both.salinity == pytest.approx((12 * 4.6 + 6 * 1.2) / 18, rel=1e-12)
    assert both.of("phosphate") == pytest.approx((12 * 0.08 + 6 * 0.001) / 18, rel=1e-12)
    assert joined_water([DEEP]) is DEEP


def test_a_stage_below_the_vapour_pressure_is_refused_by_name():
    with pytest.raises(OutOfRangeError, match="plant north, stage 2: pressure is 2000 Pa"):
        operate(simple_plant(Stage(2e5), Stage(2e3)), DEEP, None, SITE)


def test_water_without_gas_passes_unchanged():
    feed = WaterStream(5.0, 20.0, 1.0, {"DIC": 5.0, "alkalinity": 5.2, "CH4": 0.0})
    run = operate(simple_plant(Stage(2e5)), feed, None, SITE)
    assert run.product.total == 0.0
    assert run.recovery == 0.0
    assert run.returned.of("DIC") == 5.0
    assert run.returned.temperature == 20.0
