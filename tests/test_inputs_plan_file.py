"""A plan becomes frozen plants, or all that is wrong with it is said at once."""

from datetime import date

import pytest

from strata.errors import InputError
from strata.inputs import load_plan
from strata.plant.timetable import plant_on

WASH = """
[plant.wash]
pressure_bar = 4.0
water_flow_m3_s = 1.0
water_depth_m = 20
"""


def refusal(folder, lake=None):
    with pytest.raises(InputError) as caught:
        load_plan(folder.plan, lake)
    return str(caught.value).splitlines()


def test_a_sound_plan_arrives_in_si(folder, sound_lake):
    plan = load_plan(folder.plan, sound_lake)
    (plant,) = plan.plants
    assert (plant.intake_depth, plant.flow, plant.start) == (345, 6, date(2028, 1, 1))
    assert plant.stages[0].pressure == pytest.approx(2e5)
    assert (plant.return_water.depth, plant.return_water.ports) == (275, 100)
    assert plant.availability == 1.0  # the default of the plant
    assert list(plan.texts) == ["plan.toml"]


def test_lime_wash_and_timetable_arrive(folder):
    folder.spoil(
        folder.plan,
        "start = 2028-01-01",
        "start = 2028-01-01\nstop = 2040-06-30\navailability_share = 0.9\nramp_days = 90",
    )
    folder.spoil(folder.plan, "pressure_bar = 2.0", 'pressure_bar = 2.0\ngas_to = "wash"')
    lime = "\n[plant.lime]\ndose_mol_m3 = 50\nsettled_share = 0.9\n"
    folder.plan.write_text(folder.plan.read_text() + WASH + lime)
    (plant,) = load_plan(folder.plan).plants
    assert plant.stop == date(2040, 6, 30)
    assert (plant.availability, plant.ramp_days) == (0.9, 90)
    assert plant.wash is not None
    assert plant.wash.pressure == pytest.approx(4e5)
    assert plant.lime is not None
    assert (plant.lime.dose, plant.lime.settled) == (50, 0.9)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "intake_depth_m = 345",
            "intake_depth_m = 430",
            "plan.toml: plant.north.intake_depth_m is 430; the lake floor is at 400 m",
        ),
        (
            "depth_m = 275",
            "depth_m = 430",
            "plan.toml: plant.north.return.depth_m is 430; the lake floor is at 400 m",
        ),
        (
            "depth_m = 275",
            "depth_m = -5",
            "plan.toml: plant.north.return.depth_m is -5; 0 to 2000 m is allowed (depth counts "
            "down from the lake surface, which is at 0)",
        ),
        (
            "flow_m3_s = 6.0",
            "flow_m3_s = -6.0",
            "plan.toml: plant.north.flow_m3_s is -6; more than 0 and up to 100000 m3/s is allowed",
        ),
        (
            "flow_m3_s = 6.0",
            "flow = 6.0",
            "plan.toml: plant.north.flow has no unit; write flow_m3_s",
        ),
        (
            "start = 2028-01-01",
            "start = 2028-01-01\nstop = 2027-06-30",
            "plan.toml: plant.north.stop is 2027-06-30; a date after start (2028-01-01) is "
            "required",
        ),
        (
            "start = 2028-01-01",
            "start = 2026-01-01",
            "plan.toml: plant.north.start is 2026-01-01; 2027-01-01, the date of the casts, or "
            "later is required",
        ),
        (
            "ports = 100",
            "ports = 1.5",
            "plan.toml: plant.north.return.ports is 1.5; a whole number from 1 to 100000 is "
            "allowed",
        ),
        (
            "ports = 100",
            "ports = 0",
            "plan.toml: plant.north.return.ports is 0; 1 to 100000 is allowed",
        ),
        (
            "pressure_bar = 2.0",
            "pressure_bar = 2.0\napproach_share = 1.2",
            "plan.toml: plant.north.stage.1.approach_share is 1.2; more than 0 and up to 1 is "
            "allowed",
        ),
        (
            "pressure_bar = 2.0",
            "pressure_bar = 0",
            "plan.toml: plant.north.stage.1.pressure_bar is 0; 0.05 to 100 bar is allowed "
            "(pressures are absolute)",
        ),
        (
            "pressure_bar = 2.0",
            'pressure_bar = 2.0\ngas_to = "wash"',
            'plan.toml: plant.north.stage.1.gas_to is "wash"; the plant has no table '
            "[plant.wash]",
        ),
        (
            "[[plant.stage]]\npressure_bar = 2.0\n",
            "",
            "plan.toml: plant.north.stage is missing; a list is required",
        ),
        (
            "[plant.return]",
            WASH + "\n[plant.return]",
            'plan.toml: plant.north.wash gets no gas; set gas_to = "wash" in a stage',
        ),
    ],
)
def test_a_mistake_gets_one_message_with_its_key(folder, sound_lake, old, new, message):
    folder.spoil(folder.plan, old, new)
    assert refusal(folder, sound_lake) == [message]


def test_a_plant_that_drinks_its_layer_dry_is_refused(folder, sound_lake):
    folder.spoil(folder.plan, "flow_m3_s = 6.0", "flow_m3_s = 30000")
    (message,) = refusal(folder, sound_lake)
    assert message.startswith("plan.toml: plant.north.flow_m3_s is 30000; the layer of ")
    assert message.endswith(" m3/s (its water in 30 days)")


