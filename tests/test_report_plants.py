"""The diagram of a plant and the figures and tables of its sweeps show what the plant does."""

from dataclasses import replace

import matplotlib
import numpy as np
import pytest
import synthetic
from matplotlib.figure import Figure

from strata import results
from strata.plant.account import Account
from strata.plant.operate import operate
from strata.plant.plan import Intake, Lime, Plan, Return, Riser, Stage, Wash
from strata.report import plant_tables, plot, riser, sweeps
from strata.report.diagram import diagram
from strata.studies.today import study_plant
from tests.plant_cases import DEEP, SHALLOW, SITE, simple_plant

matplotlib.use("Agg")

FULL = replace(
    simple_plant(
        Stage(4e5, gas_to="vent"),
        Stage(2e5, gas_to="wash"),
        Stage(0.8e5),
        Stage(0.5e5, gas_to="return"),
        lime=Lime(dose=30.0, settled=0.9),
        wash=Wash(6e5, 2.0, 80.0, 5, 0.7),
        further_intakes=(Intake(300.0, 0.4),),
        riser=Riser(0.9, 5),
    ),
    return_water=Return(275.0, 100, 0.2),
)
ACCOUNT = Account(FULL, operate(FULL, DEEP, replace(SHALLOW, flow=2.0), SITE), SITE)


@pytest.fixture(scope="module")
def study():
    lake = synthetic.lake(100)
    plan = synthetic.plan("washed")
    stages = (Stage(3e5, gas_to="wash"), Stage(1e5))
    plant = replace(plan.plants[0], stages=stages, wash=Wash(8e5, 3.0, 80.0))
    return study_plant(lake, Plan("washed", (plant,)))


def words(figure):
    figure.canvas.draw()
    return [text.get_text() for ax in figure.axes for text in ax.texts]


def test_every_stream_that_flows_has_its_number_in_the_drawing_and_its_line_in_the_table():
    figure = diagram(ACCOUNT, 400.0, 207.0)
    drawing, table = figure.axes
    numbers = [text.get_text() for text in drawing.texts if text.get_bbox_patch()]
    flowing = [row for row in ACCOUNT.streams() if row.get("flow_mol_s", 1.0) > 0.0]
    assert sorted(map(int, numbers)) == list(range(1, len(flowing) + 1))
    lines = [text.get_text() for text in table.texts]
    for row in flowing:
        assert row["stream"] in lines


def test_a_diagram_names_every_unit_with_its_setting_and_power():
    found = " ".join(words(diagram(ACCOUNT, 400.0)))
    for name in ("riser", "lime", "stage 1", "stage 4", "wash tower", "product", "to the air"):
        assert name in found
    for setting in ("5 pipes", "of 0.9 m", "30 mol/m³", "0.8 bar", "345 m, 60 %", "275 m"):
        assert setting in found
    net = ACCOUNT.operation.power["net"] / 1e6
    assert f"{net:+.2f}".replace("-", "−") in found


def test_pipes_end_at_their_true_depths():
    drawing = diagram(ACCOUNT, 400.0, 207.0).axes[0]
    surface, floor = 25.0, 2.0  # of the section in the drawing
    ends = {float(y) for line in drawing.lines for y in line.get_ydata()}
    for depth in (345.0, 300.0, 275.0, 80.0, 207.0):
        y = surface - (surface - floor) * depth / 400.0
        assert min(abs(end - y) for end in ends) < 1e-9


def test_no_words_in_a_box_reach_beyond_it():
    figure = diagram(ACCOUNT, 400.0)
    figure.canvas.draw()
    drawing = figure.axes[0]
    boxes = [patch.get_window_extent() for patch in drawing.patches if patch.get_width() > 5]
    assert len(boxes) == 8
    for text in drawing.texts:
        extent = text.get_window_extent()
        middle = 0.5 * (extent.x0 + extent.x1), 0.5 * (extent.y0 + extent.y1)
        for box in boxes:
            if box.contains(*middle):
                assert extent.width < 1.12 * box.width, text.get_text()


def test_the_map_of_two_pressures_marks_the_best_pair_and_the_plans(study):
    sweep = study.sweeps["two pressures"]
    _, best, planned = sweeps.pressure_map(
        sweep, "net_energy", Figure().subplots(), planned=[3.0, 1.0]
    )
    x, y = best.get_xdata()[0] * 1e5, best.get_ydata()[0] * 1e5
    pair = {"first_pressure": x, "second_pressure": y}
    value = float(sweep["net_energy"].sel(pair, method="nearest"))
    assert value == float(sweep["net_energy"].max())
    assert (planned.get_xdata()[0], planned.get_ydata()[0]) == (3.0, 1.0)
    assert y < x


def test_a_sweep_of_wash_or_lime_is_drawn_with_the_setting_of_the_plan(study):
    for name, over, planned in (("wash", "wash_ratio", 0.25), ("lime", "dose", 0.0)):
        figure = getattr(sweeps, name)(study.sweeps[name], study.account)
        curve, mark = figure.axes[0].lines
        np.testing.assert_allclose(curve.get_xdata(), study.sweeps[name][over])
        assert mark.get_xdata()[0] == pytest.approx(planned)


def test_both_cases_share_every_axes_of_the_separator_figure(study):
    figure = sweeps.separator(study.sweeps["pressure"])
    assert len(figure.axes) == 6
    for ax in figure.axes:
        curves = [line.get_label() for line in ax.lines if line.get_marker() == "None"]
        assert curves == ["CO2 free", "CO2 bound"]
        assert ax.get_xscale() == "log"
    assert figure.axes[2].get_title("left").startswith("best: free")


def test_tables_of_a_study_hold_the_best_pressure_and_every_sweep(study):
    found = plant_tables.of_study("north", study.account, study.sweeps)
    captions = " ".join(table.caption for table in found)
    for part in ("product, power and air", "streams of water", "streams of gas",
                 "CO2 left free and CO2 bound", "Best pressure", "best pair of pressures",
                 "Wash water", "Lime", "returned water goes"):  # fmt: skip
        assert part in captions
    for table in found:
        assert all(len(row) == len(table.headings) for row in table.rows)
    one = next(table for table in found if table.caption.startswith("One separator"))
    best = study.sweeps["pressure"]["best_pressure"].sel(case="CO2 free", aim="net energy")
    assert f"{float(best) / 1e5:.2f}" in [row[1] for row in one.rows]


def test_a_series_of_a_plant_is_drawn_by_year_with_its_range():
    years = 2030.0 + np.arange(0, 73) / 12.0
    values = np.where(years < 2032.0, np.nan, 10.0 + np.tile([0.0, 2.0, -2.0], 25)[:73])
    middle, mean, low, high = plot.by_year(years, values)
    np.testing.assert_allclose(middle, 2030.5 + np.arange(6))
    assert np.isnan(mean[:2]).all()  # it did not run
    np.testing.assert_allclose(mean[2:], 10.0)
    np.testing.assert_allclose(low[2:], 8.0)
    np.testing.assert_allclose(high[2:], 12.0)
    short = plot.by_year(years[:25], values[:25])
    np.testing.assert_array_equal(short[0], years[:25])


def test_the_depth_at_which_return_water_spreads_is_drawn_with_the_main_gradient():
    lake = synthetic.lake(60)
    record = synthetic.record(lake, years=8.0)
    run = results.dataset(record, lake, synthetic.plan())
    ax = Figure().subplots()
    *_, gradient = plot.trap_depth(run, ax)
    np.testing.assert_array_equal(gradient.get_ydata(), run["gradient_depth"])
    spread = ax.lines[0].get_ydata()
    np.testing.assert_allclose(spread[np.isfinite(spread)], 203.0)  # as the record has it


def test_a_riser_is_drawn_from_its_foot_to_its_top_with_its_first_bubble():
    flow = ACCOUNT.riser()
    pressure, void, velocity = riser.figure(ACCOUNT).axes
    pipe, lake = pressure.lines[:2]
    np.testing.assert_allclose(pipe.get_xdata(), flow.pressure / 1e5)
    assert (lake.get_xdata()[0], lake.get_ydata()[0]) == (flow.foot_pressure / 1e5, 345.0)
    np.testing.assert_allclose(void.lines[0].get_xdata(), flow.void)
    water, gas = velocity.lines[:2]
    assert np.isfinite(water.get_xdata()).all()
    np.testing.assert_array_equal(np.isfinite(gas.get_xdata()), flow.void > 0.0)
    for ax in (pressure, void, velocity):
        assert ax.lines[-1].get_ydata()[0] == flow.bubble_depth
        assert ax.yaxis_inverted()
        assert "[" in ax.get_xlabel()
    (name,) = void.texts
    assert name.get_text() == f"first bubble, {flow.bubble_depth:.0f} m"


def test_the_table_of_a_riser_is_that_of_its_flow_and_its_pump_that_of_the_plant():
    facts, along = riser.tables("full", ACCOUNT)
    found, flow = ACCOUNT.riser_figures(), ACCOUNT.riser()
    shown = {row[0]: row[2] for row in facts.rows}
    assert shown["water asked for"] == f"{DEEP.flow:.2f}"
    assert shown["first bubble at"] == f"{flow.bubble_depth:.1f}"
    assert float(along.rows[0][0]) == 345.0
    assert along.rows[0][-1] == "–"  # no gas at the foot
    assert float(along.rows[1][0]) == pytest.approx(flow.bubble_depth, abs=0.06)
    assert float(along.rows[1][1]) == pytest.approx(found["bubble_pressure_bar"], abs=0.006)
    assert float(along.rows[-1][2]) == pytest.approx(flow.outlet_void, abs=6e-4)


def test_words_of_a_riser_follow_from_its_flow():
    for stage, flow, part in (
        (4e5, DEEP.flow, "does not lift itself: without a pump no water comes up to the 4"),
        (0.5e5, 0.5 * DEEP.flow, "no pump runs"),
    ):
        plant = replace(FULL, stages=(Stage(stage),), wash=None)
        run = operate(plant, replace(DEEP, flow=flow), None, SITE)
        account = Account(plant, run, SITE)
        assert part in riser.words(account)
        assert (account.riser().self_lifted == 0.0) == ("does not lift" in part)
    plain = replace(FULL, riser=None)
    assert riser.tables("plain", Account(plain, ACCOUNT.operation, SITE)) == []