def test_all_mistakes_of_a_plan_come_at_once(folder, sound_lake):
    folder.spoil(folder.plan, "flow_m3_s = 6.0", "flow = 6.0")
    folder.spoil(folder.plan, "intake_depth_m = 345", "intake_depth_m = 430")
    folder.spoil(folder.plan, "start = 2028-01-01", "start = 2028-01-01\nstop = 2028-01-01")
    folder.spoil(folder.plan, "ports = 100", "prots = 100")
    assert refusal(folder, sound_lake) == [
        "plan.toml: plant.north.return.prots is not known; the nearest known is ports",
        "plan.toml: plant.north.flow has no unit; write flow_m3_s",
        "plan.toml: plant.north.stop is 2028-01-01; a date after start (2028-01-01) is required",
        "plan.toml: plant.north.intake_depth_m is 430; the lake floor is at 400 m",
    ]


RICH = """
[plant.lime]
target_co2_mol_m3 = 5

[plant.riser]
bore_m = 0.8
pipes = 4
roughness_mm = 0.1

[plant.delivery]
product_pressure_bar = 8
auxiliary_power_kW = 250

[[plant.intake]]
depth_m = 320
share = 0.25

[[plant.outage]]
part = "lime"
start = 2031-01-01
stop = 2031-03-01

[[plant.change]]
start = 2035-01-01
flow_m3_s = 4.0
return.depth_m = 260
stage.1.pressure_bar = 1.5
"""


def test_everything_a_plant_may_have_arrives_in_si(folder, sound_lake):
    folder.plan.write_text(folder.plan.read_text() + RICH)
    (plant,) = load_plan(folder.plan, sound_lake).plants
    assert (plant.lime.dose, plant.lime.target_co2) == (None, 5)
    assert (plant.riser.bore, plant.riser.pipes) == (0.8, 4)
    assert plant.riser.roughness == pytest.approx(1e-4)
    assert plant.delivery.product_pressure == pytest.approx(8e5)
    assert plant.delivery.auxiliary_power == pytest.approx(250e3)
    assert [(i.depth, i.share) for i in plant.intakes] == [(345, 0.75), (320, 0.25)]
    assert (plant.outages[0].part, plant.outages[0].stop) == ("lime", date(2031, 3, 1))


def test_a_dated_change_sets_attributes_of_the_plant_in_si(folder, sound_lake):
    folder.plan.write_text(folder.plan.read_text() + RICH)
    (plant,) = load_plan(folder.plan, sound_lake).plants
    (change,) = plant.changes
    assert change.start == date(2035, 1, 1)
    assert change.values == {
        "flow": 4.0,
        "return_water.depth": 260.0,
        "stages.1.pressure": pytest.approx(1.5e5),
    }
    later = plant_on(plant, date(2036, 1, 1))
    assert (later.flow, later.return_water.depth) == (4, 260)
    assert later.stages[0].pressure == pytest.approx(1.5e5)
    assert plant_on(plant, date(2034, 12, 31)).flow == 6


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "return.depth_m = 260",
            "return.depth_m = 430",
            "plan.toml: plant.north.change.1.return.depth_m is 430; the lake floor is at 400 m",
        ),
        (
            "return.depth_m = 260",
            "return.depth = 260",
            "plan.toml: plant.north.change.1.return.depth has no unit; write depth_m",
        ),
        (
            "stage.1.pressure_bar = 1.5",
            "stage.2.pressure_bar = 1.5",
            "plan.toml: plant.north.change.1.stage.2.pressure_bar is not there; known are 1",
        ),
        (
            "flow_m3_s = 4.0",
            "stop = 2040-01-01",
            "plan.toml: plant.north.change.1.stop cannot be changed on a date",
        ),
        (
            'part = "lime"',
            'part = "stage 2"',
            'plan.toml: plant.north.outage.1.part is "stage 2"; the parts of this plant are plant, '
            "lime, stage 1",
        ),
        (
            "share = 0.25",
            "share = 1.0",
            "plan.toml: plant.north.intake.share adds up to 1; less than 1 leaves some for "
            "intake_depth_m",
        ),
        (
            "target_co2_mol_m3 = 5",
            "target_co2_mol_m3 = 5\ndose_mol_m3 = 50",
            "plan.toml: plant.north.lime.target_co2_mol_m3 stands beside dose_mol_m3; give one of "
            "them",
        ),
        (
            "target_co2_mol_m3 = 5",
            "settled_share = 0.9",
            "plan.toml: plant.north.lime.dose_mol_m3 is missing; give dose_mol_m3 or "
            "target_co2_mol_m3",
        ),
        (
            "pressure_bar = 2.0",
            "pressure_bar = 2.0\nresidence_time_s = 60",
            "plan.toml: plant.north.stage.1.mass_transfer_per_s is missing; it belongs to "
            "residence_time_s",
        ),
    ],
)
def test_a_mistake_in_a_rich_plant_gets_one_message(folder, sound_lake, old, new, message):
    folder.plan.write_text(folder.plan.read_text() + RICH)
    folder.spoil(folder.plan, old, new)
    assert refusal(folder, sound_lake) == [message]


def test_names_of_plants_must_differ(folder):
    text = folder.plan.read_text()
    folder.plan.write_text(text + text[text.index("[[plant]]") :])
    assert refusal(folder) == [
        'plan.toml: plant.2.name is "north", which is taken; names must differ'
    ]


def test_without_a_lake_depths_are_not_held_against_a_floor(folder):
    folder.spoil(folder.plan, "intake_depth_m = 345", "intake_depth_m = 430")
    assert load_plan(folder.plan).plants[0].intake_depth == 430
